/**
 * G ≈ F Fᵀ for a positive semidefinite matrix of low numerical rank: Cholesky with the largest remaining diagonal entry
 * as next pivot, rows and columns exchanged, in panels so that the work is in matrix products.
 * Source: N. Higham, Accuracy and Stability of Numerical Algorithms (2002), §10.3 (from memory).
 */
import {block} from "./block.ts";
import {matVecInto, multiplyInto} from "./matmul.ts";
import {addLowerProductTransposed, addProductTransposed} from "./tile-product.ts";

/** Columns finished before the rest is updated, and rows of FᵀF formed at a time; heuristics. */
const PANEL = 64;
const STRIP = 128;

/** Orders below which a factor saves less than finding it costs, and the share of the order that its rank must stay below; heuristics. */
const LEAST_ORDER = 160;
const LOW_RANK = 0.8;
/** Neighbouring rows that are tried first, at most half of all. */
const SAMPLE = 128;
const EPSILON = 2 ** -52;

export interface PivotedFactor {
  readonly rank: number;
  /** The row of G that was k-th pivot, then those left over. */
  readonly order: Int32Array;
  /** rank × n row-major: Fᵀ, columns in the order of the pivots; upper trapezoidal. */
  readonly transposed: Float64Array;
}

/**
 * The factor, down to the rounding of G, where its rank is well below the order; undefined elsewhere, as some rows in
 * the middle show, neighbours being those that are alike.
 *
 * @param g n × n row-major, positive semidefinite; overwritten where it has a factor
 * @param negligible what the trace of G may lose beside its rounding
 */
export function lowRankFactorInPlace(g: Float64Array, n: number, negligible = 0): PivotedFactor | undefined {
  if (n < LEAST_ORDER) return undefined;
  const some = Math.min(SAMPLE, n >> 1);
  const first = (n - some) >> 1;
  const sample = new Float64Array(some * some);
  for (let i = 0; i < some; ++i) {
    const at = (first + i) * n + first;
    sample.set(g.subarray(at, at + some), i * some);
  }
  const tried = pivotedFactorInPlace(sample, some, Math.max(negligible, roundingOf(sample, some)));
  if (tried.rank > LOW_RANK * some) return undefined;
  return pivotedFactorInPlace(g, n, Math.max(negligible, roundingOf(g, n)));
}

/** What methods for eigenvalues promise of G, √n ε‖G‖: ‖G‖ is at least Σλ²/Σλ, all λ being positive. */
function roundingOf(g: Float64Array, n: number): number {
  let squares = 0;
  for (let at = 0; at < n * n; ++at) squares += g[at] * g[at];
  let trace = 0;
  for (let i = 0; i < n; ++i) trace += g[i * n + i];
  return trace > 0 ? (Math.sqrt(n) * EPSILON * squares) / trace : 0;
}

/**
 * @param g n × n row-major, the lower triangle is read and overwritten
 * @param negligible the factor is complete once the trace of what is left is not above it
 */
export function pivotedFactorInPlace(g: Float64Array, n: number, negligible: number): PivotedFactor {
  const order = Int32Array.from({length: n}, (_, i) => i);
  const rest = new Float64Array(n);
  for (let i = 0; i < n; ++i) rest[i] = g[i * n + i];
  let rank = 0;
  for (let first = 0; first < n && rank === first; first += PANEL) {
    const end = Math.min(n, first + PANEL);
    for (; rank < end; ++rank) {
      if (!(remaining(rest, rank) > negligible)) break;
      const pivot = largestFrom(rest, rank);
      // Rounding alone is left, however its trace adds up.
      if (!(rest[pivot] > 0)) break;
      exchange(g, n, rank, pivot);
      [order[rank], order[pivot]] = [order[pivot], order[rank]];
      [rest[rank], rest[pivot]] = [rest[pivot], rest[rank]];
      columnInPlace(g, n, first, rank, rest);
    }
    if (rank === end) updateRest(g, n, first, end);
  }
  const transposed = new Float64Array(rank * n);
  for (let i = 0; i < n; ++i) for (let k = 0; k < rank && k <= i; ++k) transposed[k * n + i] = g[i * n + k];
  return {rank, order, transposed};
}

