/**
 * Eigenvalues and eigenvectors of a symmetric tridiagonal matrix by divide and conquer:
 * T = diag(T₁, T₂) + ρ v vᵀ; with the halves solved, what is left is a diagonal matrix plus
 * one rank-one term, whose eigenvalues are roots of a secular equation.
 *
 * Entries of z that are negligible and pairs of equal poles drop out (deflation), which for
 * smooth kernels is most of them. Orthogonality comes from recomputing z so that the roots
 * found are exact for it.
 * Source: J. Cuppen, Numer. Math. 36 (1981) 177–195; M. Gu & S. Eisenstat, SIAM J. Matrix
 * Anal. Appl. 16 (1995) 172–191.
 */
import {block} from "./block.ts";
import {secularRootInto} from "./secular-equation.ts";
import {addProductTransposed} from "./tile-product.ts";
import {tridiagonalQlInPlace} from "./tridiagonal-ql.ts";

/** Blocks of up to this size go to QL; a heuristic. */
const LEAF = 32;
const EPSILON = 2 ** -52;

/** Arrays of one solve, n × n or n long, shared by all merges. */
interface Workspace {
  readonly n: number;
  readonly d: Float64Array;
  readonly e: Float64Array;
  /** Row k is the eigenvector of d[k], inside the diagonal block solved so far. */
  readonly vectors: Float64Array;
  readonly inner: Float64Array;
  readonly product: Float64Array;
  readonly packed: Float64Array;
}

/**
 * Overwrites `d` with the eigenvalues, ascending, and returns the n × n row-major matrix whose
 * row k is the unit eigenvector of `d[k]`; destroys `e`, whose entry i couples i and i + 1.
 *
 * The matrix must have norm about one (the caller scales).
 * @throws {NumericalError} `numeric/no-convergence` from QL or the secular equation
 */
export function tridiagonalDivideInPlace(d: Float64Array, e: Float64Array): Float64Array {
  const n = d.length;
  const large = n > LEAF ? n * n : 0;
  const work: Workspace = {
    n,
    d,
    e,
    vectors: new Float64Array(n * n),
    inner: new Float64Array(large),
    product: new Float64Array(large),
    packed: new Float64Array(large),
  };
  solveBlock(work, 0, n);
  return work.vectors;
}

function solveBlock(work: Workspace, start: number, size: number): void {
  const {n, d, e, vectors} = work;
  if (size <= LEAF) {
    for (let i = start; i < start + size; ++i) vectors[i * n + i] = 1;
    tridiagonalQlInPlace(d, e, start, size, vectors, n);
    sortBlock(work, start, size);
    return;
  }
  const first = size >> 1;
  const cut = start + first;
  const coupling = e[cut - 1];
  const rho = Math.abs(coupling);
  d[cut - 1] -= rho;
  d[cut] -= rho;
  // QL on the left half reads one entry past its end only as a place to write to.
  e[cut - 1] = 0;
  solveBlock(work, start, first);
  solveBlock(work, cut, size - first);
  merge(work, start, first, size, rho, coupling < 0 ? -1 : 1);
}

/** Puts the eigenvalues of a block in ascending order, vectors with them. */
function sortBlock({n, d, vectors}: Workspace, start: number, size: number): void {
  const order = ascending(d.subarray(start, start + size));
  const values = Float64Array.from(order, (k) => d[start + k]);
  const rows = new Float64Array(size * size);
  for (let k = 0; k < size; ++k) {
    const from = (start + order[k]) * n + start;
    rows.set(vectors.subarray(from, from + size), k * size);
  }
  for (let k = 0; k < size; ++k) {
    d[start + k] = values[k];
    vectors.set(rows.subarray(k * size, (k + 1) * size), (start + k) * n + start);
  }
}

const ascending = (values: Float64Array): Int32Array =>
  Int32Array.from(values.keys()).sort((i, j) => values[i] - values[j] || i - j);

/** The rank-one problem that joins two halves, as it shrinks. */
interface Junction {
  /** Diagonal entries of the halves, by row. */
  readonly poles: Float64Array;
  /** The rank-one vector, by row; 0 where deflated. */
  readonly z: Float64Array;
  /** Bit 1: the row's vector has entries in the first half; bit 2: in the second. */
  readonly reach: Uint8Array;
  readonly rho: number;
}

function merge(work: Workspace, start: number, first: number, size: number, rho: number, sign: number): void {
  const {n, d, vectors} = work;
  const z = new Float64Array(size);
  for (let k = 0; k < first; ++k) z[k] = vectors[(start + k) * n + start + first - 1];
  for (let k = first; k < size; ++k) z[k] = sign * vectors[(start + k) * n + start + first];
  const reach = new Uint8Array(size).fill(1, 0, first).fill(2, first);
  const junction: Junction = {poles: d.slice(start, start + size), z, reach, rho};
  const active = deflate(work, start, size, junction);
  // Grouped by reach, so that each half is multiplied only by what reaches it.
  const grouped = active.slice().sort((p, q) => reach[p] - reach[q] || p - q);
  const onlyFirst = active.filter((r) => reach[r] === 1).length;
  const onlySecond = active.filter((r) => reach[r] === 2).length;
  const both = active.length - onlyFirst - onlySecond;
  const groups = [
    ...grouped.subarray(0, onlyFirst),
    ...grouped.subarray(onlyFirst + onlySecond),
    ...grouped.subarray(onlyFirst, onlyFirst + onlySecond),
  ];
  const roots = secularVectorsInto(work.inner, active, groups, junction);
  work.product.fill(0, 0, size * size);
  multiplyHalf(work, start, 0, first, size, groups, 0, onlyFirst + both);
  multiplyHalf(work, start, first, size - first, size, groups, onlyFirst, both + onlySecond);
  writeSorted(work, start, size, roots, junction);
}

