/** The operators and the solver of one combination of a plan: those that `studyLine` would use on such a line. */
import {InputError} from "../errors.ts";
import {totalLength} from "../geometry/interval.ts";
import type {IntervalSolver} from "../inverse/intervals.ts";
import type {BoundRule} from "../inverse/rules/rule.ts";
import type {Continuum} from "../operators/continuum.ts";
import {meanOver} from "../operators/functional.ts";
import type {Panels} from "../operators/panels.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import type {Observable} from "../potential/observable.ts";
import {condition} from "../survey/condition.ts";
import {intervalsOn} from "./operated.ts";
import {type PlannedChannel, plannedLine} from "./planned-line.ts";
import type {ModelSettings} from "./settings.ts";
import {panelsOfLine, supportOfLine} from "./support-of-line.ts";

/** SI and metres, as in `Settings`. */
export interface PlanSettings {
  /** All of one dimension, since they share the noise. */
  readonly observables: readonly Observable[];
  /** Of the Earth's field along the line, where an observable needs it. */
  readonly direction: EffectiveDirection | undefined;
  readonly clearances: readonly number[];
  readonly spacings: readonly number[];
  readonly noises: readonly number[];
  /** Given ones only: a rule needs data. */
  readonly bounds: readonly BoundRule[];
  readonly stripWidths: readonly number[];
  /** Above the boundary. */
  readonly levels: readonly number[];
  readonly length: number;
  /** Of the boundary below the ground; 0 is the ground. */
  readonly boundaryDepth: number;
  readonly support: ModelSettings["support"];
  readonly regional: ModelSettings["regional"];
  readonly confidence: number;
  /** Mean of f over a strip that is to be told from nothing; undefined: not asked. */
  readonly stripStrength: number | undefined;
  /** Undefined: √2 noise over `separation`. */
  readonly gradientNoise: number | undefined;
  readonly separation: number;
  /** Undefined: half the clearance. */
  readonly secondClearance: number | undefined;
}

/** A combination before it is worked out. */
export interface PlanQuestion {
  readonly clearance: number;
  readonly spacing: number;
  readonly bound: BoundRule;
}

export interface PlannedWork {
  readonly norm: number;
  readonly supportLength: number;
  readonly stations: Float64Array;
  readonly panels: Panels;
  readonly continuum: Continuum;
  readonly intervals: IntervalSolver;
  /** Half-width of the mean over `width` metres around `centre`. */
  strip(centre: number, width: number): number;
}

/** @throws {InputError} `plan/bound-needs-data`, and what heights and support of a line throw */
export function plannedWork(
  question: PlanQuestion,
  settings: PlanSettings,
  channels: readonly PlannedChannel[],
): PlannedWork {
  const {length, boundaryDepth, support: asked, regional, confidence, direction} = settings;
  const norm = question.bound.norm;
  if (norm === undefined)
    throw new InputError(
      "plan/bound-needs-data",
      `The bound ${question.bound.text} is chosen from readings, and before a survey there are none: a plan without a bound promises nothing. Give the strength that the sources cannot exceed, --bound rms:V or --bound norm:V.`,
    );
  const line = plannedLine(length, question.spacing, question.clearance, channels);
  const boundary = {kind: "depth", depth: boundaryDepth} as const;
  const model: ModelSettings = {boundary, support: asked, panel: undefined, regional};
  const conditioned = condition(line, boundary, direction);
  const support = supportOfLine(conditioned, model, undefined);
  const panels = panelsOfLine(conditioned, support, model);
  const supportLength = totalLength(support);
  const bound = norm(supportLength);
  const {continuum, intervals} = intervalsOn(conditioned, {support, panels, degree: regional, bound, confidence});
  return {
    norm: bound,
    supportLength,
    stations: line.stations.chainage,
    panels,
    continuum,
    intervals,
    strip: (centre, width) =>
      intervals.interval(meanOver({from: centre - 0.5 * width, to: centre + 0.5 * width}, support)).halfWidth,
  };
}
