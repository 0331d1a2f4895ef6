/** A plan against the study of a line that was flown as planned: half-widths must be those that come out. */
import {describe, expect, test} from "vitest";
import {InputError, ModelError} from "../../lib/errors.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {observableNamed} from "../../lib/potential/catalogue.ts";
import {effectiveDirection} from "../../lib/potential/effective-direction.ts";
import {DELIVERY_UNIT} from "../../lib/quantities.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {LineStudy} from "../../lib/study/outcome.ts";
import {type PlanCase, planSurvey} from "../../lib/study/plan.ts";
import type {PlanSettings} from "../../lib/study/planned-work.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {evenly, plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const LENGTH = 300;
const SPACING = 5;
const WIDTHS = [10, 40] as const;
const LEVELS = [0, 8] as const;
const COUNT = LENGTH / SPACING + 1;

/** Three strengths that noise and bound of each kind are shares of: mGal and nT alike. */
const unitOf = (name: string): number => DELIVERY_UNIT[observableNamed(name).source.fieldDimension].factor;

function settingsFor(name: string, own: Partial<PlanSettings> = {}): PlanSettings {
  const observable = observableNamed(name);
  return {
    observables: [observable],
    direction: observable.needsDirection ? effectiveDirection(60, 10, 70) : undefined,
    clearances: [15],
    spacings: [SPACING],
    noises: [0.02 * unitOf(name)],
    bounds: [boundRuleNamed("rms:1", unitOf(name))],
    stripWidths: WIDTHS,
    levels: LEVELS,
    length: LENGTH,
    boundaryDepth: 0,
    support: [],
    regional: 1,
    confidence: 0.95,
    stripStrength: undefined,
    gradientNoise: undefined,
    separation: 1,
    secondClearance: undefined,
    ...own,
  };
}

interface Flown {
  readonly clearance: number | Float64Array;
  readonly chainage?: Float64Array;
  /** Further channels: observable, noise SI, metres above the first sensor. */
  readonly more?: readonly (readonly [string, number, number])[];
}

/** A line with readings of noise alone; total-field lines are given the direction through a made-up column of course. */
function flown(name: string, {clearance, chainage = evenly(0, LENGTH, COUNT), more = []}: Flown): LineStudy {
  const noise = 0.02 * unitOf(name);
  const readings = (sigma: number, seed: number): Float64Array =>
    normalDeviates(seededRandom(seed), chainage.length).map((value) => sigma * value);
  const first = syntheticLine({
    chainage,
    clearance,
    noise,
    observable: observableNamed(name),
    values: readings(noise, 7),
  });
  const line: SurveyLine = {
    ...first,
    channels: [
      ...first.channels,
      ...more.map(([kind, sigma, above], k) => ({
        role: `value.${k + 2}`,
        observable: observableNamed(kind),
        noise: sigma,
        values: readings(sigma, 8 + k),
        above: new Float64Array(chainage.length).fill(above),
      })),
    ],
  };
  const strips = WIDTHS.flatMap((width) => [
    {name: `middle ${width}`, from: 0.5 * (LENGTH - width), to: 0.5 * (LENGTH + width), group: undefined},
    {name: `end ${width}`, from: 0, to: width, group: undefined},
  ]);
  return studyLine(
    line,
    plainSettings({
      bound: boundRuleNamed("rms:1", unitOf(name)),
      strips,
      levels: LEVELS.map((height) => ({kind: "above-boundary", height}) as const),
    }),
  );
}

const halfOf = (study: LineStudy, name: string): number => {
  const {lower, upper} = study.strips.find(({strip}) => strip.name === name)!;
  return 0.5 * (upper - lower);
};

/** Largest relative difference between what was planned and what came out. */
function worst(pairs: readonly (readonly [planned: number, found: number])[]): number {
  return Math.max(...pairs.map(([planned, found]) => Math.abs(planned / found - 1)));
}

const stripPairs = ({strips}: PlanCase, study: LineStudy) =>
  strips.flatMap(({width, middle, end}) => [
    [middle, halfOf(study, `middle ${width}`)] as const,
    [end, halfOf(study, `end ${width}`)] as const,
  ]);

function levelPair({levels}: PlanCase, study: LineStudy): readonly [number, number] {
  const {lower, upper} = study.levels[1]!;
  const middle = (COUNT - 1) / 2;
  return [levels[1]!.halfWidth, 0.5 * (upper[middle]! - lower[middle]!)];
}

/** Plan and study put the same geometry to the same code; what is left is that a half-width is read off two ends. */
const ROUNDING = 1e-9;

