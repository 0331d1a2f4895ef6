/** The walk of one line: what must not change its answers, and what it says when no source will do. */
import {describe, expect, test} from "vitest";
import {totalLength} from "../../lib/geometry/interval.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, type PlainSettings, plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const NOISE = 2e-8;
const SOURCE = {from: 180, to: 220, strength: 5e-6};
const level = (height: number) => ({kind: "above-boundary", height}) as const;
const strip = (name: string, from: number, to: number) => ({name, from, to, group: undefined});

const chainage = evenly(0, 400, 101);
const clearance = chainage.map((x) => 12 + 2 * Math.sin(x / 29));
const noise = normalDeviates(seededRandom(5), 101);
/** 0.5 mGal on 180:220, 12 m up, and noise of 2 µGal. */
const values = chainage.map(
  (x, i) => SOURCE.strength * harmonicMeasure(x, clearance[i], SOURCE.from, SOURCE.to) + NOISE * noise[i],
);
const line = (own: Partial<Parameters<typeof syntheticLine>[0]> = {}): SurveyLine =>
  syntheticLine({chainage, clearance, values, noise: NOISE, ...own});

const WANTED: PlainSettings = {
  levels: [level(0), level(6), level(40)],
  strips: [strip("dyke", 180, 220), strip("beside", 230, 290), strip("over the end", 390, 500)],
};

/** Every answer of a study in one list, in the order of increasing chainage of the panels and of the file. */
function answers(study: LineStudy, mirrored = false): number[] {
  const turned = (list: Float64Array): number[] => (mirrored ? [...list].reverse() : [...list]);
  const {averages, estimate} = study;
  return [
    ...turned(estimate.density),
    ...[averages.value, averages.lower, averages.upper].flatMap(turned),
    ...study.levels.flatMap(({value, lower, upper}) => [...value, ...lower, ...upper]),
    ...study.strips.flatMap(({mean, lower, upper, plainMean}) => [mean, lower, upper, plainMean]),
    ...estimate.channels.flatMap(({residual}) => [...residual]),
  ];
}

function expectSame(got: readonly number[], want: readonly number[], tolerance: number, because: string): void {
  expect(got.length).toBe(want.length);
  got.forEach((value, i) => {
    absoluteClose(value / SOURCE.strength, want[i] / SOURCE.strength, tolerance, because);
  });
}

describe.each([
  ["discrepancy", undefined],
  ["a given bound", boundRuleNamed("rms:0.2", 1e-5)],
] as const)("by %s, no answer changes beyond rounding", (_, bound) => {
  const settings = plainSettings({...WANTED, ...(bound === undefined ? {} : {bound})});
  const study = studyLine(line(), settings);
  const base = answers(study);
  // Multipliers are found to 1e-10, over modes down to 1e-13 of the largest.
  const TOLERANCE = 1e-7;

  test("when a straight line is added to the readings", () => {
    // 200 times the anomaly.
    const lifted = values.map((v, i) => v + 1e-3 - 2e-7 * chainage[i]);
    expectSame(answers(studyLine(line({values: lifted}), settings)), base, TOLERANCE, "200 ε over the noise");
  });

  test("when the line is mirrored, but left and right", () => {
    const mirrored = plainSettings({
      ...WANTED,
      ...(bound === undefined ? {} : {bound}),
      strips: WANTED.strips!.map(({name, from, to}) => strip(name, -to, -from)),
    });
    const other = studyLine(line({chainage: chainage.map((x) => -x)}), mirrored);
    expectSame(answers(other, true), base, TOLERANCE, "rounding");
  });

  test("when the file lists the stations backwards", () => {
    const backwards = studyLine(
      line({
        chainage: chainage.slice().reverse(),
        clearance: clearance.slice().reverse(),
        values: values.slice().reverse(),
      }),
      settings,
    );
    expectSame([...backwards.estimate.density], [...study.estimate.density], TOLERANCE, "rounding");
    backwards.levels.forEach(({value, lower, upper}, k) => {
      const want = study.levels[k];
      expectSame([...value].reverse(), [...want.value], TOLERANCE, "rounding");
      expectSame([...lower].reverse(), [...want.lower], TOLERANCE, "rounding");
      expectSame([...upper].reverse(), [...want.upper], TOLERANCE, "rounding");
    });
  });

  test("when chainage counts from elsewhere", () => {
    const by = 432_100;
    const moved = plainSettings({
      ...WANTED,
      ...(bound === undefined ? {} : {bound}),
      strips: WANTED.strips!.map(({name, from, to}) => strip(name, from + by, to + by)),
    });
    const other = studyLine(line({chainage: chainage.map((x) => x + by)}), moved);
    expectSame(answers(other), base, TOLERANCE, "432,100 ε is 1e-10 m");
  });

  test("but by the factor of readings, noise and bound", () => {
    const twice = plainSettings({
      ...WANTED,
      ...(bound === undefined ? {} : {bound: boundRuleNamed("rms:0.4", 1e-5)}),
    });
    const other = studyLine(line({values: values.map((v) => 2 * v), noise: 2 * NOISE}), twice);
    expectSame(
      answers(other),
      base.map((value) => 2 * value),
      TOLERANCE,
      "all is linear",
    );
  });
});

