/**
 * The one place that whitens: readings by the noise, panels by the square root of their width, so that
 * plain Euclidean norms are the misfit and ‖f‖ in L². The regional is projected out on the way.
 */
import type {ForwardOperator} from "./forward.ts";
import {projectOutInPlace, projectOutOfColumnsInPlace, type RegionalBasis} from "./regional.ts";

export interface WhitenedSystem {
  /** Rows: readings. Columns: panels. */
  readonly rows: number;
  readonly columns: number;
  /** Q A / (σ √w), row-major; acts on f √w. */
  readonly matrix: Float64Array;
  /** Q d / σ. */
  readonly data: Float64Array;
  /** √w, √m. */
  readonly rootWidth: Float64Array;
}

/** @param noise standard deviation of every reading, SI */
export function whiten(
  operator: ForwardOperator,
  values: Float64Array,
  noise: number,
  basis: RegionalBasis,
): WhitenedSystem {
  const columns = operator.panels.count;
  const rootWidth = operator.panels.width.map(Math.sqrt);
  const scale = rootWidth.map((root) => 1 / (noise * root));
  const matrix = new Float64Array(operator.matrix.length);
  for (let i = 0; i < operator.stations; ++i)
    for (let j = 0; j < columns; ++j) matrix[i * columns + j] = operator.matrix[i * columns + j] * scale[j];
  projectOutOfColumnsInPlace(matrix, columns, basis);
  return {rows: operator.stations, columns, matrix, data: whitenData(values, noise, basis), rootWidth};
}

/** Q d / σ. */
export const whitenData = (values: Float64Array, noise: number, basis: RegionalBasis): Float64Array =>
  projectOutInPlace(
    values.map((value) => value / noise),
    basis,
  );
