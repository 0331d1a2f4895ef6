/**
 * A symmetric Toeplitz matrix less one of low rank, T − VVᵀ: what an endless line would see, less what this one does not.
 *
 *   (T + α − VVᵀ)⁻¹ = (T + α)⁻¹ + Z (1 − VᵀZ)⁻¹ Zᵀ,   Z = (T + α)⁻¹V.
 *
 * V by pivoted Cholesky on columns made when they are asked for.
 * Source: Harbrecht, Peters & Schneider, Appl. Numer. Math. 62 (2012) 428; the identity is Woodbury's (from memory).
 */
import {block} from "./block.ts";
import {choleskyInPlace, choleskySolveInto} from "./cholesky.ts";
import {addProductTransposed} from "./tile-product.ts";
import {type ToeplitzInverse, type Transforms, toeplitzInverse} from "./toeplitz-inverse.ts";

/** V, one array a column, and the largest entry left on the diagonal before each. */
export interface LowRank {
  readonly columns: readonly Float64Array[];
  readonly left: readonly number[];
}

/** At a shift α as many columns serve as leave so much of α on the diagonal. */
const LEFT_OF_SHIFT = 1e-7;

/**
 * V with D ≈ VVᵀ, D positive semidefinite.
 * @param diagonal of D
 * @param columnInto writes column j of D
 * @param leave entries of the diagonal that are rounding
 */
export function lowRank(
  diagonal: Float64Array,
  columnInto: (target: Float64Array, j: number) => Float64Array,
  leave: number,
): LowRank {
  const n = diagonal.length;
  const rest = Float64Array.from(diagonal);
  const columns: Float64Array[] = [];
  const left: number[] = [];
  while (columns.length < n) {
    let pivot = 0;
    for (let i = 1; i < n; ++i) if (rest[i] > rest[pivot]) pivot = i;
    if (!(rest[pivot] > leave)) break;
    const column = columnInto(new Float64Array(n), pivot);
    addCombination(
      column,
      columns,
      Float64Array.from(columns, (earlier) => -earlier[pivot]),
    );
    if (!(column[pivot] > leave)) {
      // The column is rounded more than the diagonal was: nothing more to be had there.
      rest[pivot] = 0;
      continue;
    }
    left.push(rest[pivot]);
    const root = Math.sqrt(column[pivot]);
    for (let i = 0; i < n; ++i) {
      column[i] /= root;
      rest[i] -= column[i] * column[i];
    }
    rest[pivot] = 0;
    columns.push(column);
  }
  return {columns, left};
}

export interface ShiftedInverse {
  /** (T + α − VVᵀ)⁻¹ of each right-hand side, nearly: V is cut short. */
  solve(rights: readonly Float64Array[]): Float64Array[];
  /** The same by products that are not corrected, which leaves some ε λ₁/α of the solution. */
  rough(rights: readonly Float64Array[]): Float64Array[];
  /** Of the inverse. */
  readonly trace: number;
  /** ln det(T + α − VVᵀ). */
  readonly logDeterminant: number;
  /** Bytes that it holds. */
  readonly held: number;
}

/**
 * @param diagonals first column of T
 * @throws {NumericalError} `numeric/not-positive-definite` where rounding leaves nothing of 1 − VᵀZ
 */
