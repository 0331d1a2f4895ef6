/**
 * How well readings are foretold by all others: the error of the prediction of a block B when it is left out of a
 * penalised fit with unpenalised regional, without fitting again. With H = R Rᵀ + U diag(λ/(λ + α)) Uᵀ and r = d − H d,
 *
 *   d_B − prediction_B = (I − H_BB)⁻¹ r_B,
 *
 * exactly, since replacing d_B by its prediction changes no fit. Where B has more readings than H has terms, with
 * H_BB = G Gᵀ: (I − G Gᵀ)⁻¹ = I + G (I − GᵀG)⁻¹ Gᵀ.
 * Source: Wahba, Spline Models for Observational Data (1990), ch. 4, for one reading (from memory); the step to blocks is
 * the same.
 */
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {matVecInto, multiplyTransposedInto, transposedMatVecInto} from "../numeric/matmul.ts";
import type {DataSide} from "../solvers/solver.ts";

/** Modes with a smaller share of the fit are rounding. */
const LEAST_SHARE = 1e-14;

/** Blocks as places in `order`: block b holds order[ends[b − 1] … ends[b] − 1]. */
export interface Blocks {
  readonly order: Int32Array;
  readonly ends: Int32Array;
}

/**
 * @returns for a multiplier, errors in units of the noise, in the order of the blocks; that throws
 *   `numeric/not-positive-definite` where the multiplier is so small that rounding leaves nothing of I − H_BB
 */
export function leftOut(side: DataSide, {order, ends}: Blocks): (multiplier: number) => Float64Array {
  const {eigenvalues, left, coefficients, data, regional} = side;
  const count = order.length;
  const modes = eigenvalues.length;
  const terms = regional.terms;
  // Readings × (regional, modes), so that a block is a run of rows.
  const width = terms + modes;
  const seen = new Float64Array(count * width);
  for (let t = 0; t < terms; ++t)
    for (let i = 0; i < count; ++i) seen[i * width + t] = regional.rows[t * regional.count + order[i]];
  for (let k = 0; k < modes; ++k)
    for (let i = 0; i < count; ++i) seen[i * width + terms + k] = left[k * data.length + order[i]];
  const widest = ends.reduce((most, end, b) => Math.max(most, end - (b > 0 ? ends[b - 1] : 0)), 0);
  // G of a block, readings × terms of H or the other way, whichever product is the smaller.
  const own = new Float64Array(widest * width);
  const matrix = new Float64Array(Math.min(widest, width) ** 2);
  const inner = new Float64Array(width);
  const added = new Float64Array(widest);
  return (multiplier) => {
    let kept = 0;
    while (kept < modes && eigenvalues[kept] > LEAST_SHARE * (eigenvalues[kept] + multiplier)) ++kept;
    const root = new Float64Array(terms + kept).fill(1);
    for (let k = 0; k < kept; ++k) root[terms + k] = Math.sqrt(eigenvalues[k] / (eigenvalues[k] + multiplier));
    // H d, which has no regional since the data have none.
    const fit = root.map((share, c) => (c < terms ? 0 : share * share * coefficients[c - terms]));
    const errors = new Float64Array(count);
    let first = 0;
    for (const end of ends) {
      const size = end - first;
      const tall = size > root.length;
      const smaller = tall ? root.length : size;
      for (let i = 0; i < size; ++i) {
        const at = (first + i) * width;
        let fitted = 0;
        for (let c = 0; c < root.length; ++c) {
          own[tall ? c * size + i : i * root.length + c] = seen[at + c] * root[c];
          fitted += seen[at + c] * fit[c];
        }
        errors[first + i] = data[order[first + i]] - fitted;
      }
      multiplyTransposedInto(matrix, own, own, smaller, tall ? size : root.length, smaller);
      for (let i = 0; i < smaller; ++i)
        for (let j = 0; j <= i; ++j) matrix[i * smaller + j] = (i === j ? 1 : 0) - matrix[i * smaller + j];
      choleskyInPlace(matrix, smaller);
      const residual = errors.subarray(first, end);
      if (tall) {
        matVecInto(inner, own, residual, smaller, size);
        choleskySolveInto(inner, matrix, inner, smaller);
        transposedMatVecInto(added.subarray(0, size), own, inner, smaller, size);
        for (let i = 0; i < size; ++i) residual[i] += added[i];
      } else choleskySolveInto(residual, matrix, residual, smaller);
      first = end;
    }
    return errors;
  };
}