describe("answers", () => {
  const settings = plainSettings({...WANTED, bound: boundRuleNamed("rms:0.2", 1e-5)});
  const study = studyLine(line(), settings);

  test("hold the truth that was put in", () => {
    const [dyke, beside, end] = study.strips;
    expect(dyke.lower).toBeLessThan(SOURCE.strength);
    expect(dyke.upper).toBeGreaterThan(SOURCE.strength);
    expect(beside.lower).toBeLessThan(0);
    expect(beside.upper).toBeGreaterThan(0);
    expect(end.lower).toBeLessThan(0);
    expect(end.upper).toBeGreaterThan(0);
    for (const {height, lower, upper} of study.levels.slice(1))
      chainage.forEach((x, i) => {
        const truth = SOURCE.strength * harmonicMeasure(x, height[i], SOURCE.from, SOURCE.to);
        expect(lower[i]).toBeLessThan(truth);
        expect(upper[i]).toBeGreaterThan(truth);
      });
    expect(study.choice.basis).toBe("given-bound");
  });

  test("stand on half-widths that no panel moves: half a per cent at most", () => {
    const finer = studyLine(line(), {...settings, model: {...settings.model, panel: study.panels.width[0] / 2}});
    expect(finer.panels.count).toBe(2 * study.panels.count);
    // In the continuum strips and levels know no panels at all.
    finer.strips.forEach(({lower, upper}, k) => {
      absoluteClose((upper - lower) / (study.strips[k].upper - study.strips[k].lower), 1, 1e-12, "no panels in it");
    });
    finer.levels.slice(1).forEach(({lower, upper}, k) => {
      const want = study.levels[k + 1];
      for (let i = 0; i < 101; ++i)
        absoluteClose((upper[i] - lower[i]) / (want.upper[i] - want.lower[i]), 1, 1e-12, "no panels in it");
    });
    // Averages are taken over the resolution of the estimate, which panels reach through the multiplier; within two
    // heights of the line's ends it grows so fast that the little they move it counts.
    const [fine, plain] = [finer.levels[0], study.levels[0]];
    for (let i = 0; i < 101; ++i)
      absoluteClose(
        (fine.upper[i] - fine.lower[i]) / (plain.upper[i] - plain.lower[i]),
        1,
        i >= 6 && i <= 94 ? 0.005 : 0.03,
        "the promise; measured 0.002, and 0.026 at the ends",
      );
  });

  test("average over no less than the resolution, inside the support", () => {
    const {averages, resolution, panels} = study;
    expect(resolution.length).toBeGreaterThan(0);
    averages.averagedOver.forEach((length, j) => {
      // Off the line nothing is resolved, and the average is over all of the support.
      const all = totalLength([panels.components[0].interval]);
      const least = Math.min(all, Math.max(resolution.length, resolution.local[j]));
      absoluteClose(length / least, 1, 1e-9, "rounding");
      expect(averages.lower[j]).toBeLessThan(averages.value[j]);
      expect(averages.upper[j]).toBeGreaterThan(averages.value[j]);
    });
  });

  test("default to the line and five median heights either side, in panels of a quarter of the least height", () => {
    const heights = clearance.slice().sort();
    const {interval} = study.panels.components[0];
    absoluteClose(interval.from, -5 * heights[50], 1e-9, "rounding");
    absoluteClose(interval.to, 400 + 5 * heights[50], 1e-9, "rounding");
    expect(study.panels.width[0]).toBeLessThanOrEqual(heights[0] / 4);
    expect(study.panels.width[0]).toBeGreaterThan((heights[0] / 4) * 0.98);
  });

  test("of a strip off the support are zero, with a doubt", () => {
    const off = studyLine(line(), plainSettings({strips: [strip("far", 600, 700)]}));
    expect([off.strips[0].mean, off.strips[0].lower, off.strips[0].upper]).toEqual([0, 0, 0]);
    expect(off.notices).toContainEqual(expect.objectContaining({code: "strip/off-support", weight: "doubt"}));
  });
});

