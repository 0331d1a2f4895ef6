/**
 * What the normal equation asks of B and one data vector d, without the modes themselves: eigenvalues of BᵀB, energies
 * of d on the modes, and (BᵀB + α)⁻¹Bᵀd; all from one reduction of the smaller Gram matrix to tridiagonal form that
 * starts at the data. The modes are worked out when they are asked for.
 *
 * Where panels or stations are many to the height, most of the Gram matrix is rounding: then G = F Fᵀ with few columns,
 * and FᵀF takes its place. What is left out of G is of the size of its rounding, so no answer is less exact.
 */
import {crossProductInto, matVecInto, outerProductInto, transposedMatVecInto} from "../numeric/matmul.ts";
import {
  factorGram,
  factorTimes,
  factorTimesRows,
  factorTransposedTimes,
  lowRankFactorInPlace,
} from "../numeric/pivoted-factor.ts";
import {type StartedTridiagonal, startedTridiagonal} from "../numeric/started-tridiagonal.ts";
import {type DataModes, leftOf, overRoots, USABLE} from "./singular-system.ts";

export interface Resolved {
  /** Modes kept: λ_k above `USABLE` of the largest. */
  readonly count: number;
  /** λ_k of the modes kept, decreasing. */
  readonly eigenvalues: Float64Array;
  /** c_k² = (u_kᵀd)². */
  readonly energies: Float64Array;
  /** ‖what of Bᵀd lies outside the modes kept‖². */
  readonly below: number;
  /**
   * (BᵀB + α)⁻¹Bᵀd; what lies outside the modes kept is taken for modes of eigenvalue `floor`.
   * @param alpha from 0 on
   */
  estimate(alpha: number, floor: number): Float64Array;
  modes(): DataModes;
}

/** A shift above this share of the largest eigenvalue drowns what is rounding in T, and what `floor` would make of it. */
const SURELY_ABOVE = 1e-7;

/** Rows over columns up to which the Gram matrix of the rows, if it has a factor, is the one to take. */
const MOST_ROWS = 1.25;

/** A symmetric matrix with the eigenvalues of BᵀB, and the ways out of its space. */
interface Stand {
  readonly started: StartedTridiagonal;
  /** (y_kᵀ start)² times λ_k to this power is c_k². */
  readonly power: 0 | -1;
  /** (BᵀB + α)⁻¹Bᵀd from the resolvent of the start. */
  toUnknowns(y: Float64Array, alpha: number): Float64Array;
  /** Unit eigenvectors y_k, one a row, as u_k. */
  toLeft(y: Float64Array, eigenvalues: Float64Array): Float64Array;
}

export function resolved(matrix: Float64Array, rows: number, columns: number, data: Float64Array): Resolved {
  const {started, power, toUnknowns, toLeft} = standOf(matrix, rows, columns, data);
  const {values, weights} = started;
  const largest = Math.max(values[0] ?? 0, 0);
  let count = 0;
  while (count < values.length && values[count] > USABLE * largest) ++count;
  const eigenvalues = values.slice(0, count);
  const energies = eigenvalues.map((lambda, k) => weights[k] * lambda ** power);
  let below = 0;
  for (let k = count; k < values.length; ++k) below += weights[k] * Math.max(values[k], 0) ** (1 + power);
  let known: DataModes | undefined;
  const modes = (): DataModes => {
    known ??= {rows, count, eigenvalues, left: toLeft(started.vectors(count), eigenvalues)};
    return known;
  };
  return {
    ...{count, eigenvalues, energies, below, modes},
    estimate: (alpha, floor) =>
      alpha > SURELY_ABOVE * largest
        ? toUnknowns(started.resolvent(alpha), alpha)
        : byModes(modes(), matrix, columns, data, alpha, floor),
  };
}

/** Down to the least multipliers: Σ √λ_k c_k/(λ_k + α) v_k, and what is left of Bᵀd over α and the floor. */
function byModes(
  {rows, count, eigenvalues, left}: DataModes,
  matrix: Float64Array,
  columns: number,
  data: Float64Array,
  alpha: number,
  floor: number,
): Float64Array {
  const backOf = (over: Float64Array): Float64Array =>
    transposedMatVecInto(new Float64Array(columns), matrix, over, rows, columns);
  const coefficients = matVecInto(new Float64Array(count), left, data, count, rows);
  const combine = (weights: Float64Array): Float64Array =>
    transposedMatVecInto(new Float64Array(rows), left, weights, count, rows);
  const density = backOf(combine(coefficients.map((c, k) => c / (eigenvalues[k] + alpha))));
  if (!(alpha + floor > 0)) return density;
  const seen = combine(coefficients);
  const rest = backOf(data.map((value, i) => value - seen[i]));
  for (let j = 0; j < columns; ++j) density[j] += rest[j] / (alpha + floor);
  return density;
}

function standOf(matrix: Float64Array, rows: number, columns: number, data: Float64Array): Stand {
  if (rows > MOST_ROWS * columns) return standOnColumns(matrix, rows, columns, data);
  const gram = outerProductInto(new Float64Array(rows * rows), matrix, rows, columns);
  const factor = lowRankFactorInPlace(gram, rows);
  const backOf = (over: Float64Array): Float64Array =>
    transposedMatVecInto(new Float64Array(columns), matrix, over, rows, columns);
  if (factor === undefined)
    return {
      started: startedTridiagonal(gram, rows, data),
      power: 0,
      toUnknowns: backOf,
      toLeft: (y) => y,
    };
  // F is to BBᵀ what B is, with fewer columns: u = (d − F (FᵀF + α)⁻¹Fᵀd)/α.
  return {
    started: startedTridiagonal(factorGram(factor), factor.rank, factorTransposedTimes(factor, data)),
    power: -1,
    toUnknowns(y, alpha) {
      const fitted = factorTimes(factor, y);
      return backOf(data.map((value, i) => (value - fitted[i]) / alpha));
    },
    toLeft: (y, eigenvalues) => overRoots(factorTimesRows(factor, y, eigenvalues.length), rows, eigenvalues),
  };
}

function standOnColumns(matrix: Float64Array, rows: number, columns: number, data: Float64Array): Stand {
  const gram = crossProductInto(new Float64Array(columns * columns), matrix, rows, columns);
  const back = transposedMatVecInto(new Float64Array(columns), matrix, data, rows, columns);
  return {
    started: startedTridiagonal(gram, columns, back),
    power: -1,
    toUnknowns: (y) => y,
    toLeft: (right, eigenvalues) => leftOf(right, eigenvalues, matrix, rows, columns),
  };
}
