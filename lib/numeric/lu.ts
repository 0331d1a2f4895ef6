/** Small systems that are not symmetric: elimination with row pivots. Source: Golub & Van Loan, Matrix Computations (1996), § 3.4 (from memory). */

/**
 * Overwrites an n × n matrix, row-major, by L below the diagonal and U on and above it.
 * @returns the row that each row was changed with
 */
export function luInPlace(a: Float64Array, n: number): Int32Array {
  const pivots = new Int32Array(n);
  for (let k = 0; k < n; ++k) {
    let pivot = k;
    for (let i = k + 1; i < n; ++i) if (Math.abs(a[i * n + k]) > Math.abs(a[pivot * n + k])) pivot = i;
    pivots[k] = pivot;
    for (let j = 0; pivot !== k && j < n; ++j) [a[k * n + j], a[pivot * n + j]] = [a[pivot * n + j], a[k * n + j]];
    for (let i = k + 1; i < n; ++i) {
      a[i * n + k] /= a[k * n + k];
      for (let j = k + 1; j < n; ++j) a[i * n + j] -= a[i * n + k] * a[k * n + j];
    }
  }
  return pivots;
}

/** Overwrites b by the solution of A x = b, from what `luInPlace` made of A. */
export function luSolveInPlace(b: Float64Array, lu: Float64Array, pivots: Int32Array): Float64Array {
  const n = pivots.length;
  for (let k = 0; k < n; ++k) [b[k], b[pivots[k]]] = [b[pivots[k]], b[k]];
  for (let i = 0; i < n; ++i) for (let j = 0; j < i; ++j) b[i] -= lu[i * n + j] * b[j];
  for (let i = n - 1; i >= 0; --i) {
    for (let j = i + 1; j < n; ++j) b[i] -= lu[i * n + j] * b[j];
    b[i] /= lu[i * n + i];
  }
  return b;
}
