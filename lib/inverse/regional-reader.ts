/**
 * The regional read off a whole line in the presence of sources, for intervals that look at a window of it.
 *
 * R spans the regional; any W with RᵀW = 1 makes c − W (Rᵀc) blind to it. The best is W = (G + a)⁻¹R [Rᵀ(G + a)⁻¹R]⁻¹:
 * with c = (G + a)⁻¹Pq from the whole line the result is the best there is, for (G + a)⁻¹ − W Rᵀ(G + a)⁻¹ is the
 * inverse on what is orthogonal to R. W = R will not do: it takes the sources for regional, and where the line runs on
 * beyond the support it made intervals up to 400 times longer.
 */
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import type {WholeLine} from "./whole-line.ts";

/** W for one `a`, and what the measures of an interval need of it. */
export interface RegionalReader {
  /** W, terms × count, row-major; Wᵀ W, Wᵀ G W, Wᵀ d. */
  readonly weights: Float64Array;
  readonly products: Float64Array;
  readonly gram: Float64Array;
  readonly data: Float64Array;
  /** G W, terms × count. */
  readonly gramWeights: Float64Array;
}

export function regionalReader(
  line: WholeLine,
  {terms, count, rows}: RegionalBasis,
  data: Float64Array,
  a: number,
): RegionalReader {
  const solved = new Float64Array(terms * count);
  for (let t = 0; t < terms; ++t) solved.set(line.solve(a, rows.subarray(t * count, (t + 1) * count)), t * count);
  const size = multiplyTransposedInto(new Float64Array(terms * terms), solved, rows, terms, count, terms);
  choleskyInPlace(size, terms);
  const weights = new Float64Array(terms * count);
  const one = new Float64Array(terms);
  for (let i = 0; i < count; ++i) {
    for (let t = 0; t < terms; ++t) one[t] = solved[t * count + i];
    choleskySolveInto(one, size, one, terms);
    for (let t = 0; t < terms; ++t) weights[t * count + i] = one[t];
  }
  // What rounding left of RᵀW = 1 is taken out once more: W ← W (2 − RᵀW), for the regional may be large.
  const unit = multiplyTransposedInto(new Float64Array(terms * terms), rows, weights, terms, count, terms);
  for (let i = 0; i < count; ++i) {
    for (let t = 0; t < terms; ++t) one[t] = weights[t * count + i];
    for (let t = 0; t < terms; ++t) {
      let sum = 2 * one[t];
      for (let u = 0; u < terms; ++u) sum -= one[u] * unit[u * terms + t];
      weights[t * count + i] = sum;
    }
  }
  const gramWeights = new Float64Array(terms * count);
  for (let t = 0; t < terms; ++t) gramWeights.set(line.gram(weights.subarray(t * count, (t + 1) * count)), t * count);
  const square = (vectors: Float64Array): Float64Array =>
    multiplyTransposedInto(new Float64Array(terms * terms), weights, vectors, terms, count, terms);
  return {
    weights,
    gramWeights,
    products: square(weights),
    gram: square(gramWeights),
    data: matVecInto(new Float64Array(terms), weights, data, terms, count),
  };
}
