/**
 * What a survey can promise before it is flown. Half-widths depend on geometry, noise and bound and never on the
 * readings, so that a line of stations without readings, put to the solver of `studyLine`, has the same ones.
 */
import {ModelError} from "../errors.ts";
import {resolutionOf, stretchAt} from "../inverse/averages.ts";
import type {Resolution} from "../inverse/nouns.ts";
import type {BoundRule} from "../inverse/rules/rule.ts";
import {fieldAt, meanOver} from "../operators/functional.ts";
import {OBSERVABLES} from "../potential/catalogue.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import type {Observable} from "../potential/observable.ts";
import {highestClearance} from "./highest-clearance.ts";
import type {PlannedChannel} from "./planned-line.ts";
import {type PlannedWork, type PlanQuestion, type PlanSettings, plannedWork} from "./planned-work.ts";

/** Half-widths of the mean of f over a strip, SI; undefined where there is no such sensor. */
export interface PlannedStrip {
  readonly width: number;
  readonly middle: number;
  /** The strip begins at the first station. */
  readonly end: number;
  /** In the middle, with the vertical gradient read at the same stations as well. */
  readonly withGradient: number | undefined;
  /** In the middle, with a second pass at the second clearance. */
  readonly withSecond: number;
  /** Highest clearance at which the strength asked is told from nothing; undefined: at none, or not asked. */
  readonly highest: number | undefined;
}

export interface PlanCase {
  readonly observable: Observable;
  readonly clearance: number;
  readonly spacing: number;
  readonly noise: number;
  readonly bound: BoundRule;
  /** M, SI·√m. */
  readonly norm: number;
  readonly stations: number;
  readonly supportLength: number;
  readonly multiplier: number;
  readonly resolution: number;
  readonly degreesOfFreedom: number;
  readonly gradientNoise: number | undefined;
  readonly secondClearance: number;
  readonly strips: readonly PlannedStrip[];
  /** Half-width of the field, mid-line; SI. On level 0 of its mean over the resolution length. */
  readonly levels: readonly {readonly level: number; readonly halfWidth: number}[];
}

export interface Plan {
  readonly settings: PlanSettings;
  readonly cases: readonly PlanCase[];
}

/** The observable that reads how `observable` changes downward; undefined where none is known. */
const gradientFor = (observable: Observable): Observable | undefined =>
  OBSERVABLES.find(({name}) => name === `${observable.name}-gradient`);

/** √2: both sensors of the pair have the noise, independently. */
const pairNoise = (noise: number, separation: number): number => (Math.SQRT2 * noise) / separation;

/**
 * Multiplier α = N/M²: a source at the bound with the misfit that noise leaves, N, gives misfit and α·norm² equal
 * weight. Source: K. Miller, SIAM J. Math. Anal. 1 (1970) 52 (from memory). The one that readings lead to is known
 * afterwards only; resolution and degrees of freedom follow it, half-widths do not.
 */
const expectedMultiplier = (readings: number, norm: number): number => readings / (norm * norm);

function planCase(observable: Observable, noise: number, question: PlanQuestion, settings: PlanSettings): PlanCase {
  const {clearance, spacing, bound} = question;
  const {length, stripWidths, stripStrength, separation} = settings;
  const middle = 0.5 * length;
  const first: PlannedChannel = {observable, noise, above: 0};
  const work = plannedWork(question, settings, [first]);
  const multiplier = expectedMultiplier(work.stations.length, work.norm);
  const resolution = resolutionOf(work.intervals, work.panels, multiplier, work.stations);
  const gradient = gradientFor(observable);
  const gradientNoise = gradient && (settings.gradientNoise ?? pairNoise(noise, separation));
  const withGradient =
    gradient && plannedWork(question, settings, [first, {observable: gradient, noise: gradientNoise!, above: 0}]);
  const secondClearance = settings.secondClearance ?? 0.5 * clearance;
  const withSecond = plannedWork(question, settings, [first, {...first, above: secondClearance - clearance}]);
  for (const width of stripWidths) refuseBeyondBound(stripStrength, width, work.norm, bound);
  return {
    observable,
    clearance,
    spacing,
    noise,
    bound,
    norm: work.norm,
    stations: work.stations.length,
    supportLength: work.supportLength,
    multiplier,
    resolution: resolution.length,
    // The trace of the averaging kernel, ∫ R(x, x) dx.
    degreesOfFreedom: resolution.local.reduce((sum, own, j) => sum + work.panels.width[j] / own, 0),
    gradientNoise,
    secondClearance,
    strips: stripWidths.map((width) => ({
      width,
      middle: work.strip(middle, width),
      end: work.strip(0.5 * width, width),
      withGradient: withGradient?.strip(middle, width),
      withSecond: withSecond.strip(middle, width),
      highest:
        stripStrength === undefined
          ? undefined
          : highestClearance(width, Math.abs(stripStrength), question, settings, first),
    })),
    levels: settings.levels.map((level) => ({level, halfWidth: levelWidth(work, resolution, middle, level)})),
  };
}

/** As `continueField` asks: on the boundary of a mean, above it of the point. */
function levelWidth({intervals, panels, continuum}: PlannedWork, resolution: Resolution, x: number, level: number) {
  if (level > 0)
    return intervals.interval(fieldAt(x, level, BOUNDARY_FIELD.responses(undefined)[0], continuum)).halfWidth;
  const stretch = stretchAt(panels, resolution, x);
  return stretch === undefined ? 0 : intervals.interval(meanOver(stretch, continuum.support)).halfWidth;
}

/** A strip of mean V has a norm of V·√width at least. */
function refuseBeyondBound(strength: number | undefined, width: number, norm: number, bound: BoundRule): void {
  if (strength === undefined || !(Math.abs(strength) * Math.sqrt(width) > norm)) return;
  throw new ModelError(
    "plan/strength-beyond-bound",
    `A strip ${width} m wide of the strength asked exceeds the bound ${bound.text} by itself, ${((Math.abs(strength) * Math.sqrt(width)) / norm).toPrecision(3)} times: no source within the bound holds it. Give a wider --bound or a smaller --strip-strength.`,
  );
}

/** Observable by observable, every combination of clearance, spacing, noise and bound in that order. */
export function planSurvey(settings: PlanSettings, step: (done: number, of: number) => void = () => undefined): Plan {
  const cases: PlanCase[] = [];
  const {observables, clearances, spacings, noises, bounds} = settings;
  const of = observables.length * clearances.length * spacings.length * noises.length * bounds.length;
  for (const observable of observables)
    for (const clearance of clearances)
      for (const spacing of spacings)
        for (const noise of noises)
          for (const bound of bounds) {
            cases.push(planCase(observable, noise, {clearance, spacing, bound}, settings));
            step(cases.length, of);
          }
  return {settings, cases};
}
