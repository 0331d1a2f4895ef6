/** The half-width of an affine interval from its standard deviation and worst bias, and the search for the shortest. */
import {foldedNormalQuantile} from "../numeric/normal.ts";
import {minimise} from "../numeric/roots.ts";

/**
 * Search range of a, in units of 1/M². The best a is (δ/M)² with δ between one and a few standard deviations of
 * noise (Donoho 1994); the range is wide of that on both sides.
 */
export const A_RANGE = [0.02, 400] as const;

/** cv(b/s)·s; all bias where nothing is read. */
export function halfWidthOf(deviation: number, bias: number, confidence: number): number {
  if (!(deviation > 1e-12 * bias)) return bias;
  return foldedNormalQuantile(bias / deviation, confidence) * deviation;
}

/** ln a with the shortest interval; the width is flat there, its own error second order in that of ln a. */
export function shortest(width: (logA: number) => number, bound: number, precision: number): number {
  const unit = -2 * Math.log(bound);
  return minimise(width, unit + Math.log(A_RANGE[0]), unit + Math.log(A_RANGE[1]), precision).x;
}
