/** Sources that run obliquely to the line: the same body crossed at 60° and crossed squarely. */
import {describe, expect, test} from "vitest";
import type {Track} from "../../lib/geometry/track.ts";
import type {Strip} from "../../lib/inverse/nouns.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {effectiveDirection} from "../../lib/potential/effective-direction.ts";
import {fieldAlong} from "../../lib/potential/field-along.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {amplitudeIm, amplitudeRe, kernelOverPiece} from "../../lib/potential/kernel.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {totalFieldAnomaly} from "../../lib/potential/total-field-anomaly.ts";
import {deliveryOf} from "../../lib/report/delivery.ts";
import {stripAnswer} from "../../lib/report/strip-answer.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

/** The body strikes at azimuth 95°; metres square to it are counted towards 5°. */
const STRIKE = 95;
const SQUARE = 5;
const SCALE = Math.sin(Math.PI / 3);
const STRENGTH = 2e-7;
const HEIGHT = 8;
const across = evenly(0, 240, 81);

/** The same readings on a line towards `azimuth`, whose chainage is that square to the strike over `scale`. */
function lineTowards(azimuth: number, scale: number, observable: Observable = totalFieldAnomaly): SurveyLine {
  const response = observable.response(effectiveDirection(62, 3, SQUARE));
  const [re, im] = [amplitudeRe(response), amplitudeIm(response)];
  const clean = across.map((u) => STRENGTH * kernelOverPiece(re, im, response.order, 90 - u, HEIGHT, 130 - u, HEIGHT));
  const [sin, cos] = [Math.sin((azimuth * Math.PI) / 180), Math.cos((azimuth * Math.PI) / 180)];
  const end = 240 / scale;
  const track: Track = {
    system: undefined,
    chainage: Float64Array.of(0, end),
    x: Float64Array.of(5000, 5000 + end * sin),
    y: Float64Array.of(7000, 7000 + end * cos),
    beyond: [sin, cos],
  };
  const values = withNoise(clean, 1e-3 * STRENGTH, 51);
  const chainage = across.map((u) => u / scale);
  return {...syntheticLine({chainage, clearance: HEIGHT, values, noise: 1e-3 * STRENGTH, observable}), track};
}

const strip = (name: string, from: number, to: number): Strip => ({name, from, to, group: undefined});

function asked(scale: number, strike: number | undefined, own: Partial<Settings["model"]> = {}): Settings {
  const plain = plainSettings({
    bound: boundRuleNamed(`norm:${1.2 * Math.sqrt(40) * STRENGTH}`, 1),
    fieldDirection: {kind: "angles", inclination: 62, declination: 3},
    levels: [
      {kind: "above-boundary", height: 0},
      {kind: "above-boundary", height: 5},
    ],
    strips: [strip("body", 90 / scale, 130 / scale), strip("over the end", 230 / scale, 300 / scale)],
    panel: 2 / scale,
  });
  return {...plain, model: {...plain.model, ...(strike === undefined ? {} : {strike}), ...own}};
}

/** Every number of a study that does not change, and lengths along the line times `scale`. */
const numbersOf = (study: LineStudy, scale: number): ReadonlyMap<string, readonly number[]> => {
  const {estimate, panels, averages, levels, strips, resolution} = study;
  const delivery = deliveryOf(study.observable);
  return new Map<string, readonly number[]>([
    ["density", [...estimate.density].map((f) => f / STRENGTH)],
    ["misfit", [estimate.misfit / 81, estimate.norm / STRENGTH]],
    ["panels", [...panels.from, ...panels.to, ...panels.centre].map((x) => (x * scale) / 240)],
    ["edges", panels.components.flatMap(({edges}) => [...edges]).map((x) => (x * scale) / 240)],
    [
      "averages",
      [averages.value, averages.lower, averages.upper].flatMap((list) => [...list].map((f) => f / STRENGTH)),
    ],
    ["averaged over", [...averages.averagedOver, ...levels[0]!.averagedOver].map((x) => (x * scale) / 240)],
    ["levels", levels.flatMap(({value, lower, upper}) => [...value, ...lower, ...upper].map((f) => f / STRENGTH))],
    ["resolution", [resolution.length, ...resolution.local].map((x) => (x * scale) / 240)],
    [
      "strips",
      strips.flatMap(({mean, lower, upper, plainMean}) => [mean, lower, upper, plainMean].map((f) => f / STRENGTH)),
    ],
    ["totals", strips.flatMap((one) => Object.values(stripAnswer(one, delivery).total).map((t: number) => t / 10))],
  ]);
};