/**
 * Takes out of the secular equation what does not couple, first rotating pairs of near-equal
 * poles so that one of the two does not. Returns the rows left, in the order of their poles.
 */
function deflate({n, vectors}: Workspace, start: number, size: number, {poles, z, reach, rho}: Junction): Int32Array {
  const order = ascending(poles);
  let largest = 0;
  for (let k = 0; k < size; ++k) largest = Math.max(largest, Math.abs(poles[k]), Math.abs(z[k]));
  const negligible = 8 * EPSILON * largest;
  const kept: number[] = [];
  for (const r of order) {
    if (2 * rho * Math.abs(z[r]) <= negligible) {
      z[r] = 0;
      continue;
    }
    const last = kept.at(-1);
    if (last !== undefined) {
      const radius = Math.hypot(z[last], z[r]);
      const c = z[r] / radius;
      const s = z[last] / radius;
      if (Math.abs((poles[r] - poles[last]) * c * s) <= negligible) {
        const low = poles[last] * c * c + poles[r] * s * s;
        poles[r] = poles[last] * s * s + poles[r] * c * c;
        poles[last] = low;
        z[last] = 0;
        z[r] = radius;
        reach[r] |= reach[last];
        reach[last] = reach[r];
        rotateRows(vectors, (start + last) * n + start, (start + r) * n + start, size, c, s);
        kept.pop();
      }
    }
    kept.push(r);
  }
  return Int32Array.from(kept);
}

function rotateRows(a: Float64Array, p: number, q: number, length: number, c: number, s: number): void {
  for (let i = 0; i < length; ++i) {
    const u = a[p + i];
    const v = a[q + i];
    a[p + i] = c * u - s * v;
    a[q + i] = s * u + c * v;
  }
}

/**
 * Solves the secular equation on the active rows. Row j of `inner` (k × k) becomes the unit
 * eigenvector of root j, its entries in the order of `groups`.
 */
function secularVectorsInto(
  inner: Float64Array,
  active: Int32Array,
  groups: readonly number[],
  {poles, z, rho}: Junction,
): Float64Array {
  const k = active.length;
  const d = Float64Array.from(active, (r) => poles[r]);
  const z2 = Float64Array.from(active, (r) => z[r] * z[r]);
  const total = z2.reduce((sum, value) => sum + value, 0);
  const roots = new Float64Array(k);
  for (let j = 0; j < k; ++j) roots[j] = secularRootInto(inner, j * k, d, z2, k, j, rho, total);
  // The z for which these roots are exact (Löwner's formula), up to √ρ, sign from the old one.
  const exact = new Float64Array(k).fill(-1);
  for (let j = 0; j < k; ++j) {
    const row = j * k;
    for (let i = 0; i < j; ++i) exact[i] *= inner[row + i] / (d[i] - d[j]);
    exact[j] *= inner[row + j];
    for (let i = j + 1; i < k; ++i) exact[i] *= inner[row + i] / (d[i] - d[j]);
  }
  for (let i = 0; i < k; ++i) exact[i] = Math.sqrt(exact[i]) * Math.sign(z[active[i]]);
  const place = new Map(groups.map((r, position) => [r, position]));
  const positions = Int32Array.from(active, (r) => place.get(r) ?? 0);
  const vector = new Float64Array(k);
  for (let j = 0; j < k; ++j) {
    const row = j * k;
    let square = 0;
    for (let i = 0; i < k; ++i) {
      vector[i] = exact[i] / inner[row + i];
      square += vector[i] * vector[i];
    }
    const scale = 1 / Math.sqrt(square);
    for (let i = 0; i < k; ++i) inner[row + positions[i]] = vector[i] * scale;
  }
  return roots;
}

/** Columns from … from + width of the new vectors, from the `count` grouped rows that reach them. */
function multiplyHalf(
  {n, vectors, inner, product, packed}: Workspace,
  start: number,
  from: number,
  width: number,
  size: number,
  groups: readonly number[],
  skip: number,
  count: number,
): void {
  const k = groups.length;
  for (let r = 0; r < count; ++r) {
    const row = (start + groups[skip + r]) * n + start + from;
    for (let c = 0; c < width; ++c) packed[c * count + r] = vectors[row + c];
  }
  addProductTransposed(block(product, from, size), block(inner, skip, k), block(packed, 0, count), k, count, width, 1);
}

/** Roots with their new vectors and deflated poles with their old ones, in ascending order. */
function writeSorted(
  {n, d, vectors, product}: Workspace,
  start: number,
  size: number,
  roots: Float64Array,
  {poles, z}: Junction,
): void {
  const values = new Float64Array(size);
  values.set(roots);
  let next = roots.length;
  for (let r = 0; r < size; ++r) {
    if (z[r] !== 0) continue;
    values[next] = poles[r];
    const row = (start + r) * n + start;
    product.set(vectors.subarray(row, row + size), next * size);
    ++next;
  }
  const order = ascending(values);
  for (let k = 0; k < size; ++k) {
    d[start + k] = values[order[k]];
    vectors.set(product.subarray(order[k] * size, (order[k] + 1) * size), (start + k) * n + start);
  }
}
