/**
 * Values that the unknowns must meet exactly: T u = w. With u₀ = Tᵀ(TTᵀ)⁻¹w the least that meets them, every other is
 * u₀ + P u′, P the projection off the rows of T; so the data become d − B u₀, the matrix B P, and ‖u‖² = ‖u₀‖² + ‖u′‖².
 * Source: Lawson & Hanson, Solving Least Squares Problems (1974), ch. 20 (from memory).
 */
import {InputError} from "../errors.ts";
import {choleskyInPlace, choleskySolveInto, pivotedCholesky} from "../numeric/cholesky.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import type {WhitenedSystem} from "../operators/whitened.ts";

export interface Constrained {
  readonly system: WhitenedSystem;
  /** u₀ over the unknowns f √w, and ‖u₀‖: the least norm that meets the values. */
  readonly least: Float64Array;
  readonly leastNorm: number;
}

/**
 * @param rows one a value: what each panel's density adds to it
 * @throws {InputError} `tie/alike` when two rows cannot be told apart
 */
export function constrain(
  system: WhitenedSystem,
  rows: readonly Float64Array[],
  values: readonly number[],
): Constrained {
  const n = system.columns;
  const k = rows.length;
  const t = new Float64Array(k * n);
  rows.forEach((row, i) => {
    for (let j = 0; j < n; ++j) t[i * n + j] = row[j] / system.rootWidth[j];
  });
  const gram = multiplyTransposedInto(new Float64Array(k * k), t, t, k, n, k);
  if (!independent(gram, k))
    throw new InputError(
      "tie/alike",
      "Ties that are to be met exactly repeat each other: no source can tell them apart. Leave one out, or give them a tolerance.",
    );
  choleskyInPlace(gram, k);
  const solve = (right: Float64Array): Float64Array => choleskySolveInto(new Float64Array(k), gram, right, k);
  const least = new Float64Array(n);
  const weights = solve(Float64Array.from(values));
  for (let i = 0; i < k; ++i) for (let j = 0; j < n; ++j) least[j] += weights[i] * t[i * n + j];
  const data = matVecInto(new Float64Array(system.rows), system.matrix, least, system.rows, n).map(
    (value, i) => system.data[i] - value,
  );
  const matrix = Float64Array.from(system.matrix);
  // Twice, so that what rounding leaves of the rows of T is rounding of rounding.
  for (let pass = 0; pass < 2; ++pass) {
    const across = multiplyTransposedInto(new Float64Array(system.rows * k), matrix, t, system.rows, n, k);
    for (let r = 0; r < system.rows; ++r) {
      const share = solve(across.slice(r * k, (r + 1) * k));
      for (let i = 0; i < k; ++i) for (let j = 0; j < n; ++j) matrix[r * n + j] -= share[i] * t[i * n + j];
    }
  }
  return {system: {...system, matrix, data}, least, leastNorm: Math.hypot(...least)};
}

/** Whether every row adds more than rounding to those before it: its pivot against the largest, 1e-11. */
function independent(gram: Float64Array, k: number): boolean {
  const {rank} = pivotedCholesky(gram, k, 1e-11);
  return rank === k;
}
