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

/** Eigenpairs of the smaller Gram matrix above the floor. */
interface Half {
  readonly count: number;
  readonly eigenvalues: Float64Array;
  readonly vectors: Float64Array;
}

function smallerHalf(matrix: Float64Array, rows: number, columns: number, floor: number): Half {
  const tall = rows >= columns;
  const size = tall ? columns : rows;
  const gram = new Float64Array(size * size);
  if (tall) crossProductInto(gram, matrix, rows, columns);
  else outerProductInto(gram, matrix, rows, columns);
  const {values, vectors} = symmetricEigen(gram, size, floor);
  const least = Math.max(floor, USABLE * Math.max(values[0] ?? 0, 0));
  let count = 0;
  while (count < size && values[count] > least) ++count;
  return {count, eigenvalues: values.slice(0, count), vectors: vectors.subarray(0, count * size)};
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
  const half = smallerHalf(matrix, rows, columns, floor);
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
  const half = smallerHalf(matrix, rows, columns, floor);
  const left = rows >= columns ? leftOf(half.vectors, half.eigenvalues, matrix, rows, columns) : half.vectors;
  return {rows, count: half.count, eigenvalues: half.eigenvalues, left};
}

/** u_kᵀ d for every mode. */
export const dataCoefficients = (system: DataModes, data: Float64Array): Float64Array =>
  matVecInto(new Float64Array(system.count), system.left, data, system.count, system.rows);
