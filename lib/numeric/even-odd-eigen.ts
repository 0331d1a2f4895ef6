/**
 * Eigenvectors of a symmetric Toeplitz matrix of even order n by those of two matrices half as large: reversed, it is
 * the same matrix, so that every eigenvector is either even or odd about the middle.
 * Source: Cantoni & Butler, Linear Algebra Appl. 13 (1976) 275 (from memory).
 */
import {symmetricEigen} from "./symmetric-eigen.ts";

export interface ToeplitzEigen {
  readonly count: number;
  /** Descending. */
  readonly values: Float64Array;
  /** count × n: row k is the unit eigenvector of `values[k]`. */
  readonly vectors: Float64Array;
}

/**
 * @param diagonals T_ij = diagonals[|i − j|], an even number of them
 * @param floor eigenvalues that are not above it are left out
 */
export function toeplitzEigen(diagonals: Float64Array, floor: number): ToeplitzEigen {
  const n = diagonals.length;
  const half = n / 2;
  const parts = ([1, -1] as const).map((sign) => {
    const folded = new Float64Array(half * half);
    for (let i = 0; i < half; ++i)
      for (let j = 0; j < half; ++j)
        folded[i * half + j] = diagonals[Math.abs(i - j)] + sign * diagonals[n - 1 - i - j];
    return {sign, ...symmetricEigen(folded, half, floor)};
  });
  const found = parts
    .flatMap(({sign, values, vectors}) =>
      Array.from(values, (value, k) => ({value, sign, half: vectors.subarray(k * half, (k + 1) * half)})),
    )
    .filter(({value}) => value > floor)
    // Of equals the even one first, as they were made.
    .sort((one, other) => other.value - one.value);
  const vectors = new Float64Array(found.length * n);
  found.forEach(({sign, half: own}, k) => {
    for (let i = 0; i < half; ++i) {
      vectors[k * n + i] = own[i] * Math.SQRT1_2;
      vectors[k * n + n - 1 - i] = sign * own[i] * Math.SQRT1_2;
    }
  });
  return {count: found.length, values: Float64Array.from(found, ({value}) => value), vectors};
}
