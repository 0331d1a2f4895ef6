/**
 * The inner engine of every dense product here: C += s · A Bᵀ on blocks of row-major matrices, both operands walked
 * along their rows.
 *
 * The summation index is cut into blocks of 256; within one an entry is summed in ascending order from zero, then scaled
 * and added to C. So two makers of the same bits can share the work: the kernel in WebAssembly and, for what is too
 * small to be worth packing or where there is no such kernel, the plain loops.
 */
import type {Block} from "./block.ts";
import {addProductPlainly} from "./plain-product.ts";
import {MOST_COLUMNS, MOST_ROWS, MOST_TERMS, paddedTerms, SIDE, tileKernel} from "./tile-kernel.ts";

/** Made once, in some milliseconds; what it holds is scratch. */
const KERNEL = tileKernel();
/** Sides and terms below which packing costs more than it saves; heuristics. */
const LEAST_SIDE = 8;
const LEAST_TERMS = 8;
/** Order up to which a triangle is worked out as the square that it is half of; a heuristic. */
const LEAST_HALVED = 64;

/**
 * Adds `scale` · A Bᵀ to C, with A m × k, B n × k and C m × n.
 *
 * C must not overlap A or B. Error of an entry: at most (k + 2)u Σ|a||b|, u = 2⁻⁵³.
 */
export function addProductTransposed(
  c: Block,
  a: Block,
  b: Block,
  m: number,
  k: number,
  n: number,
  scale: number,
): void {
  if (KERNEL === undefined || m < LEAST_SIDE || n < LEAST_SIDE || k < LEAST_TERMS) {
    addProductPlainly(c, a, b, m, k, n, scale);
    return;
  }
  for (let l = 0; l < k; l += MOST_TERMS) {
    const terms = Math.min(MOST_TERMS, k - l);
    const padded = paddedTerms(terms);
    for (let j = 0; j < n; j += MOST_COLUMNS) {
      const columns = Math.min(MOST_COLUMNS, n - j);
      packInto(KERNEL.b, b.data, b.offset + j * b.stride + l, b.stride, columns, terms, padded);
      for (let i = 0; i < m; i += MOST_ROWS) {
        const rows = Math.min(MOST_ROWS, m - i);
        packInto(KERNEL.a, a.data, a.offset + i * a.stride + l, a.stride, rows, terms, padded);
        const across = Math.ceil(columns / SIDE);
        KERNEL.run(Math.ceil(rows / SIDE), across, padded);
        addScaled(c.data, c.offset + i * c.stride + j, c.stride, KERNEL.sums, SIDE * across, rows, columns, scale);
      }
    }
  }
}

/**
 * The same where C is symmetric, n × n, and its lower triangle alone is wanted; what is above it may be written to near
 * the diagonal. In halves, so that large rectangles are packed once.
 */
export function addLowerProductTransposed(c: Block, a: Block, b: Block, k: number, n: number, scale: number): void {
  if (n <= LEAST_HALVED) {
    addProductTransposed(c, a, b, n, k, n, scale);
    return;
  }
  // Halves of whole tiles.
  const first = SIDE * Math.ceil(n / (2 * SIDE));
  const from = (whole: Block, row: number, column: number): Block => ({
    ...whole,
    offset: whole.offset + row * whole.stride + column,
  });
  const below = from(a, first, 0);
  addLowerProductTransposed(c, a, b, k, first, scale);
  addProductTransposed(from(c, first, 0), below, b, n - first, k, first, scale);
  addLowerProductTransposed(from(c, first, first), below, from(b, first, 0), k, n - first, scale);
}

/** Four rows side by side, zeros where there are no more rows or terms. */
function packInto(
  target: Float64Array,
  a: Float64Array,
  from: number,
  stride: number,
  rows: number,
  terms: number,
  padded: number,
): void {
  let to = 0;
  for (let i = 0; i < rows; i += SIDE) {
    if (i + SIDE <= rows) {
      const r0 = from + i * stride;
      const r1 = r0 + stride;
      const r2 = r1 + stride;
      const r3 = r2 + stride;
      for (let l = 0; l < terms; ++l) {
        target[to] = a[r0 + l];
        target[to + 1] = a[r1 + l];
        target[to + 2] = a[r2 + l];
        target[to + 3] = a[r3 + l];
        to += SIDE;
      }
    } else
      for (let l = 0; l < terms; ++l)
        for (let r = 0; r < SIDE; ++r) target[to++] = i + r < rows ? a[from + (i + r) * stride + l] : 0;
    for (let end = to + SIDE * (padded - terms); to < end; ++to) target[to] = 0;
  }
}

function addScaled(
  c: Float64Array,
  offset: number,
  stride: number,
  sums: Float64Array,
  across: number,
  rows: number,
  columns: number,
  scale: number,
): void {
  for (let i = 0; i < rows; ++i) {
    const at = offset + i * stride;
    const from = i * across;
    for (let j = 0; j < columns; ++j) c[at + j] += scale * sums[from + j];
  }
}
