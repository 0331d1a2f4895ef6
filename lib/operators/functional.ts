/**
 * Numbers asked of f: a mean over stretches of the boundary, or the field at a point above it. Each knows its own
 * norm in L²(S) and, exactly, what every reading has in common with it.
 */
import {clip, type Interval, type Support, totalLength} from "../geometry/interval.ts";
import {gramEntry, supportLogarithm} from "../potential/gram.ts";
import {harmonicMeasure, poissonKernel} from "../potential/poisson.ts";
import type {Continuum} from "./continuum.ts";

export interface Functional {
  /** Where it looks, m of chainage: windows of stations are chosen around it. */
  readonly from: number;
  readonly to: number;
  /** How far it spreads beyond that: the height of the point, m. */
  readonly spread: number;
  /** ‖q‖² in L²(S), 1/m; infinite for a point of the boundary. */
  readonly normSquared: number;
  /** Writes ⟨p_i, q⟩, whitened, for the stations `first … last − 1` to the head of `target`. */
  respondInto(target: Float64Array, continuum: Continuum, first: number, last: number): Float64Array;
}

/**
 * Mean of f over `interval`; outside the support f is zero, and counts as zero.
 * @param stretches where the mean is over parts of the interval only: these
 */
export function meanOver(interval: Interval, support: Support, stretches: Support = [interval]): Functional {
  const parts = stretches.flatMap((stretch) => clip(stretch, support));
  const length = totalLength(stretches);
  const inside = parts.reduce((sum, part) => sum + part.to - part.from, 0);
  return {
    from: interval.from,
    to: interval.to,
    spread: 0,
    normSquared: inside / (length * length),
    respondInto(target, continuum, first, last) {
      const scale = 1 / (length * continuum.noise);
      for (let i = first; i < last; ++i) {
        let sum = 0;
        for (const part of parts) sum += harmonicMeasure(continuum.x[i], continuum.z[i], part.from, part.to);
        target[i - first] = sum * scale;
      }
      return target;
    },
  };
}

/** Field of f at height z > 0 above chainage x: q = P_z(x − ·) on the support. */
export function fieldAt(x: number, z: number, support: Support): Functional {
  const point = supportLogarithm(support, x, z);
  return {
    from: x,
    to: x,
    spread: z,
    normSquared: gramEntry(support, point, point),
    respondInto(target, continuum, first, last) {
      for (let i = first; i < last; ++i) {
        const station = {x: continuum.x[i], z: continuum.z[i], re: continuum.logRe[i], im: continuum.logIm[i]};
        target[i - first] = gramEntry(support, station, point) / continuum.noise;
      }
      return target;
    },
  };
}

/** f itself at a point of the boundary: not bounded by any norm, but it has an averaging kernel. */
export const densityAt = (x: number): Functional => ({
  from: x,
  to: x,
  spread: 0,
  normSquared: Infinity,
  respondInto(target, continuum, first, last) {
    for (let i = first; i < last; ++i)
      target[i - first] = poissonKernel(x - continuum.x[i], continuum.z[i]) / continuum.noise;
    return target;
  },
});
