/** A gradient given the other way round is told. */
import {expect, test} from "vitest";
import type {ReportableError} from "../../lib/errors.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {gravityGradient} from "../../lib/potential/gravity-gradient.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const CHAINAGE = evenly(0, 200, 101);
const DEPTH = 30;
/** A line mass under chainage 100, and its rate of change downward. */
const attraction = CHAINAGE.map((x) => DEPTH / ((x - 100) ** 2 + DEPTH ** 2));
const downward = CHAINAGE.map((x) => (DEPTH ** 2 - (x - 100) ** 2) / ((x - 100) ** 2 + DEPTH ** 2) ** 2);

function study(sign: 1 | -1, gradientNoise: number) {
  const line = syntheticLine({chainage: CHAINAGE, clearance: 10, values: withNoise(attraction, 1e-4, 1), noise: 1e-4});
  const channel = {
    role: "value.2",
    observable: gravityGradient,
    values: withNoise(
      downward.map((value) => sign * value),
      gradientNoise,
      2,
    ),
    noise: gradientNoise,
  };
  return studyLine({...line, channels: [{...line.channels[0], observable: gravity}, channel]}, plainSettings());
}

const codes = (sign: 1 | -1, noise: number): string[] => study(sign, noise).notices.map(({code}) => code);

test("the right way is not doubted", () => {
  expect(codes(1, 1e-5)).not.toContain("channels/gradient-sign");
});

test("a noisy one the wrong way is a doubt", () => {
  expect(codes(-1, 5e-4)).toContain("channels/gradient-sign");
});

test("where nothing fits for it, the error says so first", () => {
  let error: unknown;
  try {
    study(-1, 1e-5);
  } catch (thrown) {
    error = thrown;
  }
  expect(error).toMatchObject({exitStatus: 3});
  expect((error as ReportableError).message).toMatch(/^value\.2 \(gravity-gradient\) runs against.*change its sign/);
});