describe("feasibility", () => {
  const codes = (study: LineStudy): string[] => study.notices.map(({code}) => code);
  const FEASIBILITY = ["bound/tight", "support/fits-poorly"];
  const withBound = (norm: number, own: PlainSettings = {}): Settings =>
    plainSettings({bound: boundRuleNamed(`norm:${norm}`, 1), ...own});
  const messageOf = (run: () => LineStudy): {code: string; exitStatus: number; message: string} => {
    try {
      const {notices} = run();
      const found = notices.find(({code}) => FEASIBILITY.includes(code));
      return {code: found?.code ?? "", exitStatus: 0, message: found?.message ?? ""};
    } catch (error) {
      return error as {code: string; exitStatus: number; message: string};
    }
  };
  const factorIn = (message: string, pattern: RegExp): number => Number(pattern.exec(message)?.[1] ?? Number.NaN);
  const NOISE_FACTOR = /the noise ([\d.]+) times larger/;
  const BOUND_FACTOR = /the bound ([\d.]+) times larger/;
  const SUPPORT_METRES = /the support ([\d.]+) m wider/;
  /** The norm of the estimate that the noise explains. */
  const enough = studyLine(line(), plainSettings()).estimate.norm;

  test.each([
    {share: 0.993, code: "bound/tight", exitStatus: 0},
    {share: 0.96, code: "bound/infeasible", exitStatus: 3},
  ])("a bound $share of what the readings need: $code, and either cure works", ({share, code, exitStatus}) => {
    const found = messageOf(() => studyLine(line(), withBound(share * enough)));
    expect([found.code, found.exitStatus]).toEqual([code, exitStatus]);
    const larger = factorIn(found.message, BOUND_FACTOR);
    const noisier = factorIn(found.message, NOISE_FACTOR);
    absoluteClose(larger, 1 / share, 0.01 / share, "three digits, rounded up");
    expect(codes(studyLine(line(), withBound(share * enough * larger)))).not.toContain("bound/tight");
    expect(codes(studyLine(line({noise: NOISE * noisier}), withBound(share * enough)))).not.toContain("bound/tight");
    // A little less would not have done.
    expect(messageOf(() => studyLine(line(), withBound(share * enough * larger * 0.985))).code).toMatch(/^bound/);
    const quieter = line({noise: (NOISE * noisier) / 1.02});
    expect(messageOf(() => studyLine(quieter, withBound(share * enough))).code).toMatch(/^bound/);
    // The cheaper cure stands first.
    const order = found.message.indexOf("the noise ") < found.message.indexOf("the bound ");
    expect(order).toBe(noisier < larger);
  });

  test("a bound far too small: exit 3, and no advice to call noise what is none", () => {
    const {code, exitStatus, message} = messageOf(() => studyLine(line(), withBound(0.5 * enough)));
    expect([code, exitStatus]).toEqual(["bound/infeasible", 3]);
    const larger = factorIn(message, BOUND_FACTOR);
    absoluteClose(larger, 2, 0.02, "three digits, rounded up");
    expect(codes(studyLine(line(), withBound(0.5 * enough * larger)))).not.toContain("bound/tight");
    expect(message).not.toMatch(NOISE_FACTOR);
  });

  test("a support that misses the source: exit 3, the noise or the support that would do", () => {
    const support = [{from: 226, to: 440, group: undefined}];
    const found = messageOf(() => studyLine(line(), plainSettings({support})));
    expect([found.code, found.exitStatus]).toEqual(["support/misses-sources", 3]);
    expect(found.message).toContain("however strong");
    const metres = factorIn(found.message, SUPPORT_METRES);
    const wider = [{from: 226 - metres, to: 440 + metres, group: undefined}];
    const cured = studyLine(line(), plainSettings({support: wider}));
    expect(codes(cured).filter((code) => FEASIBILITY.includes(code))).toEqual([]);
    const noisier = factorIn(found.message, NOISE_FACTOR);
    const louder = studyLine(line({noise: NOISE * noisier}), plainSettings({support}));
    expect(codes(louder).filter((code) => FEASIBILITY.includes(code))).toEqual([]);
  });

  test("a bound that all sources keep raises nothing", () => {
    expect(codes(studyLine(line(), withBound(1.5 * enough))).filter((code) => FEASIBILITY.includes(code))).toEqual([]);
  });
});

