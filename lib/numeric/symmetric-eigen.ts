/**
 * A = Vᵀ diag(λ) V for a full symmetric matrix: Householder reduction to
 * tridiagonal form, divide and conquer there, and the way back.
 *
 * Values are right to a few ε‖A‖, vectors orthogonal to a few nε; small values
 * carry no relative accuracy. The same input gives the same bits everywhere.
 */
import {NumericalError} from "../errors.ts";
import {backTransformInPlace} from "./back-transform.ts";
import {tridiagonalDivideInPlace} from "./tridiagonal-divide.ts";
import {tridiagonalQlInPlace} from "./tridiagonal-ql.ts";
import {type Tridiagonal, tridiagonaliseInPlace} from "./tridiagonalise.ts";

export interface SymmetricEigen {
  /** n eigenvalues, descending. */
  readonly values: Float64Array;
  /** One row an eigenvalue, as far as they were asked for: row k is the unit eigenvector of `values[k]`. */
  readonly vectors: Float64Array;
}

/**
 * Eigenvalues and eigenvectors.
 *
 * @param floor the vectors of eigenvalues that are not above it are not worked out; all are by default
 * @param a n × n row-major, symmetric (the lower triangle is read), not modified
 * @throws {NumericalError} `numeric/not-finite` if an entry is NaN or infinite
 */
export function symmetricEigen(a: Float64Array, n: number, floor = -Infinity): SymmetricEigen {
  const {reduced, scale} = reduce(a, n);
  const d = reduced.diagonal;
  const z = tridiagonalDivideInPlace(d, reduced.offDiagonal);
  const values = new Float64Array(n);
  for (let k = 0; k < n; ++k) values[k] = d[n - 1 - k] * scale;
  let count = 0;
  while (count < n && values[count] > floor) ++count;
  const vectors = new Float64Array(count * n);
  for (let k = 0; k < count; ++k) vectors.set(z.subarray((n - 1 - k) * n, (n - k) * n), k * n);
  return {values, vectors: backTransformInPlace(vectors, count, reduced)};
}

/** Eigenvalues alone, descending, at about a third of the cost. Arguments and errors as `symmetricEigen`. */
export function symmetricEigenvalues(a: Float64Array, n: number): Float64Array {
  const {reduced, scale} = reduce(a, n);
  const d = reduced.diagonal;
  tridiagonalQlInPlace(d, reduced.offDiagonal, 0, n);
  return d
    .sort()
    .reverse()
    .map((value) => value * scale);
}

/** The tridiagonal form of a / scale, `scale` a power of two, so that its norm is about one. */
function reduce(a: Float64Array, n: number): {reduced: Tridiagonal; scale: number} {
  const {work, scale} = scaledWork(a, n, n);
  const reduced = tridiagonaliseInPlace(work, n);
  return {reduced, scale: scale * rescaleInPlace(reduced.diagonal, reduced.offDiagonal)};
}

/**
 * The lower triangle of a / scale in rows of length `stride`, `scale` a power of two that makes the largest entry lie in
 * [1, 2); as many rows as columns, those beyond n zero.
 *
 * @throws {NumericalError} `numeric/not-finite`
 */
export function scaledWork(a: Float64Array, n: number, stride: number): {work: Float64Array; scale: number} {
  let largest = 0;
  for (let i = 0; i < n; ++i) {
    for (let j = 0; j <= i; ++j) {
      const size = Math.abs(a[i * n + j]);
      if (!(size < Infinity)) {
        throw new NumericalError(
          "numeric/not-finite",
          `Entry (${i + 1}, ${j + 1}) of a symmetric matrix of order ${n} is ${a[i * n + j]}; every entry must be a finite number.`,
        );
      }
      if (size > largest) largest = size;
    }
  }
  const scale = powerOfTwoBelow(largest);
  const work = new Float64Array(stride * stride);
  const inverse = 1 / scale;
  for (let i = 0; i < n; ++i) for (let j = 0; j <= i; ++j) work[i * stride + j] = a[i * n + j] * inverse;
  return {work, scale};
}

/**
 * Divides a tridiagonal matrix by a power of two, which is returned, so that its norm is about one: a matrix of order n
 * with entries of one may have norm n, and what its methods hold for negligible is absolute.
 */
export function rescaleInPlace(diagonal: Float64Array, offDiagonal: Float64Array): number {
  let largest = 0;
  for (let i = 0; i < diagonal.length; ++i)
    largest = Math.max(largest, Math.abs(diagonal[i]), Math.abs(offDiagonal[i]));
  const scale = powerOfTwoBelow(largest);
  for (let i = 0; i < diagonal.length; ++i) {
    diagonal[i] /= scale;
    offDiagonal[i] /= scale;
  }
  return scale;
}

/** The exponent is capped so that 1 / scale stays finite for subnormal numbers. */
const powerOfTwoBelow = (largest: number): number =>
  largest > 0 ? 2 ** Math.max(-1022, Math.floor(Math.log2(largest))) : 1;
