/**
 * The way back from tridiagonal form: with A = Q T Qᵀ and Q = H_{n−1} … H_1, rows that are
 * eigenvectors of T become eigenvectors of A by X ← X Qᵀ = X H_1 H_2 … H_{n−1}.
 *
 * Reflections are applied 32 at a time as I − V S Vᵀ, S triangular, so that the work is in
 * matrix products. Source: R. Schreiber & C. Van Loan, SIAM J. Sci. Stat. Comput. 10 (1989) 53–57.
 */
import {block} from "./block.ts";
import {addProductTransposed} from "./tile-product.ts";
import type {Tridiagonal} from "./tridiagonalise.ts";

/** Reflections applied at once; a heuristic. */
const PANEL = 32;

/**
 * X ← X Qᵀ.
 *
 * @param x rows × n row-major, overwritten and returned
 */
export function backTransformInPlace(x: Float64Array, rows: number, t: Tridiagonal): Float64Array {
  const n = t.diagonal.length;
  const v = new Float64Array(PANEL * n);
  const vt = new Float64Array(PANEL * n);
  const s = new Float64Array(PANEL * PANEL);
  const y = new Float64Array(rows * PANEL);
  const z = new Float64Array(rows * PANEL);
  for (let first = 1; first < n; first += PANEL) {
    const width = Math.min(PANEL, n - first);
    const length = first + width - 1;
    v.fill(0);
    for (let q = 0; q < width; ++q) {
      const row = (first + q) * n;
      for (let c = 0; c < first + q; ++c) {
        v[q * length + c] = t.reflectors[row + c];
        vt[c * width + q] = v[q * length + c];
      }
      for (let c = first + q; c < length; ++c) vt[c * width + q] = 0;
    }
    blockFactorInto(s, v, t.multipliers, first, width, length);
    y.fill(0);
    z.fill(0);
    addProductTransposed(block(y, 0, width), block(x, 0, n), block(v, 0, length), rows, length, width, 1);
    addProductTransposed(block(z, 0, width), block(y, 0, width), block(s, 0, width), rows, width, width, 1);
    addProductTransposed(block(x, 0, n), block(z, 0, width), block(vt, 0, width), rows, width, length, -1);
  }
  return x;
}

/** The same for a single row, by one reflection after the other. */
export function backTransformRowInPlace(x: Float64Array, {reflectors, multipliers}: Tridiagonal): Float64Array {
  const n = multipliers.length;
  for (let i = 1; i < n; ++i) {
    const row = i * n;
    let dot = 0;
    for (let c = 0; c < i; ++c) dot += reflectors[row + c] * x[c];
    dot *= multipliers[i];
    for (let c = 0; c < i; ++c) x[c] -= dot * reflectors[row + c];
  }
  return x;
}

/** S (transposed: row j holds column j) with H_first … H_last = I − V S Vᵀ. */
function blockFactorInto(
  s: Float64Array,
  v: Float64Array,
  multipliers: Float64Array,
  first: number,
  width: number,
  length: number,
): void {
  s.fill(0);
  for (let j = 0; j < width; ++j) {
    const tau = multipliers[first + j];
    for (let i = 0; i < j; ++i) {
      let dot = 0;
      for (let c = 0; c < length; ++c) dot += v[i * length + c] * v[j * length + c];
      s[j * width + i] = -tau * dot;
    }
    // Column j of S is S_{j−1} times the dots; S is upper triangular, so ascending order is safe in place.
    for (let i = 0; i < j; ++i) {
      let sum = 0;
      for (let l = i; l < j; ++l) sum += s[l * width + i] * s[j * width + l];
      s[j * width + i] = sum;
    }
    s[j * width + j] = tau;
  }
}
