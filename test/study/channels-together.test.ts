/** Lines with several channels: what the further ones add, and channels that are not of one source. */
import {describe, expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {fieldAlong} from "../../lib/potential/field-along.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {gravityGradient} from "../../lib/potential/gravity-gradient.ts";
import {amplitudeIm, amplitudeRe, kernelOverPiece} from "../../lib/potential/kernel.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {lineSection} from "../../lib/report/line-section.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const chainage = evenly(0, 240, 81);
const HEIGHT = 8;

interface Sensor {
  readonly observable: Observable;
  /** Where the body below lies: its boundary field is 1e-5 between these. */
  readonly body?: readonly [from: number, to: number];
  /** Of the largest reading. */
  readonly noise?: number;
  readonly turned?: boolean;
  readonly told?: number | "record";
}

/** A line at 8 m over a strip body, each sensor over its own. */
function lineOf(sensors: readonly Sensor[], seed = 31): SurveyLine {
  const base = syntheticLine({chainage, clearance: HEIGHT, values: chainage, noise: 1});
  return {
    ...base,
    channels: sensors.map(({observable, body = [90, 130], noise = 1e-2, turned = false, told}, k) => {
      const response = observable.response(undefined);
      const sign = turned ? -1 : 1;
      const clean = chainage.map(
        (x) =>
          1e-5 *
          sign *
          kernelOverPiece(
            amplitudeRe(response),
            amplitudeIm(response),
            response.order,
            body[0] - x,
            HEIGHT,
            body[1] - x,
            HEIGHT,
          ),
      );
      const sigma = noise * clean.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
      return {
        role: k === 0 ? "value" : `value.${k + 1}`,
        observable,
        values: withNoise(clean, sigma, seed + k),
        noise: told ?? sigma,
      };
    }),
  };
}

const codes = ({notices}: LineStudy): string[] => notices.map(({code}) => code);
const rules = [
  // One width of panels for both studies: by default a gradient halves it.
  ["discrepancy", plainSettings({panel: 2.5})],
  ["a given bound", plainSettings({panel: 2.5, bound: boundRuleNamed(`norm:${1.2 * Math.sqrt(40) * 1e-5}`, 1)})],
] as const;

describe("the gain of further channels", () => {
  test.each(rules)("is the resolution that a study of the first channel alone has: %s", (_, settings) => {
    const both = lineOf([{observable: gravity}, {observable: gravityGradient}]);
    const study = studyLine(both, settings);
    const alone = studyLine({...both, channels: both.channels.slice(0, 1)}, settings);
    // The same multiplier; the bound of the rule only says which weak modes are left out of R: below 1e-4 of it.
    expect(study.gain!.without / alone.resolution.length).toBeCloseTo(1, 3);
    expect(study.gain!.further).toEqual(["value.2"]);
    expect(alone.gain).toBeUndefined();
    expect(study.resolution.length).toBeLessThan(study.gain!.without);
    const {message, weight} = study.notices.find(({code}) => code === "channels/gain")!;
    expect(weight).toBe("remark");
    const [withAll, without] = [study.resolution.length, study.gain!.without].map((length) => length.toPrecision(3));
    expect(message).toContain(`Resolution ${withAll} m with value.2, ${without} m without`);
    expect(lineSection(study, "done", 0)).toMatch(/<dd>[\d.]+ m with value\.2, [\d.]+ m without<\/dd>/);
    expect(codes(alone)).not.toContain("channels/gain");
    expect(lineSection(alone, "done", 0)).not.toMatch(/without<\/dd>/);
  });

  test("is next to nothing where the second channel is a hundred times as noisy", () => {
    const study = studyLine(lineOf([{observable: gravity}, {observable: gravityGradient, noise: 1}]), rules[1][1]);
    expect(study.resolution.length / study.gain!.without).toBeGreaterThan(0.97);
  });

  test("of three channels names both further ones", () => {
    const study = studyLine(
      lineOf([{observable: gravity}, {observable: gravityGradient}, {observable: gravity}]),
      rules[1][1],
    );
    expect(study.gain!.further).toEqual(["value.2", "value.3"]);
  });
});

/** What became of a line: codes of its doubts, or of its failure. */
function outcome(line: SurveyLine, settings = plainSettings({})): string[] {
  try {
    return codes(studyLine(line, settings));
  } catch (error) {
    return [`failed ${(error as {code?: string}).code}`];
  }
}

describe("channels that are not of one source", () => {
  const pair = (own: Partial<Sensor>, told?: number | "record"): SurveyLine =>
    lineOf([
      {observable: fieldVertical, ...(told === undefined ? {} : {told})},
      {observable: fieldAlong, ...(told === undefined ? {} : {told}), ...own},
    ]);

  test("a conjugate pair raises no doubt, over twenty draws of the noise", () => {
    for (let seed = 100; seed < 140; seed += 2) {
      const line = lineOf([{observable: fieldVertical}, {observable: fieldAlong}], seed);
      expect(outcome(line).filter((code) => /not-conjugate|disagree/.test(code))).toEqual([]);
    }
  });

  test.each([
    ["of a body beside", {body: [110, 150]}],
    ["of half the width", {body: [90, 110]}],
    ["turned round", {turned: true}],
  ] as const)("an along component %s is found out", (_, own) => {
    for (const [, settings] of rules)
      expect(outcome(pair(own), settings)).toContainEqual(expect.stringMatching(/channels\/not-conjugate$/));
    // Where the noise comes from the record it is raised until they fit; the doubt stays.
    expect(outcome(pair(own, "record"))).toContain("channels/not-conjugate");
  });

  test("says what it means and what to do", () => {
    const {message} = studyLine(pair({turned: true}, "record"), plainSettings({})).notices.find(
      ({code}) => code === "channels/not-conjugate",
    )!;
    expect(message).toMatch(/value \(field-vertical\) and value\.2 \(field-along\) are each explained/);
    expect(message).toMatch(/not those of one two-dimensional source/);
    expect(message).toMatch(/an along component counts towards increasing chainage/);
  });

  test("a gradient counted upward is told as such", () => {
    const line = lineOf([{observable: gravity}, {observable: gravityGradient, turned: true}]);
    expect(outcome(line)).toContainEqual(expect.stringMatching(/channels\/gradient-sign$/));
  });

  test("a channel that no source explains by itself is not blamed on the pair", () => {
    // Told a fifth of its noise.
    const line = lineOf([{observable: fieldVertical}, {observable: fieldAlong, noise: 1e-2}]);
    const along = line.channels[1]!;
    const told = {...line, channels: [line.channels[0]!, {...along, noise: (along.noise as number) / 5}]};
    expect(outcome(told).filter((code) => /not-conjugate/.test(code))).toEqual([]);
  });
});
