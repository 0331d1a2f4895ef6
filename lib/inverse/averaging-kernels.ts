/** Averaging kernels of the estimate at a handful of places, to look at. */
import type {Continuum} from "../operators/continuum.ts";
import {densityAt} from "../operators/functional.ts";
import {knownProduct} from "../operators/known-means.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {IntervalSolver} from "./intervals.ts";
import type {AveragingKernel, Resolution} from "./nouns.ts";

/** Shares of the way from the first panel below a station to the last. */
const PLACES = [0, 0.25, 0.5, 0.75, 1] as const;
/** Half the stretch that is looked at, in median resolutions, and samples on either side of x. */
const REACH = 5;
const SAMPLES = 48;

/**
 * R(x, t) = Σ_k η_k(x) η_k(t)/(λ_k + α), around x at the left end, a quarter, the middle … of the line. Its height is
 * R(x, x) = 1/width, so that a boxcar of that width and height has unit area.
 * Source: Backus & Gilbert, Geophys. J. R. astr. Soc. 16 (1968) 169 (from memory).
 *
 * @returns none where nothing is resolved
 */
export function averagingKernels(
  solver: IntervalSolver,
  continuum: Continuum,
  panels: Panels,
  {length, local}: Resolution,
  multiplier: number,
  stations: Float64Array,
): readonly AveragingKernel[] {
  const boundary = boundaryOfPanels(panels);
  const first = stations.reduce((a, b) => Math.min(a, b), Infinity);
  const last = stations.reduce((a, b) => Math.max(a, b), -Infinity);
  const all = [...panels.centre.keys()];
  const below = all.filter((j) => panels.to[j] >= first && panels.from[j] <= last);
  const among = below.length > 0 ? below : all;
  const chosen = new Set(PLACES.map((share) => among[Math.round(share * (among.length - 1))]));
  const response = new Float64Array(continuum.count);
  return [...chosen].flatMap((j) => {
    if (!Number.isFinite(local[j] + length)) return [];
    const at = panels.centre[j];
    const here = densityAt(at, boundary);
    const weights = solver.kernelWeights(here, multiplier);
    const chainage = Float64Array.from(
      {length: 2 * SAMPLES + 1},
      (_, k) => at + (REACH * length * (k - SAMPLES)) / SAMPLES,
    );
    const value = chainage.map((t) => {
      if (!continuum.support.some(({from, to}) => from <= t && t <= to)) return 0;
      const there = densityAt(t, boundary);
      there.respondInto(response, continuum, 0, continuum.count);
      return response.reduce((sum, p, i) => sum + p * weights[i], knownProduct(continuum, here, there));
    });
    return [{at, width: local[j], chainage, value}];
  });
}
