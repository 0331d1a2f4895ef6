/** A resolution finer than the stations stand apart is not shown without a doubt. */
import {expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {isDoubtful} from "../../lib/notice.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const HEIGHT = 10;
const study = (spacing: number) => {
  const chainage = evenly(0, 400, 400 / spacing + 1);
  const clean = chainage.map((x) => 5e-6 * harmonicMeasure(x, HEIGHT, 100, 150));
  const line = syntheticLine({chainage, clearance: HEIGHT, values: withNoise(clean, 2e-9, 3), noise: 2e-9});
  return studyLine(line, plainSettings({bound: boundRuleNamed("rms:1", 1e-5), boundary: {kind: "depth", depth: 0}}));
};
const CODE = "resolution/finer-than-spacing";

test("stations two heights apart, with a bound that claims more: a doubt with both lengths, and the line is done", () => {
  const {notices, resolution} = study(20);
  expect(resolution.length).toBeLessThan(20);
  const found = notices.find(({code}) => code === CODE)!;
  expect(found.weight).toBe("doubt");
  expect(found.message).toContain(
    `The resolution, ${resolution.length.toPrecision(3)} m, is finer than the spacing of the stations, 20.0 m`,
  );
  expect(isDoubtful([found])).toBe(false);
});

test("stations nearer than what is resolved: none", () => {
  const {notices, resolution} = study(2);
  expect(resolution.length).toBeGreaterThan(2);
  expect(notices.map(({code}) => code)).not.toContain(CODE);
});
