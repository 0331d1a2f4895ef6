/**
 * The singular system of a tall or wide matrix B by eigen-decomposition of the smaller of BᵀB and BBᵀ:
 * B = Σ_k √λ_k u_k v_kᵀ.
 *
 * Squaring costs nothing here: multipliers below `USABLE` of the largest eigenvalue are never asked for, since
 * they would trust the readings beyond six digits.
 */

import {
  crossProductInto,
  matVecInto,
  multiplyInto,
  multiplyTransposedInto,
  outerProductInto,
} from "../numeric/matmul.ts";
import {factorGram, factorTimesRows, lowRankFactorInPlace} from "../numeric/pivoted-factor.ts";
import {symmetricEigen} from "../numeric/symmetric-eigen.ts";

/** Unknown side of the singular system. */
interface Modes {
  readonly rows: number;
  readonly columns: number;
  /** Modes kept, λ_k > floor. */
  readonly count: number;
  /** λ_k = squared singular values, decreasing. */
  readonly eigenvalues: Float64Array;
  /** count × columns: v_k, unit vectors over the unknowns; row-major. */
  readonly right: Float64Array;
}

/** Data side. */
export interface DataModes {
  readonly rows: number;
  /** Modes kept, λ_k > floor. */
  readonly count: number;
  /** λ_k = squared singular values, decreasing. */
  readonly eigenvalues: Float64Array;
  /** count × rows: u_k, unit vectors over the data; row-major. */
  readonly left: Float64Array;
}

export interface SingularSystem extends Modes, DataModes {}

/** Eigenvalues below this share of the largest are rounding: n ε with n up to a few hundred, and headroom. */
export const USABLE = 1e-13;

/** What a thin factor may leave out of the trace, over the floor. */
const NEGLIGIBLE = 1e-2;

/** Eigenpairs of the smaller Gram matrix above the floor. */
interface Half {
  readonly count: number;
  readonly eigenvalues: Float64Array;
  readonly vectors: Float64Array;
}

/** The smaller of BᵀB and BBᵀ. */
function smallerGram(matrix: Float64Array, rows: number, columns: number): {gram: Float64Array; size: number} {
  const size = Math.min(rows, columns);
  const gram = new Float64Array(size * size);
  if (rows >= columns) crossProductInto(gram, matrix, rows, columns);
  else outerProductInto(gram, matrix, rows, columns);
  return {gram, size};
}

function halfOf(gram: Float64Array, size: number, floor: number): Half {
  const {values, vectors} = symmetricEigen(gram, size, floor);
  const least = Math.max(floor, USABLE * Math.max(values[0] ?? 0, 0));
  let count = 0;
  while (count < size && values[count] > least) ++count;
  return {count, eigenvalues: values.slice(0, count), vectors: vectors.subarray(0, count * size)};
}

/**
 * The same where the Gram matrix is F Fᵀ with few columns, from FᵀF: a fraction of the work. What is left out of the trace
 * is a hundredth of the floor, or rounding.
 */
function thinHalf(gram: Float64Array, size: number, floor: number): Half | undefined {
  const factor = lowRankFactorInPlace(gram, size, NEGLIGIBLE * floor);
  if (factor === undefined) return undefined;
  const {count, eigenvalues, vectors} = halfOf(factorGram(factor), factor.rank, floor);
  // Of length √λ but for the rounding of λ.
  return {count, eigenvalues, vectors: unitRowsInPlace(factorTimesRows(factor, vectors, count), size)};
}

function unitRowsInPlace(vectors: Float64Array, length: number): Float64Array {
  for (let row = 0; row < vectors.length; row += length) {
    let square = 0;
    for (let at = row; at < row + length; ++at) square += vectors[at] * vectors[at];
    const scale = 1 / Math.sqrt(square);
    for (let at = row; at < row + length; ++at) vectors[at] *= scale;
  }
  return vectors;
}

