/** What the intervals would be at other bounds, where the bound was assumed and not given. */
import {averagedAt} from "../inverse/averages.ts";
import type {Interval} from "../inverse/intervals.ts";
import {partsOf, type Strip} from "../inverse/nouns.ts";
import {meanOver} from "../operators/functional.ts";
import {levelFunctional, median, spreadStations} from "./level-functional.ts";
import type {LevelSetting} from "./level-profile.ts";
import {type LevelQuestion, levelHeights, responsesOf} from "./levels.ts";

/** Times the assumed M. */
export const BOUND_FACTORS = [0.5, 1, 2, 4] as const;
export const LOOSEST_FACTOR = 4;

/** Stations of a level, and panels, at which half-widths are taken. */
const PLACES = 30;

export interface AtBound {
  /** The bound as a multiple of M, and itself, SI·√m. */
  readonly factor: number;
  readonly bound: number;
  /** Of the mean of each strip, in the order of the study; SI. */
  readonly strips: readonly Interval[];
  /** Median half-width of each level, in the order of the study; NaN for one without intervals. SI. */
  readonly levels: readonly number[];
  /** Median half-width of the averages of the panels; SI. */
  readonly averages: number;
}

/** @param bound M that was assumed; the solver must answer up to `LOOSEST_FACTOR` times it */
export function answersAtBounds(
  question: LevelQuestion,
  strips: readonly Strip[],
  settings: readonly LevelSetting[],
  bound: number,
): readonly AtBound[] {
  const {conditioned, panels, continuum, solver, resolution, quantity} = question;
  const {support, boundary} = continuum;
  const {chainage} = conditioned.line.stations;
  const {observable} = conditioned.channels[0].channel;
  const [response, second] = responsesOf(quantity, observable.source.method, conditioned.direction);
  const places = spreadStations(chainage, continuum, PLACES);
  const means = strips.map((strip) => meanOver(strip, support, boundary, partsOf(strip)));
  const averages = places.map((i) => averagedAt(panels, resolution, support, chainage[i])!);
  const levels = settings.map((setting) => {
    if (second !== undefined) return [];
    const heights = levelHeights(setting, conditioned);
    // The limit on a boundary that slopes has no interval.
    return places
      .filter((i) => heights[i] > 0 || boundary === undefined)
      .map((i) => levelFunctional(question, chainage[i], heights[i], response)!.functional);
  });
  return BOUND_FACTORS.map((factor) => {
    const half = (asked: Parameters<typeof solver.interval>[0]): number => solver.interval(asked, factor).halfWidth;
    return {
      factor,
      bound: factor * bound,
      strips: means.map((mean) => solver.interval(mean, factor)),
      levels: levels.map((functionals) => median(functionals.map(half))),
      averages: median(averages.map(half)),
    };
  });
}
