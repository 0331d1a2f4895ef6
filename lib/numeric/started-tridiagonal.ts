/**
 * K = Q T Qᵀ with Qᵀ s = ‖s‖ e_last for a vector s of one's own: then everything asked of K through s alone, such as
 * sᵀ g(K) s or (K + α)⁻¹ s, is asked of a tridiagonal matrix, and no eigenvector is ever formed.
 *
 * The weights of s on the eigenvectors are the squares of last entries of the eigenvectors of T, which the QL iteration
 * gives with the values in O(n²). Source: Golub & Meurant, Matrices, Moments and Quadrature (2010), ch. 3; G. Golub &
 * J. Welsch, Math. Comp. 23 (1969) 221–230 (both from memory).
 */
import {backTransformInPlace, backTransformRowInPlace} from "./back-transform.ts";
import {rescaleInPlace, scaledWork} from "./symmetric-eigen.ts";
import {tridiagonalDivideInPlace} from "./tridiagonal-divide.ts";
import {tridiagonalQlInPlace} from "./tridiagonal-ql.ts";
import {tridiagonaliseInPlace} from "./tridiagonalise.ts";

export interface StartedTridiagonal {
  /** n eigenvalues of K, descending. */
  readonly values: Float64Array;
  /** n squares (v_kᵀ s)², each within a few nε‖s‖² of one of a matrix close to K. */
  readonly weights: Float64Array;
  /** (K + α)⁻¹ s, for α well above the rounding of K. */
  resolvent(alpha: number): Float64Array;
  /** The first `count` unit eigenvectors, one a row. */
  vectors(count: number): Float64Array;
}

/**
 * @param k n × n row-major, symmetric positive semidefinite (the lower triangle is read), not modified
 * @param start n entries
 * @throws {NumericalError} `numeric/not-finite` if an entry is NaN or infinite
 */
export function startedTridiagonal(k: Float64Array, n: number, start: Float64Array): StartedTridiagonal {
  // As one more row of the matrix, s is what the first reflection turns to its last place.
  const order = n + 1;
  const {work, scale} = scaledWork(k, n, order);
  let square = 0;
  for (const entry of start) square += entry * entry;
  const length = Math.sqrt(square);
  for (let i = 0; i < n; ++i) work[n * order + i] = length > 0 ? start[i] / length : 0;
  const reduced = tridiagonaliseInPlace(work, order);
  const sign = Math.sign(reduced.offDiagonal[n - 1]);
  const diagonal = reduced.diagonal.subarray(0, n);
  const offDiagonal = reduced.offDiagonal.slice(0, n);
  offDiagonal[n - 1] = 0;
  return {
    ...valuesAndWeights(diagonal, offDiagonal, scale, length),
    resolvent(alpha) {
      const x = new Float64Array(order);
      lastColumnInto(x, diagonal, offDiagonal, alpha / scale);
      const factor = (sign * length) / scale;
      return backTransformRowInPlace(x, reduced)
        .map((value) => factor * value)
        .subarray(0, n);
    },
    vectors(count) {
      const d = diagonal.slice();
      const e = offDiagonal.slice();
      rescaleInPlace(d, e);
      const z = tridiagonalDivideInPlace(d, e);
      const padded = new Float64Array(count * order);
      for (let j = 0; j < count; ++j) padded.set(z.subarray((n - 1 - j) * n, (n - j) * n), j * order);
      backTransformInPlace(padded, count, reduced);
      const vectors = new Float64Array(count * n);
      for (let j = 0; j < count; ++j) vectors.set(padded.subarray(j * order, j * order + n), j * n);
      return vectors;
    },
  };
}

function valuesAndWeights(
  diagonal: Float64Array,
  offDiagonal: Float64Array,
  scale: number,
  length: number,
): Pick<StartedTridiagonal, "values" | "weights"> {
  const n = diagonal.length;
  const d = diagonal.slice();
  const e = offDiagonal.slice();
  const whole = scale * rescaleInPlace(d, e);
  const last = new Float64Array(n);
  last[n - 1] = 1;
  tridiagonalQlInPlace(d, e, 0, n, last, 1, 0, 1);
  const order = Int32Array.from(d.keys()).sort((i, j) => d[j] - d[i] || i - j);
  return {
    values: Float64Array.from(order, (k) => whole * d[k]),
    weights: Float64Array.from(order, (k) => (length * last[k]) ** 2),
  };
}

/** Writes (T + α)⁻¹ e_last to the head of x: T + α = L D Lᵀ, so only the way back through Lᵀ is left to do. */
function lastColumnInto(x: Float64Array, diagonal: Float64Array, offDiagonal: Float64Array, alpha: number): void {
  const n = diagonal.length;
  const below = new Float64Array(n);
  let pivot = diagonal[0] + alpha;
  for (let i = 1; i < n; ++i) {
    below[i] = offDiagonal[i - 1] / pivot;
    pivot = diagonal[i] + alpha - below[i] * offDiagonal[i - 1];
  }
  x[n - 1] = 1 / pivot;
  for (let i = n - 1; i > 0; --i) x[i - 1] = -below[i] * x[i];
}