/** Divides row k by √λ_k. */
export const overRoots = (vectors: Float64Array, length: number, eigenvalues: Float64Array): Float64Array => {
  for (let k = 0; k < eigenvalues.length; ++k) {
    const scale = 1 / Math.sqrt(eigenvalues[k]);
    for (let i = 0; i < length; ++i) vectors[k * length + i] *= scale;
  }
  return vectors;
};

/** u_k = B v_k/√λ_k, count × rows. Those of the smallest λ_k are orthogonal to ε √(λ_0/λ_k) only. */
export const leftOf = (
  right: Float64Array,
  eigenvalues: Float64Array,
  matrix: Float64Array,
  rows: number,
  columns: number,
): Float64Array =>
  overRoots(
    multiplyTransposedInto(
      new Float64Array(eigenvalues.length * rows),
      right,
      matrix,
      eigenvalues.length,
      columns,
      rows,
    ),
    rows,
    eigenvalues,
  );

/** v_k = Bᵀu_k/√λ_k, count × columns. */
const rightOf = (
  left: Float64Array,
  eigenvalues: Float64Array,
  matrix: Float64Array,
  rows: number,
  columns: number,
): Float64Array =>
  overRoots(
    multiplyInto(new Float64Array(eigenvalues.length * columns), left, matrix, eigenvalues.length, rows, columns),
    columns,
    eigenvalues,
  );

/**
 * @param matrix rows × columns, row-major
 * @param floor modes with λ ≤ floor are left out; at least `USABLE`·λ_0
 */
export function singularSystem(matrix: Float64Array, rows: number, columns: number, floor = 0): SingularSystem {
  const {gram, size} = smallerGram(matrix, rows, columns);
  const half = halfOf(gram, size, floor);
  const tall = rows >= columns;
  return {
    rows,
    columns,
    count: half.count,
    eigenvalues: half.eigenvalues,
    left: tall ? leftOf(half.vectors, half.eigenvalues, matrix, rows, columns) : half.vectors,
    right: tall ? half.vectors : rightOf(half.vectors, half.eigenvalues, matrix, rows, columns),
  };
}

/** The data side alone, where nothing is asked of the unknowns. Arguments as `singularSystem`. */
export function dataModes(matrix: Float64Array, rows: number, columns: number, floor = 0): DataModes {
  // Not from BᵀB: B v/√λ would raise by √(λ_0/λ) what rounding leaves of v_0 in a thin v.
  if (rows < columns)
    return dataModesOfGramInPlace(outerProductInto(new Float64Array(rows * rows), matrix, rows, columns), rows, floor);
  const {gram, size} = smallerGram(matrix, rows, columns);
  const half = halfOf(gram, size, floor);
  const left = leftOf(half.vectors, half.eigenvalues, matrix, rows, columns);
  return {rows, count: half.count, eigenvalues: half.eigenvalues, left};
}

/**
 * The same from the Gram matrix of the data, BBᵀ.
 * @param gram rows × rows; overwritten
 */
export function dataModesOfGramInPlace(gram: Float64Array, rows: number, floor: number): DataModes {
  const thin = thinDataModesInPlace(gram, rows, floor);
  if (thin !== undefined) return thin;
  const {count, eigenvalues, vectors} = halfOf(gram, rows, floor);
  return {rows, count, eigenvalues, left: vectors};
}

/** The same where BBᵀ is of low rank; undefined, and the matrix untouched, where it is not. */
export function thinDataModesInPlace(gram: Float64Array, rows: number, floor: number): DataModes | undefined {
  const half = thinHalf(gram, rows, floor);
  return half && {rows, count: half.count, eigenvalues: half.eigenvalues, left: half.vectors};
}

/** u_kᵀ d for every mode. */
export const dataCoefficients = (system: DataModes, data: Float64Array): Float64Array =>
  matVecInto(new Float64Array(system.count), system.left, data, system.count, system.rows);
