/**
 * The regional read off a whole line in the presence of sources, for intervals that look at a window of it.
 *
 * R spans the regional; any W with RᵀW = 1 makes c − W (Rᵀc) blind to it. The best is W = (G + a)⁻¹R [Rᵀ(G + a)⁻¹R]⁻¹:
 * with c = (G + a)⁻¹Pq from the whole line the result would be the best there is, for (G + a)⁻¹ − W Rᵀ(G + a)⁻¹ is the
 * inverse on what is orthogonal to R. W = R will not do: it takes the sources for regional, and where the line runs on
 * beyond the support it made intervals up to 400 times longer.
 */
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {type Continuum, gramTimes, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import type {RegionalBasis} from "../operators/regional.ts";

/** W and what the measures of an interval need of it. */
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
  continuum: Continuum,
  basis: RegionalBasis,
  data: Float64Array,
  bound: number,
): RegionalReader {
  const {terms, count} = basis;
  const weights = regionalWeights(continuum, basis, bound);
  const gramWeights = gramTimes(continuum, weights, terms);
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

/**
 * Neighbouring readings are taken together until no more than this many are left. Only a support that ends where the
 * line does needs them finer than a third of the height, or intervals grow by a tenth. A heuristic.
 */
const GROUPS = 600;
/** a in units of 1/M²: the middle, on a logarithmic scale, of what the functionals themselves choose. A heuristic. */
const STEADINESS = 30;

/** The same weights for all readings of a group; sums over it carry the root of its number, so that their noise stays one. */
function regionalWeights(continuum: Continuum, basis: RegionalBasis, bound: number): Float64Array {
  const {terms, count, rows} = basis;
  const most = Math.ceil(count / GROUPS);
  const groups = Math.ceil(count / most);
  const nodes = nodesFor(continuum, 0, count);
  const sums = new Float64Array(groups * nodes.count);
  const regional = new Float64Array(terms * groups);
  for (let k = 0; k < groups; ++k) {
    const first = k * most;
    const last = Math.min(count, first + most);
    const share = 1 / Math.sqrt(last - first);
    const part = nodeMatrix(continuum, nodes, first, last);
    for (let i = 0; i < last - first; ++i) {
      for (let j = 0; j < nodes.count; ++j) sums[k * nodes.count + j] += share * part[i * nodes.count + j];
      for (let t = 0; t < terms; ++t) regional[t * groups + k] += share * rows[t * count + first + i];
    }
  }
  const normal = multiplyTransposedInto(new Float64Array(groups * groups), sums, sums, groups, nodes.count, groups);
  for (let k = 0; k < groups; ++k) normal[k * groups + k] += STEADINESS / (bound * bound);
  choleskyInPlace(normal, groups);
  const solved = new Float64Array(terms * groups);
  for (let t = 0; t < terms; ++t) {
    const row = solved.subarray(t * groups, (t + 1) * groups);
    choleskySolveInto(row, normal, regional.subarray(t * groups, (t + 1) * groups), groups);
  }
  const size = multiplyTransposedInto(new Float64Array(terms * terms), solved, regional, terms, groups, terms);
  choleskyInPlace(size, terms);
  const weights = new Float64Array(terms * count);
  const one = new Float64Array(terms);
  for (let i = 0; i < count; ++i) {
    const k = Math.floor(i / most);
    const share = 1 / Math.sqrt(Math.min(count, (k + 1) * most) - k * most);
    for (let t = 0; t < terms; ++t) one[t] = share * solved[t * groups + k];
    choleskySolveInto(one, size, one, terms);
    for (let t = 0; t < terms; ++t) weights[t * count + i] = one[t];
  }
  return weights;
}
