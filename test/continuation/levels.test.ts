import {describe, expect, test} from "vitest";
import {type LevelSetting, levelLabel} from "../../lib/continuation/level-profile.ts";
import {levelHeights} from "../../lib/continuation/levels.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import {condition} from "../../lib/survey/condition.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const chainage = evenly(0, 240, 81);
const above = (height: number): LevelSetting => ({kind: "above-boundary", height});
const overGround = (height: number): LevelSetting => ({kind: "above-ground", height});
const values = withNoise(
  chainage.map((x) => 3e-6 * harmonicMeasure(x, 10, 100, 150)),
  1e-8,
  8,
);
const line: SurveyLine = syntheticLine({chainage, clearance: 10, values, noise: 1e-8});
/** The same with ground and sensor above a datum. */
const surveyed = (ground: Float64Array): SurveyLine => ({
  ...line,
  stations: {...line.stations, ground, elevation: ground.map((g) => g + 10)},
});

describe("levels", () => {
  const settings = (levels: LevelSetting[]) =>
    plainSettings({levels, bound: boundRuleNamed("rms:0.2", 1e-5), regional: -1});

  test("close to the boundary join on to level 0", () => {
    const study = studyLine(line, settings([above(0), above(1e-3), above(1), above(10)]));
    const [ground, just, low, flight] = study.levels;
    const largest = ground.value.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
    for (let i = 0; i < 81; ++i) {
      absoluteClose(
        just.value[i] / largest,
        ground.value[i] / largest,
        1e-3,
        "a thousandth of a metre over waves of 10 m",
      );
      absoluteClose(low.value[i] / largest, ground.value[i] / largest, 0.3, "a metre over waves of 10 m");
      // At its own height the field fits the readings.
      expect(Math.abs(flight.value[i] - values[i])).toBeLessThan(5e-8);
      expect(ground.averagedOver[i]).toBeGreaterThan(0);
      expect(low.averagedOver[i]).toBeNaN();
    }
    // A point of f is bounded by nothing, so the closer a point the wider its interval; f averaged is steadier.
    const width = (k: number, i: number): number => study.levels[k].upper[i] - study.levels[k].lower[i];
    for (const i of [20, 40, 60]) {
      expect(width(1, i)).toBeGreaterThan(width(2, i));
      expect(width(2, i)).toBeGreaterThan(width(3, i));
      expect(width(0, i)).toBeLessThan(width(1, i));
    }
  });

  test("above the line are the field carried up", () => {
    const study = studyLine(line, settings([above(30)]));
    const [{value, lower, upper}] = study.levels;
    chainage.forEach((x, i) => {
      const truth = 3e-6 * harmonicMeasure(x, 30, 100, 150);
      expect(lower[i]).toBeLessThan(truth);
      expect(upper[i]).toBeGreaterThan(truth);
      // Readings good to 1 part in 100 of the anomaly tell the field above to a few, away from the line's ends.
      if (x >= 60 && x <= 180) expect(Math.abs(value[i] - truth)).toBeLessThan(6e-8);
    });
  });

  test("over flat ground are levels above the boundary", () => {
    const flat = studyLine(surveyed(new Float64Array(81).fill(250)), {
      ...settings([overGround(2), above(5)]),
      model: {...settings([]).model, boundary: {kind: "depth", depth: 3}},
    });
    expect(flat.levels[0].height.every((h) => h === 5)).toBe(true);
    expect([...flat.levels[0].value]).toEqual([...flat.levels[1].value]);
    expect([...flat.levels[0].upper]).toEqual([...flat.levels[1].upper]);
    // The sensor is 13 m above that boundary.
    expect(flat.conditioned.height.every((h) => h === 13)).toBe(true);
  });

  test("over ground that rises and falls follow it", () => {
    const ground = chainage.map((x) => 250 + 0.4 * Math.sin(x / 30));
    const conditioned = condition(surveyed(ground), {kind: "elevation", elevation: 240});
    levelHeights(overGround(4), conditioned).forEach((height, i) => {
      absoluteClose(height, ground[i] - 240 + 4, 1e-12, "rounding of 250");
    });
    expect(() => levelHeights(overGround(-11), conditioned)).toThrowError(
      expect.objectContaining({code: "level/below-boundary", exitStatus: 3, message: expect.stringContaining("row")}),
    );
  });

  test("above a ground that is not known are refused", () => {
    const blind: SurveyLine = {
      ...line,
      stations: {...line.stations, clearance: undefined, elevation: new Float64Array(81).fill(300)},
    };
    const conditioned = condition(blind, {kind: "elevation", elevation: 290});
    expect(() => levelHeights(overGround(2), conditioned)).toThrowError(
      expect.objectContaining({code: "level/no-ground", exitStatus: 3}),
    );
    expect([...levelHeights(above(7), conditioned)]).toEqual(new Array(81).fill(7));
  });

  test("are named as they were asked for", () => {
    expect([above(0), above(2.5), overGround(10)].map(levelLabel)).toEqual(["0", "2.5", "ground+10"]);
  });
});
