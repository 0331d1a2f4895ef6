/** Intervals made wide by the regional: said, and the figures are those of the run with and without one. */
import {expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import {evenly, type PlainSettings, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

/** 0.02 mGal, and z for 95 %. */
const NOISE = 2e-7;
const Z = 1.959964;
const HEIGHT = 10;
const chainage = evenly(0, 200, 101);
const clean = chainage.map((x) => 5e-6 * harmonicMeasure(x, HEIGHT, 80, 110));
const line = syntheticLine({chainage, clearance: HEIGHT, values: withNoise(clean, NOISE, 3), noise: NOISE});
const study = (own: PlainSettings): LineStudy =>
  studyLine(
    line,
    plainSettings({
      bound: boundRuleNamed("norm:6", 1e-5),
      levels: [2, HEIGHT].map((height) => ({kind: "above-boundary", height}) as const),
      ...own,
    }),
  );
const told = ({notices}: LineStudy) => notices.filter(({code}) => code === "regional/widens");
const halves = ({levels}: LineStudy): number[] =>
  Array.from(levels[1]!.upper, (u, i) => (u - levels[1]!.lower[i]!) / 2);

test("sources anywhere under a short line: the widths with a regional and without, and the levels so high", () => {
  const wide = study({});
  const [{message, weight}] = told(wide) as unknown as [{message: string; weight: string}];
  expect(weight).toBe("remark");
  const [, withOne, without, level] =
    /half of one is ([\d.]+) mGal .* it is ([\d.]+) mGal at most.*Likewise ([\d.]+) mGal on level 10\./.exec(message)!;
  const sorted = halves(wide).sort((a, b) => a - b);
  expect(Number(level)).toBe(Number((1e5 * sorted[50]!).toPrecision(3)));
  // Nine stations of 101 stand for all.
  expect(Number(withOne) / Number(level)).toBeGreaterThan(0.9);
  expect(Number(withOne) / Number(level)).toBeLessThan(1.1);
  expect(Number(without)).toBe(Number((1e5 * Z * NOISE).toPrecision(3)));
  const free = study({regional: -1});
  expect(told(free)).toEqual([]);
  for (const half of halves(free)) expect(half).toBeLessThanOrEqual(Z * NOISE * (1 + 1e-6));
  expect(sorted[0]).toBeGreaterThan(2 * Z * NOISE);
});

test("a support that leaves the regional its stations: nothing to tell", () => {
  const narrow = study({support: [{from: 75, to: 115, group: undefined}]});
  expect(told(narrow)).toEqual([]);
});
