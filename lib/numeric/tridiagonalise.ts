/**
 * A = Q T Qᵀ: a symmetric matrix brought to tridiagonal form by Householder
 * reflections, Q = H_{n−1} … H_1 with H_i = I − τ_i v_i v_iᵀ.
 *
 * Row i (from the last upwards) is cleared left of its first subdiagonal, so
 * v_i lives in columns 0 … i − 1 and everything touched lies along rows. The
 * rows are taken in panels: within one, the rest of the matrix is left as it was
 * and corrected on the fly; after it, one symmetric rank-2b update follows.
 * Source: J. Dongarra, D. Sorensen & S. Hammarling, J. Comput. Appl. Math. 27
 * (1989) 215–227, the block form; Golub & Van Loan, Matrix Computations, §8.3.
 */
import {block} from "./block.ts";
import {addLowerProductTransposed} from "./tile-product.ts";

/** Rows in one panel; a heuristic, flat between 16 and 48. */
const PANEL = 32;
/** A column whose squares sum below this is left standing: entries under 1e-140 of a matrix of norm one. */
const NEGLIGIBLE_SQUARE = 1e-280;

export interface Tridiagonal {
  /** n diagonal entries. */
  readonly diagonal: Float64Array;
  /** n entries; `[i]` couples i and i + 1, the last is 0. */
  readonly offDiagonal: Float64Array;
  /** n × n; row i holds v_i in its first i columns, what stands right of it is left over. */
  readonly reflectors: Float64Array;
  /** n multipliers τ_i; 0 where nothing was reflected. */
  readonly multipliers: Float64Array;
}

/**
 * Overwrites `a`, of which only the lower triangle is read, with the reflectors.
 *
 * @param a n × n row-major, largest entry about one (the caller scales)
 */
export function tridiagonaliseInPlace(a: Float64Array, n: number): Tridiagonal {
  const diagonal = new Float64Array(n);
  const offDiagonal = new Float64Array(n);
  const multipliers = new Float64Array(n);
  const w = new Float64Array(PANEL * n);
  const left = new Float64Array(2 * PANEL * n);
  const right = new Float64Array(2 * PANEL * n);
  for (let top = n; top > 0; ) {
    const width = Math.min(PANEL, top);
    const bottom = top - width;
    for (let p = 0; p < width; ++p) {
      const i = top - 1 - p;
      const row = i * n;
      for (let q = 0; q < p; ++q) {
        const vq = (top - 1 - q) * n;
        const wq = q * n;
        const vi = a[vq + i];
        const wi = w[wq + i];
        for (let c = 0; c <= i; ++c) a[row + c] -= vi * w[wq + c] + wi * a[vq + c];
      }
      diagonal[i] = a[row + i];
      if (i === 0) break;
      multipliers[i] = reflectInPlace(a, row, i, offDiagonal);
      updateVectorInto(w, p, a, top, i, n, multipliers[i]);
    }
    if (bottom > 0) updateRest(a, w, left, right, top, width, n);
    top = bottom;
  }
  return {diagonal, offDiagonal, reflectors: a, multipliers};
}

/** Makes v_i of row i in place, with its last entry 1, and returns τ_i. */
function reflectInPlace(a: Float64Array, row: number, i: number, offDiagonal: Float64Array): number {
  const pivot = row + i - 1;
  const alpha = a[pivot];
  let sum = 0;
  for (let c = row; c < pivot; ++c) sum += a[c] * a[c];
  if (sum < NEGLIGIBLE_SQUARE) {
    offDiagonal[i - 1] = alpha;
    a.fill(0, row, pivot + 1);
    return 0;
  }
  const beta = alpha > 0 ? -Math.sqrt(alpha * alpha + sum) : Math.sqrt(alpha * alpha + sum);
  const scale = 1 / (alpha - beta);
  for (let c = row; c < pivot; ++c) a[c] *= scale;
  a[pivot] = 1;
  offDiagonal[i - 1] = beta;
  return (beta - alpha) / beta;
}