describe("a body crossed at 60°", () => {
  const square = studyLine(lineTowards(SQUARE, 1), asked(1, undefined));

  test.each([
    ["from one side", 35, STRIKE],
    ["from the other side", 335, STRIKE],
    ["with the strike named the other way", 35, STRIKE + 180],
  ])("gives what it gives crossed squarely, on the line's own chainage: %s", (_, azimuth, strike) => {
    const line = lineTowards(azimuth, SCALE);
    const study = studyLine(line, asked(SCALE, strike));
    expect(study.line).toBe(line);
    expect(study.conditioned.line).toBe(line);
    expect(study.conditioned.direction!.inclination).toBeCloseTo(square.conditioned.direction!.inclination, 9);
    expect(study.strips.map((one) => one.strip)).toEqual(asked(SCALE, strike).wanted.strips);
    const [got, want] = [numbersOf(study, SCALE), numbersOf(square, 1)];
    for (const [kind, list] of want) {
      expect(got.get(kind)!.length, kind).toBe(list.length);
      list.forEach((value, i) => {
        if (Number.isNaN(value)) expect(got.get(kind)![i]).toBeNaN();
        // Scaling there and back is rounding; modes down to 1e-13 of the largest make it 1e-7 of the density.
        else absoluteClose(got.get(kind)![i]!, value, 1e-6, `${kind}: rounding of weak modes`);
      });
    }
  });

  test("has noise that is correlated along the line as it was flown", () => {
    const red = (line: SurveyLine, noiseLength: number): SurveyLine => ({
      ...line,
      channels: [{...line.channels[0], noiseLength}],
    });
    const line = red(lineTowards(35, SCALE), 12 / SCALE);
    const study = studyLine(line, asked(SCALE, STRIKE));
    expect(study.conditioned.channels[0]).toMatchObject({noiseLength: 12 / SCALE, channel: line.channels[0]});
    const [got, want] = [study, studyLine(red(lineTowards(SQUARE, 1), 12), asked(1, undefined))];
    absoluteClose(got.estimate.misfit / want.estimate.misfit, 1, 1e-6, "rounding of weak modes");
    got.strips.forEach(({lower, upper}, k) => {
      absoluteClose(lower / STRENGTH, want.strips[k]!.lower / STRENGTH, 1e-6, "rounding of weak modes");
      absoluteClose(upper / STRENGTH, want.strips[k]!.upper / STRENGTH, 1e-6, "rounding of weak modes");
    });
    expect(Math.abs(want.strips[0]!.upper / square.strips[0]!.upper - 1)).toBeGreaterThan(1e-3);
  });

  test("has its rules compared as if crossed squarely", () => {
    const bound = boundRuleNamed("compare", 1);
    const squarely = studyLine(lineTowards(SQUARE, 1), {...asked(1, undefined), bound}).comparison!;
    const got = studyLine(lineTowards(35, SCALE), {...asked(SCALE, STRIKE), bound}).comparison!;
    // So little noise leaves the curve without a corner; the other three choose.
    expect(got.map(({rule}) => rule)).toEqual(squarely.map(({rule}) => rule));
    expect(got.filter(({figures}) => figures === undefined)).toEqual(
      squarely.filter(({figures}) => figures === undefined),
    );
    const chosen = got.filter(({figures}) => figures !== undefined);
    expect(chosen.map(({rule}) => rule)).toEqual(["discrepancy", "cross-validation", "balance"]);
    chosen.forEach(({rule, figures}) => {
      const want = squarely.find((one) => one.rule === rule)!.figures!;
      expect(figures!.strips.map((one) => one.strip)).toEqual(asked(SCALE, STRIKE).wanted.strips);
      const because = "rounding of weak modes, and steps of a search that they may shift";
      absoluteClose((figures!.resolution * SCALE) / want.resolution, 1, 1e-4, because);
      figures!.strips.forEach(({plainMean}, i) => {
        absoluteClose(plainMean / STRENGTH, want.strips[i]!.plainMean / STRENGTH, 1e-4, because);
      });
    });
  });

  test("brings the truth back inside the interval of its total, per metre of strike", () => {
    const study = studyLine(lineTowards(35, SCALE), asked(SCALE, STRIKE, {regional: -1}));
    const {total} = stripAnswer(study.strips[0]!, deliveryOf(study.observable));
    // M = 2f/μ0 over 40 m square to the strike.
    const truth = ((2 * STRENGTH) / 1.25663706127e-6) * 40;
    expect(total.lower).toBeLessThan(truth);
    expect(total.upper).toBeGreaterThan(truth);
    expect(total.lower).toBeGreaterThan(0);
    // Without the strike it is taken for a body 15 % wider and deeper than it is.
    const blind = studyLine(lineTowards(35, SCALE), asked(SCALE, undefined, {regional: -1}));
    expect(
      Math.abs(stripAnswer(blind.strips[0]!, deliveryOf(blind.observable)).total.value / truth - 1),
    ).toBeGreaterThan(0.05);
  });

  test("a strike square to the line changes nothing beyond rounding", () => {
    const [got, want] = [numbersOf(studyLine(lineTowards(SQUARE, 1), asked(1, STRIKE)), 1), numbersOf(square, 1)];
    for (const [kind, list] of want)
      list.forEach((value, i) => {
        if (!Number.isNaN(value)) absoluteClose(got.get(kind)![i]!, value, 1e-6, `${kind}: rounding`);
      });
  });
});