describe("doubts and refusals", () => {
  test("residuals that are not white raise a doubt", () => {
    const wander = noise.map((_, i) => noise[Math.floor(i / 4)]);
    const study = studyLine(
      line({values: values.map((v, i) => v + 4 * NOISE * wander[i]), noise: 4 * NOISE}),
      plainSettings(),
    );
    expect(study.notices).toContainEqual(expect.objectContaining({code: "residual/not-white", weight: "doubt"}));
    const plain = studyLine(line(), plainSettings());
    expect(plain.notices.map(({code}) => code)).not.toContain("residual/not-white");
  });

  test.each([
    [[{from: -300, to: -100, group: undefined}]],
    [[{from: 400, to: 500, group: undefined}]],
    // Parts to either side, and none under the line.
    [
      [
        {from: -300, to: -100, group: undefined},
        {from: 450, to: 500, group: undefined},
      ],
    ],
  ])("a support that does not meet the line is refused: %j", (support) => {
    expect(() => studyLine(line(), plainSettings({support}))).toThrowError(
      expect.objectContaining({code: "support/disjoint", exitStatus: 2}),
    );
  });

  test("a support of another group is not this line's", () => {
    const support = [
      {from: -300, to: -100, group: "G2"},
      {from: 100, to: 300, group: "G1"},
    ];
    expect(studyLine(line(), plainSettings({support})).panels.components.map(({interval}) => interval)).toMatchObject([
      {from: 100, to: 300},
    ]);
  });

  test.each([0, -1e-8, Number.NaN])("a noise of %d is refused", (own) => {
    expect(() => studyLine(line({noise: own}), plainSettings())).toThrowError(
      expect.objectContaining({code: "noise/not-positive", exitStatus: 2}),
    );
  });

  test("a station on the boundary is refused by its row", () => {
    const low = clearance.slice();
    low[40] = 0;
    expect(() => studyLine(line({clearance: low}), plainSettings())).toThrowError(
      expect.objectContaining({
        code: "boundary/station-below",
        exitStatus: 3,
        message: expect.stringContaining("row 42"),
      }),
    );
  });

  test("a level below the boundary is refused", () => {
    expect(() => studyLine(line(), plainSettings({levels: [level(-1)]}))).toThrowError(
      expect.objectContaining({code: "level/below-boundary", exitStatus: 3}),
    );
  });
});