function remaining(rest: Float64Array, from: number): number {
  let sum = 0;
  for (let i = from; i < rest.length; ++i) sum += Math.max(0, rest[i]);
  return sum;
}

function largestFrom(rest: Float64Array, from: number): number {
  let at = from;
  for (let i = from + 1; i < rest.length; ++i) if (rest[i] > rest[at]) at = i;
  return at;
}

/** Exchanges rows and columns p < q of a matrix of which the lower triangle is kept. */
function exchange(g: Float64Array, n: number, p: number, q: number): void {
  if (p === q) return;
  const swap = (a: number, b: number): void => {
    const kept = g[a];
    g[a] = g[b];
    g[b] = kept;
  };
  for (let j = 0; j < p; ++j) swap(p * n + j, q * n + j);
  for (let j = p + 1; j < q; ++j) swap(j * n + p, q * n + j);
  for (let i = q + 1; i < n; ++i) swap(i * n + p, i * n + q);
  swap(p * n + p, q * n + q);
}

/** Column k of the factor; the panel begins at `first`, and what was before it has been taken off already. */
function columnInPlace(g: Float64Array, n: number, first: number, k: number, rest: Float64Array): void {
  const own = k * n;
  const root = Math.sqrt(rest[k]);
  g[own + k] = root;
  for (let i = k + 1; i < n; ++i) {
    const row = i * n;
    let sum = g[row + k];
    for (let l = first; l < k; ++l) sum -= g[row + l] * g[own + l];
    sum /= root;
    g[row + k] = sum;
    rest[i] -= sum * sum;
  }
}

function updateRest(g: Float64Array, n: number, first: number, end: number): void {
  const finished = block(g, end * n + first, n);
  addLowerProductTransposed(block(g, end * n + end, n), finished, finished, end - first, n - end, -1);
}

/** The lower triangle of FᵀF, rank × rank. */
export function factorGram({rank, order, transposed}: PivotedFactor): Float64Array {
  const n = order.length;
  const gram = new Float64Array(rank * rank);
  // Rows from `begin` on are zero before that column.
  for (let begin = 0; begin < rank; begin += STRIP) {
    const end = Math.min(rank, begin + STRIP);
    const rows = block(transposed, begin * n + begin, n);
    const earlier = block(transposed, begin, n);
    if (begin > 0)
      addProductTransposed(block(gram, begin * rank, rank), rows, earlier, end - begin, n - begin, begin, 1);
    addLowerProductTransposed(block(gram, begin * rank + begin, rank), rows, rows, n - begin, end - begin, 1);
  }
  return gram;
}

/** Fᵀ x. */
export function factorTransposedTimes({rank, order, transposed}: PivotedFactor, x: Float64Array): Float64Array {
  const permuted = Float64Array.from(order, (i) => x[i]);
  return matVecInto(new Float64Array(rank), transposed, permuted, rank, order.length);
}

/** F y. */
export function factorTimes({rank, order, transposed}: PivotedFactor, y: Float64Array): Float64Array {
  const n = order.length;
  const permuted = new Float64Array(n);
  for (let k = 0; k < rank; ++k) for (let i = k; i < n; ++i) permuted[i] += transposed[k * n + i] * y[k];
  const x = new Float64Array(n);
  for (let i = 0; i < n; ++i) x[order[i]] = permuted[i];
  return x;
}

/** F y for `count` vectors y, one a row, as rows. */
export function factorTimesRows(
  {rank, order, transposed}: PivotedFactor,
  y: Float64Array,
  count: number,
): Float64Array {
  const n = order.length;
  const permuted = multiplyInto(new Float64Array(count * n), y, transposed, count, rank, n);
  const x = new Float64Array(count * n);
  for (let k = 0; k < count * n; k += n) for (let i = 0; i < n; ++i) x[k + order[i]] = permuted[k + i];
  return x;
}
