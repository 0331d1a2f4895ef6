/** Noise of a line: correlated noise through the whole walk, and what is said where three estimates do not agree. */
import {inverse, Matrix, solve} from "ml-matrix";
import {describe, expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {doubt, remark} from "../../lib/notice.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {readingsOfLine} from "../../lib/operators/readings-of-line.ts";
import {gravityGradient} from "../../lib/potential/gravity-gradient.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyGrid} from "../../lib/study/grid-study.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import {noisesOf, withNoises} from "../../lib/study/noises.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import {condition} from "../../lib/survey/condition.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {redCovariance, redNoise} from "../harness/red-noise.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const NOISE = 2e-7;
const chainage = evenly(0, 400, 201);
const HEIGHT = 20;
const clean = chainage.map((x) => 5e-6 * harmonicMeasure(x, HEIGHT, 180, 220));
const strip = {name: "dyke", from: 180, to: 220, group: undefined};
/** A tenth above the norm of the truth, 0.5 √40 mGal·√m. */
const bound = boundRuleNamed("norm:3.5", 1e-5);
const settings = plainSettings({bound, strips: [strip]});

interface Made {
  readonly values: Float64Array;
  readonly noise?: number | "record";
  readonly noiseLength?: number;
  readonly interpolated?: true;
}
function lineOf({values, noise = NOISE, noiseLength = 0, ...own}: Made): SurveyLine {
  const line = syntheticLine({chainage, clearance: HEIGHT, values, noise});
  return {...line, channels: [{...line.channels[0], noiseLength, ...own}]};
}
const red = (length: number, seed = 4): Float64Array =>
  redNoise(chainage, NOISE, length, seed).map((r, i) => r + clean[i]!);
const codes = ({notices}: LineStudy): string[] =>
  notices.filter(({weight}) => weight === "doubt").map(({code}) => code);
const messageOf = ({notices}: LineStudy, code: string): string => notices.find((told) => told.code === code)!.message;

describe("a line with correlated noise", () => {
  test("has the misfit of its residual under the full covariance, least over every straight line", () => {
    const study = studyLine(lineOf({values: red(25), noiseLength: 25}), settings);
    const {estimate, conditioned, panels} = study;
    const operator = forwardOperator(readingsOfLine(conditioned), panels);
    const left = chainage.map((_, i) => {
      let field = 0;
      for (let j = 0; j < panels.count; ++j) field += operator.matrix[i * panels.count + j]! * estimate.density[j]!;
      return study.line.channels[0].values[i]! - field;
    });
    const weight = inverse(redCovariance(chainage, NOISE, 25));
    const line = Matrix.from1DArray(
      201,
      2,
      [...chainage].flatMap((x) => [1, x / 400]),
    );
    const data = Matrix.columnVector([...left]);
    const beta = solve(line.transpose().mmul(weight).mmul(line), line.transpose().mmul(weight).mmul(data));
    const rest = Matrix.sub(data, line.mmul(beta));
    const want = rest.transpose().mmul(weight).mmul(rest).get(0, 0);
    absoluteClose(estimate.misfit / want, 1, 1e-9, "the condition of the covariance, some 1e3, times ε");
    expect(estimate.misfit / 201).toBeLessThan(1.3);
    expect(codes(study)).toEqual(["boundary/ground-taken-as-flat"]);
  });

  test("whose length is 0, or far below the spacing, has the answers of white noise to the bit", () => {
    const values = withNoise(clean, NOISE, 7);
    const answersOf = (noiseLength: number) => {
      const {estimate, strips, levels, averages, resolution} = studyLine(lineOf({values, noiseLength}), settings);
      return {estimate, strips, levels, averages, resolution};
    };
    expect(answersOf(1e-3)).toEqual(answersOf(0));
  });

  test("taken for white, is told a length to try; with the length the doubt is gone", () => {
    const values = red(10);
    const white = studyLine(lineOf({values}), settings);
    expect(codes(white)).toContain("residual/not-white");
    const [, length] = /give --noise-length ([\d.]+) with it/.exec(messageOf(white, "residual/not-white"))!;
    // From the variance of differences, known to 17 % or so, which falls like Δ/L.
    expect(Number(length)).toBeGreaterThan(6);
    expect(Number(length)).toBeLessThan(16);
    expect(codes(studyLine(lineOf({values, noiseLength: 10}), settings))).not.toContain("residual/not-white");
  });

  test("of white readings is told that whitening for it went wrong", () => {
    const study = studyLine(lineOf({values: withNoise(clean, NOISE, 7), noise: 5 * NOISE, noiseLength: 40}), settings);
    expect(messageOf(study, "residual/not-white")).toMatch(/not those of noise correlated over 40 m/);
  });

  test("from the record has the noise that it was made with", () => {
    const study = studyLine(lineOf({values: red(25), noise: "record", noiseLength: 25}), settings);
    // 197 differences: 1.2/√197 = 8.5 %, three of them.
    absoluteClose(study.conditioned.channels[0]!.noise / NOISE, 1, 0.26, "three standard errors");
    expect(codes(study)).toEqual(["boundary/ground-taken-as-flat"]);
  });

  test("is refused where two readings stand at one place, by their rows", () => {
    const line = lineOf({values: red(25), noiseLength: 25});
    const twice = chainage.map((x, i) => (i === 51 ? chainage[50]! : x));
    const stations = {...line.stations, chainage: twice};
    expect(() => studyLine({...line, stations}, settings)).toThrowError(
      expect.objectContaining({
        code: "noise/same-place",
        exitStatus: 2,
        message: expect.stringMatching(
          /^Rows 52 and 53 of line made-up both stand at chainage 100 m\..*--noise-length/,
        ),
        place: {file: "made-up.csv", row: 53},
      }),
    );
    expect(studyLine({...lineOf({values: red(25)}), stations}, settings).strips.length).toBe(1);
  });

  test("may have two channels, each correlated with itself alone", () => {
    const line = lineOf({values: red(25), noiseLength: 25});
    const gradient = chainage.map(
      (x) => (5e-6 * ((x - 180) / ((x - 180) ** 2 + 400) - (x - 220) / ((x - 220) ** 2 + 400))) / Math.PI,
    );
    const second = {
      role: "value.2",
      observable: gravityGradient,
      values: redNoise(chainage, NOISE / 20, 25, 9).map((r, i) => r + gradient[i]!),
      noise: NOISE / 20,
      noiseLength: 25,
    };
    const study = studyLine({...line, channels: [line.channels[0], second]}, settings);
    expect(study.estimate.misfit / 402).toBeLessThan(1.3);
    expect(study.noises.map(({role}) => role)).toEqual(["value", "value.2"]);
    expect(codes(study)).toEqual(["boundary/ground-taken-as-flat"]);
  });
});

test("a row of a grid is whitened as the line that it is", async () => {
  const row = lineOf({values: red(25), noiseLength: 25, interpolated: true});
  const line = {...row, stations: {...row.stations, row: Float64Array.from({length: 201}, (_, i) => i + 1)}};
  const survey: Survey = {
    kind: "grid",
    files: ["made-up"],
    axes: [{group: "G1", azimuth: 90, origin: [0, 0], system: "made up", lines: 1}],
    choices: [],
    delivered: undefined,
    notices: [],
    lineCount: 1,
    grid: {width: 201, height: 1, orientation: "rows", step: 2, spacing: 2},
    async *lines() {
      yield {line};
    },
  };
  for await (const outcome of studyGrid(survey, settings)) {
    if (!("study" in outcome)) throw outcome.failure;
    const alone = studyLine(line, settings);
    absoluteClose(outcome.study.misfit / alone.estimate.misfit, 1, 1e-8, "the bound is met to 1e-10 by either");
    absoluteClose(outcome.study.resolution / alone.resolution.length, 1, 1e-6, "as above");
    expect(outcome.study.noiseLength).toBe(25);
  }
});

describe("three estimates of the noise", () => {
  const differ = "noise/estimates-differ";

  test("agree on white noise that was given rightly, over eight draws", () => {
    for (let seed = 0; seed < 8; ++seed) {
      const study = studyLine(lineOf({values: withNoise(clean, NOISE, 40 + seed)}), settings);
      expect(codes(study).filter((code) => code.startsWith("noise/"))).toEqual([]);
      const [{given, record, spectrum, flat}] = study.noises as [LineStudy["noises"][number]];
      expect([given, flat]).toEqual([NOISE, true]);
      // Three standard errors: 1.2/√197, and 0.72/√50.
      absoluteClose(record! / NOISE, 1, 0.26, "three standard errors");
      absoluteClose(spectrum! / NOISE, 1, 0.31, "three standard errors");
    }
  });

  test("agree on correlated noise of the length given, and differ where it is taken for white", () => {
    const values = red(25);
    expect(studyLine(lineOf({values, noiseLength: 25}), settings).noises[0]?.apart).toBeUndefined();
    const white = studyLine(lineOf({values}), settings);
    expect(white.noises[0]?.apart?.larger).toBe("given");
    expect(messageOf(white, differ)).toMatch(/give --noise-length/);
  });

  test("differ on filtered readings, whose differences hide the noise", () => {
    const noisy = withNoise(clean, NOISE, 7);
    const values = noisy.map((_, i) =>
      [1, 4, 6, 4, 1].reduce((sum, share, k) => sum + (share / 16) * noisy[Math.min(200, Math.max(0, i + k - 2))]!, 0),
    );
    const study = studyLine(lineOf({values}), settings);
    const message = messageOf(study, differ);
    expect(message).toMatch(
      /^Estimates of the noise differ by more than half: 0\.0200 mGal given, 0\.00\d+ mGal from the fourth differences of the record, 0\.00\d+ mGal from the shortest waves of the residual, whose spectrum is not flat there\./,
    );
    expect(message).toMatch(/smooth records hide their noise/);
  });

  test("differ where the noise given is too small, and say that intervals are too narrow", () => {
    // On a line as long as this the misfit would end the work first: asked of the estimates themselves.
    const study = studyLine(lineOf({values: withNoise(clean, NOISE, 7)}), settings);
    const conditioned = condition(lineOf({values: withNoise(clean, NOISE, 7), noise: NOISE / 1.8}), undefined);
    const remains = study.estimate.channels.map(({residual}) => residual.map((r) => (1.8 * r) / NOISE));
    const noises = noisesOf(conditioned, remains, study.estimate);
    expect(noises[0]?.apart).toMatchObject({smaller: "given"});
    expect(noises[0]?.spectrum).toBeCloseTo(study.noises[0]!.spectrum!, 15);
    const [told] = withNoises([], noises, conditioned);
    expect([told?.code, told?.weight]).toEqual([differ, "doubt"]);
    expect(told?.message).toMatch(/intervals are too narrow\. Give the larger --noise, unless/);
    const channels = conditioned.channels.map((channel) => ({...channel, noiseLength: 9}));
    expect(withNoises([], noises, {...conditioned, channels})[0]?.message).toMatch(
      /or a shorter --noise-length, unless/,
    );
  });

  test("are added to the doubt that says so already", () => {
    const study = studyLine(lineOf({values: red(25)}), settings);
    expect(study.noises[0]?.apart).toBeDefined();
    for (const code of ["noise/raised", "noise/contradicted", "noise/record-not-white"] as const) {
      const told = withNoises(
        [remark("other/first", "One."), doubt(code, "It was raised.")],
        study.noises,
        study.conditioned,
      );
      expect(told.map((notice) => notice.code)).toEqual(["other/first", code]);
      expect(told[1]!.message).toMatch(
        /^It was raised\. Three estimates of the noise: 0\.0200 mGal given, .* of the record, .* of the residual.*\.$/,
      );
    }
  });

  test("are two where the record was rounded flat, and nothing is made of readings between pixels", () => {
    const values = withNoise(clean, NOISE, 7).map((v) => 4e-7 * Math.round(v / 4e-7));
    const rounded = studyLine(lineOf({values: values.map((v, i) => (i % 200 < 150 ? 0 : v))}), settings);
    expect(rounded.noises[0]?.record).toBeUndefined();
    const between = studyLine(lineOf({values: clean, interpolated: true}), settings);
    expect([between.noises[0]?.record, between.noises[0]?.apart]).toEqual([undefined, undefined]);
    expect(codes(between)).not.toContain(differ);
  });
});
