/**
 * Products of dense row-major matrices and vectors. Sizes are given by the
 * caller; an array may be longer than its matrix. Targets never alias operands.
 */
import {addProductTransposed, block} from "./tile-product.ts";

/** Rows of Bᵀ formed at a time; a heuristic. */
const TRANSPOSED_ROWS = 64;

/** C = A B, with A m × k, B k × n, C m × n. */
export function multiplyInto(
  c: Float64Array,
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
): Float64Array {
  c.fill(0, 0, m * n);
  const strip = new Float64Array(Math.min(TRANSPOSED_ROWS, n) * k);
  for (let j0 = 0; j0 < n; j0 += TRANSPOSED_ROWS) {
    const width = Math.min(TRANSPOSED_ROWS, n - j0);
    transposeInto(strip, 0, k, b, j0, n, k, width);
    addProductTransposed(block(c, j0, n), block(a, 0, k), block(strip, 0, k), m, k, width, 1);
  }
  return c;
}

/** C = A Bᵀ, with A m × k, B n × k, C m × n. */
export function multiplyTransposedInto(
  c: Float64Array,
  a: Float64Array,
  b: Float64Array,
  m: number,
  k: number,
  n: number,
): Float64Array {
  c.fill(0, 0, m * n);
  addProductTransposed(block(c, 0, n), block(a, 0, k), block(b, 0, k), m, k, n, 1);
  return c;
}

/** C = AᵀA, with A m × n and C n × n, exactly symmetric. */
export function crossProductInto(c: Float64Array, a: Float64Array, m: number, n: number): Float64Array {
  c.fill(0, 0, n * n);
  const t = new Float64Array(m * n);
  transposeInto(t, 0, m, a, 0, n, m, n);
  for (let i0 = 0; i0 < n; i0 += TRANSPOSED_ROWS) {
    const i1 = Math.min(n, i0 + TRANSPOSED_ROWS);
    addProductTransposed(block(c, i0 * n, n), block(t, i0 * m, m), block(t, 0, m), i1 - i0, m, i1, 1);
  }
  return mirrorLowerInPlace(c, n);
}

/** y = A x, with A m × n. */
export function matVecInto(y: Float64Array, a: Float64Array, x: Float64Array, m: number, n: number): Float64Array {
  for (let i = 0; i < m; ++i) {
    const row = i * n;
    let s0 = 0;
    let s1 = 0;
    let j = 0;
    for (; j + 1 < n; j += 2) {
      s0 += a[row + j] * x[j];
      s1 += a[row + j + 1] * x[j + 1];
    }
    if (j < n) s0 += a[row + j] * x[j];
    y[i] = s0 + s1;
  }
  return y;
}

/** y = Aᵀ x, with A m × n, x of length m and y of length n. */
export function transposedMatVecInto(
  y: Float64Array,
  a: Float64Array,
  x: Float64Array,
  m: number,
  n: number,
): Float64Array {
  y.fill(0, 0, n);
  let i = 0;
  for (; i + 1 < m; i += 2) {
    const x0 = x[i];
    const x1 = x[i + 1];
    const r0 = i * n;
    const r1 = r0 + n;
    for (let j = 0; j < n; ++j) y[j] += a[r0 + j] * x0 + a[r1 + j] * x1;
  }
  if (i < m) {
    const x0 = x[i];
    const r0 = i * n;
    for (let j = 0; j < n; ++j) y[j] += a[r0 + j] * x0;
  }
  return y;
}

/** Copies the lower triangle of the n × n matrix over its upper one. */
function mirrorLowerInPlace(a: Float64Array, n: number): Float64Array {
  for (let i = 0; i < n; ++i) for (let j = 0; j < i; ++j) a[j * n + i] = a[i * n + j];
  return a;
}

/** Writes the transpose of a rows × columns block of `a` (from `ao`, row stride `as`) to `t` (from `to`, stride `ts`). */
function transposeInto(
  t: Float64Array,
  to: number,
  ts: number,
  a: Float64Array,
  ao: number,
  as: number,
  rows: number,
  columns: number,
): Float64Array {
  // Squares of 16 × 16 keep both sides within a few cache lines.
  for (let i0 = 0; i0 < rows; i0 += 16) {
    const i1 = Math.min(rows, i0 + 16);
    for (let j0 = 0; j0 < columns; j0 += 16) {
      const j1 = Math.min(columns, j0 + 16);
      for (let i = i0; i < i1; ++i) for (let j = j0; j < j1; ++j) t[to + j * ts + i] = a[ao + i * as + j];
    }
  }
  return t;
}
