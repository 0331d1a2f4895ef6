/** Depth to trust against its definition, and the answers at multiples of an assumed bound against separate runs. */
import {describe, expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {levelQuantityNamed} from "../../lib/potential/level-quantity.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {resolutionSentence, trustSentence} from "../../lib/report/reach-words.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {Settings} from "../../lib/study/settings.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, type PlainSettings, plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const COUNT = 60;
const NOISE = 2e-8;
const noise = normalDeviates(seededRandom(5), COUNT);
const chainage = evenly(0, 295, COUNT);
/** 0.5 mGal on 130:170, 12 m up. */
const values = chainage.map((x, i) => 5e-6 * harmonicMeasure(x, 12, 130, 170) + NOISE * noise[i]);
const line = syntheticLine({chainage, clearance: 12, values, noise: NOISE});
const level = (height: number) => ({kind: "above-boundary", height}) as const;
const NORM = "norm:4";
const study = (own: PlainSettings = {}, trustFraction?: number) => {
  const settings = plainSettings({bound: boundRuleNamed(NORM, 1e-5), regional: -1, ...own});
  const wanted: Settings["wanted"] = {...settings.wanted, trustFraction};
  return studyLine(line, {...settings, wanted});
};

/** Median width of the intervals at a level over the range of the field there, at every station: all are asked. */
const share = (height: number, own: PlainSettings = {}): number => {
  const [profile] = study({...own, levels: [level(height)]}).levels;
  const {value, lower, upper} = profile!;
  const widths = upper.map((top, i) => top - lower[i]!).sort();
  return widths[widths.length >> 1]! / (Math.max(...value) - Math.min(...value));
};

describe("depth to trust", () => {
  test("is the level at which the interval is the stated share of the field", () => {
    const {trust} = study({}, 0.25);
    expect(trust!.stations).toBe(COUNT);
    expect(trust!.level).toBeGreaterThan(0.12);
    expect(trust!.level).toBeLessThan(12);
    expect(share(trust!.level)).toBeLessThan(0.25);
    // Found to 2^(1/32): 2.2 per cent of the level.
    expect(share(trust!.level / 1.023)).toBeGreaterThanOrEqual(0.25);
  });

  test("rises as less is let pass, and as the bound is looser", () => {
    const levels = [0.8, 0.4, 0.2, 0.1].map((fraction) => study({}, fraction).trust!.level);
    for (let k = 1; k < levels.length; ++k) expect(levels[k]).toBeGreaterThan(levels[k - 1]!);
    const loose = study({bound: boundRuleNamed("norm:12", 1e-5)}, 0.4).trust!.level;
    expect(loose).toBeGreaterThan(levels[1]!);
  });

  test("says so where not even the sensor is trusted, and where no level is left", () => {
    const nowhere = study({}, 1e-4);
    expect(nowhere.trust!.level).toBeNaN();
    expect(trustSentence(nowhere.trust)).toMatch(/^Depth to trust: none\. Even at the lowest sensor, 12 m/);
    const deep = {...study({}).trust!, level: 0};
    expect(trustSentence(deep)).toMatch(/down to the boundary/);
  });

  test("goes down to the boundary where the share let pass is wide enough for a point next to it", () => {
    const {trust} = study({}, 20);
    expect(trust!.level).toBe(0);
    // The lowest level looked at: a hundredth of the height of the sensor.
    expect(share(0.12)).toBeLessThan(20);
  });

  test("is not told of an amplitude", () => {
    const amplitude = study({levelQuantity: levelQuantityNamed("amplitude"), levels: [level(3)]});
    expect(amplitude.trust).toBeUndefined();
    expect(trustSentence(undefined)).toMatch(/not told/);
  });

  test("a level below it is remarked on, and one above it is not", () => {
    const codes = (height: number) =>
      study({levels: [level(height)]}).notices.filter(({code}) => code === "level/below-trust");
    const [told] = codes(0);
    expect(told!.weight).toBe("remark");
    expect(told!.message).toMatch(
      /^level 0 lies below the depth to trust \(\d.* m above the boundary\): read it as bound/,
    );
    expect(codes(12)).toEqual([]);
  });
});

describe("answers at multiples of an assumed bound", () => {
  const strips = [
    {name: "body", from: 130, to: 170, group: undefined},
    {name: "beside", from: 200, to: 240, group: undefined},
  ];
  const asked = {strips, levels: [level(4), level(20)]};
  const assumed = study({...asked, bound: boundRuleNamed("discrepancy", 1e-5)});

  test("are those of runs with the bound given", () => {
    expect(assumed.atBounds!.map(({factor}) => factor)).toEqual([0.5, 1, 2, 4]);
    for (const {factor, bound, strips: means, levels} of assumed.atBounds!) {
      expect(bound).toBe(factor * assumed.choice.bound);
      const given = study({...asked, bound: boundRuleNamed(`norm:${bound / 1e-5}`, 1e-5)});
      given.strips.forEach(({mean, lower, upper}, k) => {
        const half = 0.5 * (upper - lower);
        // The floor of the modes is 1e-5/M² for the bound asked or for the loosest; the search for `a` ends in half a per cent.
        absoluteClose(means[k]!.halfWidth / half, 1, 1e-4, "floor of the modes, search for a");
        // The value is not stationary in `a`, as the half-width is.
        absoluteClose((means[k]!.value - mean) / half, 0, 1e-2, "search for a");
      });
      given.levels.forEach(({lower, upper}, k) => {
        const halves = upper.map((top, i) => 0.5 * (top - lower[i]!)).sort();
        // 30 of the 60 stations: neighbours in order differ by less than this.
        absoluteClose(levels[k]! / halves[30]!, 1, 0.05, "half the stations");
      });
    }
  });

  test("at M are the answer itself, and widen with the bound", () => {
    assumed.strips.forEach(({mean, lower, upper}, k) => {
      const halves = assumed.atBounds!.map(({strips: means}) => means[k]!.halfWidth);
      expect(assumed.atBounds![1]!.strips[k]!.value).toBe(mean);
      absoluteClose((2 * halves[1]!) / (upper - lower), 1, 1e-12, "rounding");
      for (let i = 1; i < 4; ++i) expect(halves[i]).toBeGreaterThan(halves[i - 1]!);
    });
  });

  test("are not there where the bound was given", () => {
    expect(study(asked).atBounds).toBeUndefined();
  });
});

test("the sentence names the median, and the worst place where it is worse", () => {
  const resolution = {length: 5.617, local: Float64Array.of(5.6), worst: {length: 9.21, at: 190}};
  expect(resolutionSentence({resolution})).toBe(
    "Features narrower than 5.62 m are not in the data (median along the line; 9.21 m at chainage 190 m, the worst place).",
  );
  expect(resolutionSentence({resolution: {...resolution, worst: {length: 5.7, at: 3}}})).toBe(
    "Features narrower than 5.62 m are not in the data (median along the line).",
  );
  expect(resolutionSentence({resolution: {...resolution, length: Infinity}})).toMatch(/nothing is resolved/);
});