/** Row p of `w`: the vector w with A ← A − v wᵀ − w vᵀ, v that of row i. */
function updateVectorInto(
  w: Float64Array,
  p: number,
  a: Float64Array,
  top: number,
  i: number,
  n: number,
  tau: number,
): void {
  const at = p * n;
  w.fill(0, at, at + n);
  if (tau === 0) return;
  const v = i * n;
  symmetricProductInto(w, at, a, v, i, n);
  for (let q = 0; q < p; ++q) {
    const vq = (top - 1 - q) * n;
    const wq = q * n;
    let wv = 0;
    let vv = 0;
    for (let c = 0; c < i; ++c) {
      wv += w[wq + c] * a[v + c];
      vv += a[vq + c] * a[v + c];
    }
    for (let c = 0; c < i; ++c) w[at + c] -= a[vq + c] * wv + w[wq + c] * vv;
  }
  let dot = 0;
  for (let c = 0; c < i; ++c) dot += w[at + c] * a[v + c];
  const shift = 0.5 * tau * tau * dot;
  for (let c = 0; c < i; ++c) w[at + c] = tau * w[at + c] - shift * a[v + c];
}

/** w += A v with A the leading m × m of the lower triangle in `a`; four rows a pass. */
function symmetricProductInto(w: Float64Array, at: number, a: Float64Array, v: number, m: number, n: number): void {
  let i = 0;
  for (; i + 3 < m; i += 4) {
    const r0 = i * n;
    const r1 = r0 + n;
    const r2 = r1 + n;
    const r3 = r2 + n;
    const x0 = a[v + i];
    const x1 = a[v + i + 1];
    const x2 = a[v + i + 2];
    const x3 = a[v + i + 3];
    let s0 = 0;
    let s1 = 0;
    let s2 = 0;
    let s3 = 0;
    for (let j = 0; j < i; ++j) {
      const x = a[v + j];
      const a0 = a[r0 + j];
      const a1 = a[r1 + j];
      const a2 = a[r2 + j];
      const a3 = a[r3 + j];
      s0 += a0 * x;
      s1 += a1 * x;
      s2 += a2 * x;
      s3 += a3 * x;
      w[at + j] += a0 * x0 + a1 * x1 + (a2 * x2 + a3 * x3);
    }
    const a10 = a[r1 + i];
    const a20 = a[r2 + i];
    const a21 = a[r2 + i + 1];
    const a30 = a[r3 + i];
    const a31 = a[r3 + i + 1];
    const a32 = a[r3 + i + 2];
    w[at + i] += s0 + a[r0 + i] * x0 + a10 * x1 + a20 * x2 + a30 * x3;
    w[at + i + 1] += s1 + a10 * x0 + a[r1 + i + 1] * x1 + a21 * x2 + a31 * x3;
    w[at + i + 2] += s2 + a20 * x0 + a21 * x1 + a[r2 + i + 2] * x2 + a32 * x3;
    w[at + i + 3] += s3 + a30 * x0 + a31 * x1 + a32 * x2 + a[r3 + i + 3] * x3;
  }
  for (; i < m; ++i) {
    const r = i * n;
    const x = a[v + i];
    let s = a[r + i] * x;
    for (let j = 0; j < i; ++j) {
      s += a[r + j] * a[v + j];
      w[at + j] += a[r + j] * x;
    }
    w[at + i] += s;
  }
}

/** A ← A − Σ (v wᵀ + w vᵀ) over the panel, on the lower triangle of the rows above it. */
function updateRest(
  a: Float64Array,
  w: Float64Array,
  left: Float64Array,
  right: Float64Array,
  top: number,
  width: number,
  n: number,
): void {
  const bottom = top - width;
  const depth = 2 * width;
  for (let q = 0; q < width; ++q) {
    const vq = (top - 1 - q) * n;
    const wq = q * n;
    for (let r = 0; r < bottom; ++r) {
      const v = a[vq + r];
      const u = w[wq + r];
      left[r * depth + q] = v;
      left[r * depth + width + q] = u;
      right[r * depth + q] = u;
      right[r * depth + width + q] = v;
    }
  }
  addLowerProductTransposed(block(a, 0, n), block(left, 0, depth), block(right, 0, depth), depth, bottom, -1);
}