export function shiftedInverse(
  diagonals: Float64Array,
  less: LowRank,
  alpha: number,
  transforms?: Transforms,
): ShiftedInverse {
  const n = diagonals.length;
  let rank = 0;
  while (rank < less.columns.length && less.left[rank]! > LEFT_OF_SHIFT * alpha) ++rank;
  const outside = less.columns.slice(0, rank);
  const raised = Float64Array.from(diagonals);
  raised[0] += alpha;
  const endless = toeplitzInverse(raised, transforms);
  const z = inPairs(endless.roughPairInto, n, outside);
  const capacity = productsOf(outside, z, n);
  for (let k = 0; k < rank * rank; ++k) capacity[k] = -capacity[k];
  for (let i = 0; i < rank; ++i) ++capacity[i * rank + i];
  const sums = productsOf(z, z, n);
  choleskyInPlace(capacity, rank);
  const one = new Float64Array(rank);
  let trace = endless.diagonal(0).reduce((sum, value) => sum + value, 0);
  let logDeterminant = endless.logDeterminant;
  for (let j = 0; j < rank; ++j) {
    for (let i = 0; i < rank; ++i) one[i] = sums[i * rank + j];
    trace += choleskySolveInto(one, capacity, one, rank)[j]!;
    logDeterminant += 2 * Math.log(capacity[j * rank + j]);
  }
  const withOutside = (solutions: Float64Array[], rights: readonly Float64Array[]): Float64Array[] => {
    rights.forEach((right, k) => {
      const shares = choleskySolveInto(
        new Float64Array(rank),
        capacity,
        Float64Array.from(z, (column) => dot(column, right)),
        rank,
      );
      addCombination(solutions[k]!, z, shares);
    });
    return solutions;
  };
  return {
    trace,
    logDeterminant,
    solve: (rights) => withOutside(inPairs(endless.solvePairInto, n, rights), rights),
    rough: (rights) => withOutside(inPairs(endless.roughPairInto, n, rights), rights),
    // Of the transforms two complex spectra, up to four times as long.
    held: 8 * (rank * (n + rank) + n + 16 * n),
  };
}

function inPairs(solve: ToeplitzInverse["solvePairInto"], n: number, rights: readonly Float64Array[]): Float64Array[] {
  const nothing = new Float64Array(n);
  const solutions = rights.map(() => new Float64Array(n));
  const spare = new Float64Array(n);
  for (let k = 0; k < rights.length; k += 2)
    solve(solutions[k]!, solutions[k + 1] ?? spare, rights[k]!, rights[k + 1] ?? nothing);
  return solutions;
}

/** Entries of columns worked on at a time. */
const STRETCH = 1024;

/** AᵀB of as many columns each: the columns are laid side by side, stretch after stretch. */
function productsOf(a: readonly Float64Array[], b: readonly Float64Array[], n: number): Float64Array {
  const rank = a.length;
  const sums = new Float64Array(rank * rank);
  const left = new Float64Array(rank * STRETCH);
  const right = a === b ? left : new Float64Array(rank * STRETCH);
  for (let from = 0; from < n; from += STRETCH) {
    const length = Math.min(STRETCH, n - from);
    a.forEach((column, k) => {
      left.set(column.subarray(from, from + length), k * STRETCH);
    });
    if (a !== b)
      b.forEach((column, k) => {
        right.set(column.subarray(from, from + length), k * STRETCH);
      });
    addProductTransposed(
      block(sums, 0, rank),
      block(left, 0, STRETCH),
      block(right, 0, STRETCH),
      rank,
      length,
      rank,
      1,
    );
  }
  return sums;
}

/** Adds Σ share_j column_j, four columns at a time. */
function addCombination(target: Float64Array, columns: readonly Float64Array[], shares: Float64Array): void {
  const n = target.length;
  let j = 0;
  for (; j + 3 < columns.length; j += 4) {
    const [a, b, c, d] = [columns[j]!, columns[j + 1]!, columns[j + 2]!, columns[j + 3]!];
    const [p, q, r, s] = [shares[j]!, shares[j + 1]!, shares[j + 2]!, shares[j + 3]!];
    for (let i = 0; i < n; ++i) target[i] += p * a[i] + q * b[i] + (r * c[i] + s * d[i]);
  }
  for (; j < columns.length; ++j) {
    const [a, p] = [columns[j]!, shares[j]!];
    for (let i = 0; i < n; ++i) target[i] += p * a[i];
  }
}

/** Four sums abreast, for a sum waits for the one before. */
function dot(a: Float64Array, b: Float64Array): number {
  let sum0 = 0;
  let sum1 = 0;
  let sum2 = 0;
  let sum3 = 0;
  let i = 0;
  for (; i + 3 < a.length; i += 4) {
    sum0 += a[i] * b[i];
    sum1 += a[i + 1] * b[i + 1];
    sum2 += a[i + 2] * b[i + 2];
    sum3 += a[i + 3] * b[i + 3];
  }
  for (; i < a.length; ++i) sum0 += a[i] * b[i];
  return sum0 + sum1 + (sum2 + sum3);
}
