/**
 * Products of dense row-major matrices and vectors. Sizes are given by the
 * caller; an array may be longer than its matrix. Targets never alias operands.
 */
import {block} from "./block.ts";
import {MOST_TERMS} from "./tile-kernel.ts";
import {addLowerProductTransposed, addProductTransposed} from "./tile-product.ts";

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

/**
 * C = AᵀA, with A m × n and C n × n, exactly symmetric. Transposed a block of terms at a time: memory that was never
 * touched before is slower than the product itself.
 */
export function crossProductInto(c: Float64Array, a: Float64Array, m: number, n: number): Float64Array {
  c.fill(0, 0, n * n);
  const t = new Float64Array(n * Math.min(m, MOST_TERMS));
  for (let first = 0; first < m; first += MOST_TERMS) {
    const terms = Math.min(MOST_TERMS, m - first);
    transposeInto(t, 0, terms, a, first * n, n, terms, n);
    const rows = block(t, 0, terms);
    addLowerProductTransposed(block(c, 0, n), rows, rows, terms, n, 1);
  }
  return mirrorLowerInPlace(c, n);
}

/** C = A Aᵀ, with A m × n and C m × m, exactly symmetric. */
export function outerProductInto(c: Float64Array, a: Float64Array, m: number, n: number): Float64Array {
  c.fill(0, 0, m * m);
  addLowerProductTransposed(block(c, 0, m), block(a, 0, n), block(a, 0, n), n, m, 1);
  return mirrorLowerInPlace(c, m);
}

/** y = A x, with A m × n. */
export const matVecInto = (y: Float64Array, a: Float64Array, x: Float64Array, m: number, n: number): Float64Array =>
  matVecsInto(y, a, x, m, n, 1);

/**
 * Y = X Aᵀ, with A m × n: its product with each of `count` vectors, the rows of X; two at a time, for a large A is slow
 * to read. The bits of a product do not depend on which are worked out with it.
 */
export function matVecsInto(
  y: Float64Array,
  a: Float64Array,
  x: Float64Array,
  m: number,
  n: number,
  count: number,
): Float64Array {
  let k = 0;
  for (; k + 1 < count; k += 2) twoMatVecs(y, k * m, a, x, k * n, m, n);
  if (k < count) oneMatVec(y, k * m, a, x, k * n, m, n);
  return y;
}

/** Even and odd terms apart, so that two sums run at once; four rows at a time share what is read of x. */
function oneMatVec(
  y: Float64Array,
  to: number,
  a: Float64Array,
  x: Float64Array,
  from: number,
  m: number,
  n: number,
): void {
  const even = n - (n % 2);
  let i = 0;
  for (; i + 3 < m; i += 4) {
    const r0 = i * n;
    const r1 = r0 + n;
    const r2 = r1 + n;
    const r3 = r2 + n;
    let s0 = 0;
    let s1 = 0;
    let s2 = 0;
    let s3 = 0;
    let t0 = 0;
    let t1 = 0;
    let t2 = 0;
    let t3 = 0;
    for (let j = 0; j < even; j += 2) {
      const u = x[from + j];
      const v = x[from + j + 1];
      s0 += a[r0 + j] * u;
      t0 += a[r0 + j + 1] * v;
      s1 += a[r1 + j] * u;
      t1 += a[r1 + j + 1] * v;
      s2 += a[r2 + j] * u;
      t2 += a[r2 + j + 1] * v;
      s3 += a[r3 + j] * u;
      t3 += a[r3 + j + 1] * v;
    }
    if (even < n) {
      const u = x[from + even];
      s0 += a[r0 + even] * u;
      s1 += a[r1 + even] * u;
      s2 += a[r2 + even] * u;
      s3 += a[r3 + even] * u;
    }
    y[to + i] = s0 + t0;
    y[to + i + 1] = s1 + t1;
    y[to + i + 2] = s2 + t2;
    y[to + i + 3] = s3 + t3;
  }
  for (; i < m; ++i) {
    const row = i * n;
    let s = 0;
    let t = 0;
    for (let j = 0; j < even; j += 2) {
      s += a[row + j] * x[from + j];
      t += a[row + j + 1] * x[from + j + 1];
    }
    if (even < n) s += a[row + even] * x[from + even];
    y[to + i] = s + t;
  }
}

