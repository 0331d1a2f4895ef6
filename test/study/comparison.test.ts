/** `--bound compare`: every rule beside the one that answers, on lines; and which rules serve a grid. */
import {describe, expect, test} from "vitest";
import {ModelError} from "../../lib/errors.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {comparisonOf} from "../../lib/study/comparison.ts";
import {studyGrid} from "../../lib/study/grid-study.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const NAMES = ["discrepancy", "cross-validation", "corner", "balance"];
const NOISE = 2e-7;
const chainage = evenly(0, 300, 101);

const ridge = (id = "R1", seed = 5): SurveyLine =>
  syntheticLine({
    id,
    chainage,
    clearance: 15,
    values: withNoise(
      chainage.map((x) => 1e-5 * harmonicMeasure(x, 15, 120, 180)),
      NOISE,
      seed,
    ),
    noise: NOISE,
  });
const STRIPS = [
  {name: "ridge", from: 120, to: 180, group: undefined},
  {name: "beside", from: 200, to: 240, group: undefined},
];
const compare = boundRuleNamed("compare", 1e-5);

describe("a comparison of rules", () => {
  test("answers by the discrepancy rule, and sets beside it what each rule would answer by itself", () => {
    const settings = plainSettings({strips: STRIPS, bound: compare});
    const study = studyLine(ridge(), settings);
    const plain = studyLine(ridge(), {...settings, bound: boundRuleNamed("discrepancy", 1e-5)});
    const {comparison, ...rest} = study;
    expect(rest).toEqual(plain);
    expect(comparison!.map(({rule}) => rule)).toEqual(NAMES);
    for (const {rule, reason, figures} of comparison!) {
      const alone = studyLine(ridge(), {...settings, bound: boundRuleNamed(rule, 1e-5)});
      expect(reason).toBe(alone.choice.reason);
      expect(figures).toMatchObject({
        multiplier: alone.choice.multiplier,
        bound: alone.choice.bound,
        norm: alone.estimate.norm,
        misfit: alone.estimate.misfit,
        degreesOfFreedom: alone.estimate.degreesOfFreedom,
        strips: alone.strips.map(({strip, plainMean}) => ({strip, plainMean})),
      });
      // The bound of the intervals decides which modes they keep, 1e-5 of their width at most.
      absoluteClose(figures!.resolution / alone.resolution.length, 1, 1e-4, "modes that the bound lets go");
    }
    expect(new Set(comparison!.map(({figures}) => figures!.multiplier)).size).toBe(4);
  });

  test("is in none of the studies that did not ask for it", () => {
    expect("comparison" in studyLine(ridge(), plainSettings())).toBe(false);
  });

  test("tells why a rule gives nothing, and goes on", () => {
    const fails = {
      name: "fails",
      text: "fails",
      choose: (): never => {
        throw new ModelError("bound/no-corner", "no corner here");
      },
    };
    const study = studyLine(ridge(), plainSettings({bound: {...compare, compared: [fails, ...compare.compared!]}}));
    expect(study.comparison![0]).toEqual({rule: "fails", reason: "no corner here"});
    expect(study.comparison!.slice(1).every(({figures}) => figures !== undefined)).toBe(true);
    const broken = {
      ...fails,
      choose: (): never => {
        throw new TypeError("a defect");
      },
    };
    expect(() => comparisonOf([broken], undefined as never, undefined as never)).toThrowError(TypeError);
  });
});

describe("over a grid", () => {
  const survey: Survey = {
    kind: "grid",
    files: ["made-up"],
    axes: [{group: "G1", azimuth: 90, origin: [0, 0], system: "made up", lines: 3}],
    choices: [],
    delivered: undefined,
    notices: [],
    lineCount: 3,
    grid: {width: 101, height: 3, orientation: "rows", step: 3, spacing: 3},
    async *lines() {
      for (const seed of [1, 2, 3]) {
        const line = ridge(`row-${seed}`, seed);
        yield {line: {...line, stations: {...line.stations, row: Float64Array.from(chainage, (_, i) => i + 1)}}};
      }
    },
  };
  const rowsBy = async (rule: string) => {
    const outcomes = [];
    for await (const outcome of studyGrid(survey, plainSettings({bound: boundRuleNamed(rule, 1e-5), regional: -1})))
      outcomes.push(outcome);
    return outcomes.map((outcome) => {
      if (!("study" in outcome)) throw outcome.failure;
      return outcome.study;
    });
  };

  test.each(["corner", "balance"])("%s takes one multiplier for all rows, near that of each alone", async (rule) => {
    const rows = await rowsBy(rule);
    const [{choice}] = rows;
    expect([choice.rule, choice.basis]).toEqual([rule, "assumed-bound"]);
    for (const row of rows) expect(row.choice).toBe(choice);
    const alone = [1, 2, 3].map(
      (seed) =>
        studyLine(ridge("row", seed), plainSettings({bound: boundRuleNamed(rule, 1e-5), regional: -1})).choice
          .multiplier,
    );
    // Each is a noisy choice of the same quantity: pooled it lies where they lie, give or take a factor of three.
    expect(choice.multiplier).toBeGreaterThan(Math.min(...alone) / 3);
    expect(choice.multiplier).toBeLessThan(Math.max(...alone) * 3);
  });

  test.each([
    ["cross-validation", "bound/readings-not-kept"],
    ["compare", "bound/compare-grid"],
  ])("%s is refused with what to use instead", async (rule, code) => {
    await expect(rowsBy(rule)).rejects.toMatchObject({
      code,
      exitStatus: 2,
      message: expect.stringMatching(/--bound discrepancy, corner or balance/),
    });
  });
});
