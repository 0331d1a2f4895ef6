/** The number that the interval of a level is about, at one station. */
import {boundaryAt} from "../geometry/boundary-line.ts";
import type {Interval} from "../geometry/interval.ts";
import {stretchAt} from "../inverse/averages.ts";
import type {Resolution} from "../inverse/nouns.ts";
import type {Continuum} from "../operators/continuum.ts";
import {type Functional, fieldAt, meanOver} from "../operators/functional.ts";
import type {Panels} from "../operators/panels.ts";
import type {Response} from "../potential/kernel.ts";

/** What is bounded at chainage x: the field at that point, or on a flat boundary itself the mean of f over a stretch. */
export interface LevelFunctional {
  readonly functional: Functional;
  /** Undefined for a point. */
  readonly stretch: Interval | undefined;
}

/**
 * @param height above the boundary, m
 * @returns undefined off the support on the boundary itself, where f is zero
 */
export function levelFunctional(
  {panels, continuum, resolution}: {panels: Panels; continuum: Continuum; resolution: Resolution},
  x: number,
  height: number,
  response: Response,
): LevelFunctional | undefined {
  if (height > 0) {
    const z = boundaryAt(continuum.boundary, x) + height;
    return {functional: fieldAt(x, z, response, continuum), stretch: undefined};
  }
  const stretch = stretchAt(panels, resolution, x);
  return stretch && {functional: meanOver(stretch, continuum.support), stretch};
}

/** At most `most` stations above the support, spread evenly over their order along the line. */
export function spreadStations(chainage: Float64Array, {support}: Continuum, most: number): readonly number[] {
  const above = [...chainage.keys()]
    .filter((i) => support.some(({from, to}) => from <= chainage[i] && chainage[i] <= to))
    .sort((i, j) => chainage[i] - chainage[j] || i - j);
  if (above.length <= most) return above;
  return Array.from({length: most}, (_, k) => above[Math.round((k * (above.length - 1)) / (most - 1))]);
}

export const median = (values: readonly number[]): number => {
  const sorted = Float64Array.from(values).sort();
  return sorted.length === 0 ? Number.NaN : sorted[sorted.length >> 1];
};