function twoMatVecs(
  y: Float64Array,
  to: number,
  a: Float64Array,
  x: Float64Array,
  from: number,
  m: number,
  n: number,
): void {
  const even = n - (n % 2);
  const other = from + n;
  let i = 0;
  for (; i + 1 < m; i += 2) {
    const r0 = i * n;
    const r1 = r0 + n;
    let s0 = 0;
    let s1 = 0;
    let t0 = 0;
    let t1 = 0;
    let p0 = 0;
    let p1 = 0;
    let q0 = 0;
    let q1 = 0;
    for (let j = 0; j < even; j += 2) {
      const a0 = a[r0 + j];
      const b0 = a[r0 + j + 1];
      const a1 = a[r1 + j];
      const b1 = a[r1 + j + 1];
      const u = x[from + j];
      const v = x[from + j + 1];
      s0 += a0 * u;
      t0 += b0 * v;
      s1 += a1 * u;
      t1 += b1 * v;
      const w = x[other + j];
      const z = x[other + j + 1];
      p0 += a0 * w;
      q0 += b0 * z;
      p1 += a1 * w;
      q1 += b1 * z;
    }
    if (even < n) {
      s0 += a[r0 + even] * x[from + even];
      s1 += a[r1 + even] * x[from + even];
      p0 += a[r0 + even] * x[other + even];
      p1 += a[r1 + even] * x[other + even];
    }
    y[to + i] = s0 + t0;
    y[to + i + 1] = s1 + t1;
    y[to + m + i] = p0 + q0;
    y[to + m + i + 1] = p1 + q1;
  }
  if (i < m) {
    const last = a.subarray(i * n, (i + 1) * n);
    oneMatVec(y, to + i, last, x, from, 1, n);
    oneMatVec(y, to + m + i, last, x, other, 1, n);
  }
}

/** y = Aᵀ x, with A m × n, x of length m and y of length n. */
export const transposedMatVecInto = (
  y: Float64Array,
  a: Float64Array,
  x: Float64Array,
  m: number,
  n: number,
): Float64Array => transposedMatVecsInto(y, a, x, m, n, 1);

/** Y = X A, with A m × n, as `matVecsInto`: X is `count` × m and Y `count` × n. */
export function transposedMatVecsInto(
  y: Float64Array,
  a: Float64Array,
  x: Float64Array,
  m: number,
  n: number,
  count: number,
): Float64Array {
  y.fill(0, 0, count * n);
  let k = 0;
  for (; k + 1 < count; k += 2) twoTransposed(y, k * n, a, x, k * m, m, n);
  if (k < count) oneTransposed(y, k * n, a, x, k * m, m, n);
  return y;
}

function oneTransposed(
  y: Float64Array,
  to: number,
  a: Float64Array,
  x: Float64Array,
  from: number,
  m: number,
  n: number,
): void {
  let i = 0;
  for (; i + 3 < m; i += 4) {
    const x0 = x[from + i];
    const x1 = x[from + i + 1];
    const x2 = x[from + i + 2];
    const x3 = x[from + i + 3];
    const r0 = i * n;
    const r1 = r0 + n;
    const r2 = r1 + n;
    const r3 = r2 + n;
    for (let j = 0; j < n; ++j) y[to + j] += a[r0 + j] * x0 + a[r1 + j] * x1 + (a[r2 + j] * x2 + a[r3 + j] * x3);
  }
  for (; i < m; ++i) {
    const x0 = x[from + i];
    const r0 = i * n;
    for (let j = 0; j < n; ++j) y[to + j] += a[r0 + j] * x0;
  }
}

function twoTransposed(
  y: Float64Array,
  to: number,
  a: Float64Array,
  x: Float64Array,
  from: number,
  m: number,
  n: number,
): void {
  const also = to + n;
  let i = 0;
  for (; i + 3 < m; i += 4) {
    const x0 = x[from + i];
    const x1 = x[from + i + 1];
    const x2 = x[from + i + 2];
    const x3 = x[from + i + 3];
    const z0 = x[from + m + i];
    const z1 = x[from + m + i + 1];
    const z2 = x[from + m + i + 2];
    const z3 = x[from + m + i + 3];
    const r0 = i * n;
    const r1 = r0 + n;
    const r2 = r1 + n;
    const r3 = r2 + n;
    for (let j = 0; j < n; ++j) {
      const a0 = a[r0 + j];
      const a1 = a[r1 + j];
      const a2 = a[r2 + j];
      const a3 = a[r3 + j];
      y[to + j] += a0 * x0 + a1 * x1 + (a2 * x2 + a3 * x3);
      y[also + j] += a0 * z0 + a1 * z1 + (a2 * z2 + a3 * z3);
    }
  }
  for (; i < m; ++i) {
    const x0 = x[from + i];
    const z0 = x[from + m + i];
    const r0 = i * n;
    for (let j = 0; j < n; ++j) {
      y[to + j] += a[r0 + j] * x0;
      y[also + j] += a[r0 + j] * z0;
    }
  }
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