describe("a plan and the line flown by it", () => {
  test.each(["gravity", "field-vertical", "gravity-along", "gravity-gradient"])(
    "the same half-widths for %s at two clearances",
    (name) => {
      // A gradient has the noise of mGal/m; the plan only scales with it.
      const plan = planSurvey(settingsFor(name, {clearances: [15, 30]}));
      for (const one of plan.cases) {
        const study = flown(name, {clearance: one.clearance});
        expect(worst([...stripPairs(one, study), levelPair(one, study)])).toBeLessThan(ROUNDING);
      }
    },
  );

  test("with a gradient channel, and with a second pass half as high", () => {
    const name = "field-vertical";
    const [one] = planSurvey(settingsFor(name)).cases;
    const noise = 0.02 * unitOf(name);
    const gradient = flown(name, {clearance: 15, more: [[`${name}-gradient`, Math.SQRT2 * noise, 0]]});
    const second = flown(name, {clearance: 15, more: [[name, noise, -7.5]]});
    for (const strip of one!.strips) {
      const place = `middle ${strip.width}`;
      const pairs = [
        [strip.withGradient!, halfOf(gradient, place)],
        [strip.withSecond!, halfOf(second, place)],
      ] as const;
      expect(worst(pairs)).toBeLessThan(ROUNDING);
      // More readings never widen the shortest interval by more than the search for it leaves: half a per cent in a.
      expect(strip.withSecond!).toBeLessThan(strip.middle);
      expect(strip.withGradient!).toBeLessThan(strip.middle * (1 + 1e-4));
    }
  });

  test("an uneven line comes within one per cent for a strip wider than its height, within five for a narrower one", () => {
    const random = seededRandom(3);
    const even = evenly(0, LENGTH, COUNT);
    // Heights ±5 % and stations a fifth of the spacing off, uniformly; the ends stay, since the support hangs on them.
    const chainage = even.map((x, i) =>
      i === 0 || i === COUNT - 1 ? x : x + 0.4 * SPACING * (random.uniform() - 0.5),
    );
    const clearance = even.map(() => 15 * (1 + 0.1 * (random.uniform() - 0.5)));
    const [one] = planSurvey(settingsFor("gravity")).cases;
    const [narrow, narrowAtEnd, wide, wideAtEnd] = stripPairs(one!, flown("gravity", {clearance, chainage}));
    // Measured: 0.3 % over 40 m; 1.6 % in the middle and 3.8 % at the end over 10 m, two thirds of the height.
    expect(worst([wide!, wideAtEnd!])).toBeLessThan(0.01);
    expect(worst([narrow!, narrowAtEnd!])).toBeLessThan(0.05);
    // And it is another line.
    expect(worst([wide!])).toBeGreaterThan(1e-6);
  });
});

describe("resolution and degrees of freedom", () => {
  test("come from the multiplier N/M², and are those of the study at that multiplier", () => {
    const [one] = planSurvey(settingsFor("gravity")).cases;
    expect(one!.multiplier).toBeCloseTo(COUNT / one!.norm ** 2, 12);
    const {curve} = flown("gravity", {clearance: 15});
    const k = curve.multiplier.findIndex((multiplier) => multiplier > one!.multiplier);
    // Between the two points of the curve; panels lose little of the continuum: 2 % allowed.
    expect(one!.degreesOfFreedom).toBeLessThan(1.02 * curve.degreesOfFreedom[k - 1]!);
    expect(one!.degreesOfFreedom).toBeGreaterThan(0.98 * curve.degreesOfFreedom[k]!);
  });
});

describe("the highest clearance", () => {
  test("is where the strength is two half-widths", () => {
    const settings = settingsFor("gravity", {stripStrength: 2.5 * unitOf("gravity"), stripWidths: [60], regional: -1});
    const {highest} = planSurvey(settings).cases[0]!.strips[0]!;
    const [there] = planSurvey({...settings, clearances: [highest!], stripStrength: undefined}).cases;
    // The search stops at 2e-3 in height; a half-width grows no faster than a few powers of it.
    expect(Math.abs((2 * there!.strips[0]!.middle) / (2.5 * unitOf("gravity")) - 1)).toBeLessThan(0.01);
  });

  test("noise that drowns everything leaves none; a strength beyond the bound is refused", () => {
    const drowned = settingsFor("gravity", {noises: [100 * unitOf("gravity")], stripStrength: 0.2 * unitOf("gravity")});
    expect(planSurvey(drowned).cases[0]!.strips.map(({highest}) => highest)).toEqual([undefined, undefined]);
    expect(() => planSurvey(settingsFor("gravity", {stripStrength: 50 * unitOf("gravity")}))).toThrow(ModelError);
  });
});

test("a rule that needs readings is refused", () => {
  const rule = boundRuleNamed("discrepancy", unitOf("gravity"));
  expect(() => planSurvey(settingsFor("gravity", {bounds: [rule]}))).toThrow(InputError);
  expect(() => planSurvey(settingsFor("gravity", {bounds: [rule]}))).toThrow(/--bound rms:V/);
});
