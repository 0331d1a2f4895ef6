/**
 * A = L Lᵀ, L lower triangular, for symmetric positive definite A; and the
 * pivoted form that stops at the numerical rank of a semidefinite one.
 * Source: Golub & Van Loan, Matrix Computations, §4.2; N. Higham, Accuracy and
 * Stability of Numerical Algorithms, §10.1 and §10.3.
 */

import {NumericalError} from "../errors.ts";
import {block} from "./block.ts";
import {addProductTransposed} from "./tile-product.ts";

/** Columns finished before the rest is updated; a heuristic. */
const PANEL = 48;
const UPDATE_ROWS = 64;

/**
 * Overwrites the lower triangle of `a` with L and clears the upper one.
 *
 * @param a n × n row-major; only the lower triangle is read
 * @throws {NumericalError} `numeric/not-positive-definite` at the first pivot that is not > 0
 */
export function choleskyInPlace(a: Float64Array, n: number): Float64Array {
  for (let c0 = 0; c0 < n; c0 += PANEL) {
    const c1 = Math.min(n, c0 + PANEL);
    const width = c1 - c0;
    for (let i = c0; i < n; ++i) {
      const row = i * n;
      for (let j = c0; j < c1 && j <= i; ++j) {
        const other = j * n;
        let sum = a[row + j];
        for (let l = c0; l < j; ++l) sum -= a[row + l] * a[other + l];
        if (j < i) {
          a[row + j] = sum / a[other + j];
        } else {
          if (!(sum > 0)) throw notPositive(i, n, sum);
          a[row + j] = Math.sqrt(sum);
        }
      }
    }
    for (let r0 = c1; r0 < n; r0 += UPDATE_ROWS) {
      const r1 = Math.min(n, r0 + UPDATE_ROWS);
      addProductTransposed(
        block(a, r0 * n + c1, n),
        block(a, r0 * n + c0, n),
        block(a, c1 * n + c0, n),
        r1 - r0,
        width,
        r1 - c1,
        -1,
      );
    }
  }
  for (let i = 0; i < n; ++i) a.fill(0, i * n + i + 1, (i + 1) * n);
  return a;
}

/** x = A⁻¹ b from the factor L of A; `x` may be `b`. */
export function choleskySolveInto(x: Float64Array, l: Float64Array, b: Float64Array, n: number): Float64Array {
  forwardSubstituteInto(x, l, b, n);
  return backSubstituteInto(x, l, x, n);
}

/** x = L⁻¹ b; `x` may be `b`. */
function forwardSubstituteInto(x: Float64Array, l: Float64Array, b: Float64Array, n: number): Float64Array {
  for (let i = 0; i < n; ++i) {
    const row = i * n;
    let sum = b[i];
    for (let j = 0; j < i; ++j) sum -= l[row + j] * x[j];
    x[i] = sum / l[row + i];
  }
  return x;
}

/** x = L⁻ᵀ b; `x` may be `b`. */
function backSubstituteInto(x: Float64Array, l: Float64Array, b: Float64Array, n: number): Float64Array {
  if (x !== b) for (let i = 0; i < n; ++i) x[i] = b[i];
  for (let i = n - 1; i >= 0; --i) {
    const row = i * n;
    const value = x[i] / l[row + i];
    x[i] = value;
    for (let j = 0; j < i; ++j) x[j] -= l[row + j] * value;
  }
  return x;
}

export interface PivotedCholesky {
  /** n × rank row-major, rows in the order of A: L Lᵀ ≈ A. */
  readonly factor: Float64Array;
  readonly rank: number;
  /** The row of A that was k-th pivot; rows `pivots` of the factor form a lower triangle. */
  readonly pivots: Int32Array;
  /** Trace of A − L Lᵀ, which bounds its norm. */
  readonly remainder: number;
}

/**
 * Cholesky with the largest remaining diagonal entry as next pivot, stopped
 * when it is at most `tolerance` times the largest of A.
 *
 * @param a n × n row-major, symmetric positive semidefinite, not modified
 * @throws {NumericalError} `numeric/not-finite` if the diagonal holds NaN or infinity;
 *   `numeric/not-positive-definite` if a diagonal entry of A is negative
 */
export function pivotedCholesky(a: Float64Array, n: number, tolerance: number): PivotedCholesky {
  const rest = new Float64Array(n);
  let largest = 0;
  for (let i = 0; i < n; ++i) {
    rest[i] = a[i * n + i];
    if (!Number.isFinite(rest[i])) {
      throw new NumericalError(
        "numeric/not-finite",
        `Diagonal entry ${i + 1} of a matrix of order ${n} is ${rest[i]}; it must be a finite number.`,
      );
    }
    if (rest[i] < 0) throw notPositive(i, n, rest[i]);
    largest = Math.max(largest, rest[i]);
  }
  const columns: Float64Array[] = [];
  const pivots: number[] = [];
  const taken = new Uint8Array(n);
  while (columns.length < n) {
    let p = -1;
    for (let i = 0; i < n; ++i) if (taken[i] === 0 && (p < 0 || rest[i] > rest[p])) p = i;
    if (!(rest[p] > tolerance * largest)) break;
    const root = Math.sqrt(rest[p]);
    const column = new Float64Array(n);
    for (let i = 0; i < n; ++i) if (taken[i] === 0) column[i] = a[p * n + i];
    for (const earlier of columns) {
      const at = earlier[p];
      for (let i = 0; i < n; ++i) column[i] -= at * earlier[i];
    }
    for (let i = 0; i < n; ++i) {
      column[i] = taken[i] === 1 ? 0 : column[i] / root;
      rest[i] -= column[i] * column[i];
    }
    column[p] = root;
    taken[p] = 1;
    rest[p] = 0;
    columns.push(column);
    pivots.push(p);
  }
  const rank = columns.length;
  const factor = new Float64Array(n * rank);
  columns.forEach((column, k) => {
    for (let i = 0; i < n; ++i) factor[i * rank + k] = column[i];
  });
  let remainder = 0;
  for (let i = 0; i < n; ++i) if (taken[i] === 0) remainder += Math.max(0, rest[i]);
  return {factor, rank, pivots: Int32Array.from(pivots), remainder};
}

function notPositive(i: number, n: number, pivot: number): NumericalError {
  return new NumericalError(
    "numeric/not-positive-definite",
    `Pivot ${i + 1} of a matrix of order ${n} is ${pivot}; Cholesky needs it above zero. Add a multiple of the identity or use the pivoted form.`,
  );
}
