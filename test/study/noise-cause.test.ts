/** Where no source fits: whether the noise that was given is named before support and bound. */
import {describe, expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {redNoise} from "../harness/red-noise.ts";
import {evenly, type PlainSettings, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

/** 0.02 mGal, every metre, 15 m up: the anomaly leaves nothing in fourth differences. */
const NOISE = 2e-7;
const chainage = evenly(0, 200, 201);
const HEIGHT = 15;
const clean = chainage.map((x) => 5e-6 * harmonicMeasure(x, HEIGHT, 80, 110));
const values = withNoise(clean, NOISE, 3);
const lineOf = (noise: number | "record", noiseLength = 0, readings = values): SurveyLine => {
  const line = syntheticLine({chainage, clearance: HEIGHT, values: readings, noise});
  return {...line, channels: [{...line.channels[0]!, noiseLength}]};
};

function refusal(line: SurveyLine, own: PlainSettings = {}): {readonly code: string; readonly message: string} {
  try {
    studyLine(line, plainSettings(own));
  } catch (error) {
    return error as {code: string; message: string};
  }
  throw new Error("the line was answered");
}

const RECORD = /are those of white noise of ([\d.]+) mGal/;

describe("a line that no source explains", () => {
  test.each(["discrepancy", "norm:4"])("by noise a tenth of the true: the noise before all else, under %s", (text) => {
    const bound = boundRuleNamed(text, 1e-5);
    const {message} = refusal(lineOf(0.1 * NOISE), {bound});
    expect(message).toMatch(/^The noise given is the likeliest cause\. The noise was given as 0\.00200 mGal/);
    expect(message.indexOf("support misses")).toBeGreaterThan(message.indexOf("--noise record"));
    expect(message).not.toContain("No noise that would explain it is plausible");
    // Who follows the advice arrives.
    const told = 1e-5 * Number(RECORD.exec(message)?.[1]);
    expect(studyLine(lineOf(told), plainSettings({bound})).estimate.misfit).toBeLessThan(
      // The rule stops at the target, to the precision of its search.
      (201 + 2 * Math.sqrt(402)) * (1 + 1e-6),
    );
  });

  test("by noise and support: both, the noise as one cause", () => {
    const support = [{from: 150, to: 260, group: undefined}];
    const {message} = refusal(lineOf(0.1 * NOISE), {support});
    expect(message).toMatch(/^The noise given is one cause\./);
    expect(message).toContain("has another cause as well");
  });

  test("by the support alone: the noise, which the record bears out, is not blamed", () => {
    const {message} = refusal(lineOf(NOISE), {support: [{from: 150, to: 260, group: undefined}], regional: -1});
    expect(message).toMatch(/^No source on this support/);
    expect(message).not.toMatch(RECORD);
  });

  test("by a length that white readings do not have: the length is named, and the cure works", () => {
    const {message} = refusal(lineOf(NOISE, 40));
    expect(message).toMatch(/^The --noise-length given is the likeliest cause\. .*correlated over 40 m/);
    expect(message).toContain("leave --noise-length out");
    expect(() => studyLine(lineOf(NOISE), plainSettings())).not.toThrow();
  });

  test("by noise too small with the length that it has: the noise, and not the length", () => {
    const red = redNoise(chainage, NOISE, 40, 4).map((r, i) => r + clean[i]!);
    const {message} = refusal(lineOf(0.1 * NOISE, 40, red));
    expect(message).toMatch(/given as 0\.00200 mGal correlated over 40 m/);
  });
});