describe("a strike is refused", () => {
  const refused = (line: SurveyLine, settings: Settings, code: string, exitStatus: number) =>
    expect(() => studyLine(line, settings)).toThrowError(expect.objectContaining({code, exitStatus}));

  test("at less than 30° to the line, and not at 30°", () => {
    const line = lineTowards(35, SCALE, fieldVertical);
    refused(line, asked(SCALE, 64), "strike/too-oblique", 3);
    refused(line, asked(SCALE, 35), "strike/too-oblique", 3);
    refused(line, asked(SCALE, 186), "strike/too-oblique", 3);
    const free = {...asked(0.5, 65), bound: boundRuleNamed("discrepancy", 1)};
    expect(studyLine(lineTowards(35, 0.5, fieldVertical), free).strips).toHaveLength(2);
  });

  test("without coordinates, and for components along the line", () => {
    const line = lineTowards(35, SCALE, fieldVertical);
    refused({...line, track: undefined}, asked(SCALE, STRIKE), "strike/no-azimuth", 2);
    refused(lineTowards(35, SCALE, fieldAlong), asked(SCALE, STRIKE), "strike/along-component", 2);
  });

  test("says that lengths in what it refuses are square to the strike", () => {
    const off = asked(SCALE, STRIKE, {support: [{from: 900, to: 1000, group: undefined}]});
    expect(() => studyLine(lineTowards(35, SCALE), off)).toThrowError(
      expect.objectContaining({
        code: "support/disjoint",
        exitStatus: 2,
        message: expect.stringMatching(/Lengths here are square to the strike: 0\.8660 of those along the line/),
      }),
    );
  });
});
