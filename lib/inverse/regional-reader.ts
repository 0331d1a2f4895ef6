/**
 * The regional read off a whole line in the presence of sources, for intervals that look at a window of it.
 *
 * R spans the regional; any W with RᵀW = 1 makes c − W (Rᵀc) blind to it. The best is W = (G + a)⁻¹R [Rᵀ(G + a)⁻¹R]⁻¹:
 * with c = (G + a)⁻¹Pq from the whole line the result is the best there is, for (G + a)⁻¹ − W Rᵀ(G + a)⁻¹ is the
 * inverse on what is orthogonal to R. W = R will not do: it takes the sources for regional, and where the line runs on
 * beyond the support it made intervals up to 400 times longer.
 */
import {NumericalError} from "../errors.ts";
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {multiplyTransposedInto} from "../numeric/matmul.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import type {WholeLine} from "./whole-line.ts";

/** W for one `a`, and what the measures of an interval need of it. */
export interface RegionalReader {
  /** W, terms × count, row-major; Wᵀ W, Wᵀ G W. */
  readonly weights: Float64Array;
  readonly products: Float64Array;
  readonly gram: Float64Array;
  /** G W, terms × count. */
  readonly gramWeights: Float64Array;
}

export function regionalReader(line: WholeLine, basis: RegionalBasis, a: number): RegionalReader {
  const {terms, count, rows} = basis;
  const solved = new Float64Array(terms * count);
  for (let t = 0; t < terms; ++t) solved.set(line.solve(a, rows.subarray(t * count, (t + 1) * count)), t * count);
  const weights = steadyWeights(solved, basis);
  const gramWeights = new Float64Array(terms * count);
  for (let t = 0; t < terms; ++t) gramWeights.set(line.gram(weights.subarray(t * count, (t + 1) * count)), t * count);
  const square = (vectors: Float64Array): Float64Array =>
    multiplyTransposedInto(new Float64Array(terms * terms), weights, vectors, terms, count, terms);
  return {
    weights,
    gramWeights,
    products: square(weights),
    gram: square(gramWeights),
  };
}

/**
 * What is added to (G + a)⁻¹, over its largest value on the regional, until rounding leaves RᵀK⁻¹R positive. The largest
 * are for solutions that steps did not reach, and cost length.
 */
const LIFTS = [0, 1e-14, 1e-12, 1e-10, 1e-8, 1e-6, 1e-4, 1e-2, 1, 100] as const;
/** How far RᵀW may be from 1 to be brought there; and how near is enough, which one correction mostly reaches. */
const IN_REACH = 0.1;
const NEAR = 1e-12;

/**
 * W = K⁻¹R (RᵀK⁻¹R)⁻¹, K⁻¹R in `solved` (overwritten), with K⁻¹ + μ in place of K⁻¹. Two channels with a level each, of
 * which sources can mimic the sum and not the difference, make RᵀK⁻¹R all but singular. Any μ makes a valid W, and one at
 * rounding costs nothing.
 */
function steadyWeights(solved: Float64Array, basis: RegionalBasis): Float64Array {
  const {terms, count, rows} = basis;
  const plain = multiplyTransposedInto(new Float64Array(terms * terms), solved, rows, terms, count, terms);
  const largest = plain.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  let lifted = 0;
  for (const lift of LIFTS) {
    const size = Float64Array.from(plain);
    for (let t = 0; t < terms; ++t) size[t * terms + t] += lift * largest;
    try {
      choleskyInPlace(size, terms);
    } catch (error) {
      if (error instanceof NumericalError) continue;
      throw error;
    }
    for (let e = 0; e < solved.length; ++e) solved[e] += (lift - lifted) * largest * rows[e];
    lifted = lift;
    const weights = divided(solved, size, terms, count);
    // What rounding left of RᵀW = 1 is taken out once more: W ← W (2 − RᵀW), for the regional may be large.
    const off = correctInPlace(weights, basis);
    if (!(off < IN_REACH)) continue;
    for (let left = off * off; left > NEAR; left *= left) correctInPlace(weights, basis);
    return weights;
  }
  throw new NumericalError(
    "numeric/no-convergence",
    "The regional could not be read off the line: its solutions are not numbers.",
  );
}

/** Each column of `solved`, a station's, by the factor of the matrix of terms. */
function divided(solved: Float64Array, factor: Float64Array, terms: number, count: number): Float64Array {
  const weights = new Float64Array(terms * count);
  const one = new Float64Array(terms);
  for (let i = 0; i < count; ++i) {
    for (let t = 0; t < terms; ++t) one[t] = solved[t * count + i];
    choleskySolveInto(one, factor, one, terms);
    for (let t = 0; t < terms; ++t) weights[t * count + i] = one[t];
  }
  return weights;
}

/** W ← W (2 − RᵀW). @returns how far RᵀW was from 1 */
function correctInPlace(weights: Float64Array, {terms, count, rows}: RegionalBasis): number {
  const unit = multiplyTransposedInto(new Float64Array(terms * terms), rows, weights, terms, count, terms);
  const one = new Float64Array(terms);
  for (let i = 0; i < count; ++i) {
    for (let t = 0; t < terms; ++t) one[t] = weights[t * count + i];
    for (let t = 0; t < terms; ++t) {
      let sum = 2 * one[t];
      for (let u = 0; u < terms; ++u) sum -= one[u] * unit[u * terms + t];
      weights[t * count + i] = sum;
    }
  }
  return Math.sqrt(unit.reduce((sum, value, e) => sum + (value - (e % (terms + 1) === 0 ? 1 : 0)) ** 2, 0));
}
