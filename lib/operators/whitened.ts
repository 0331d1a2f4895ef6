/**
 * The one place that whitens: readings by the noise, panels by the square root of their width, so that
 * plain Euclidean norms are the misfit and ‖f‖ in L². The regional is projected out on the way.
 */
import type {ForwardOperator} from "./forward.ts";
import type {Readings} from "./readings.ts";
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

/** @param readings whose noise whitens; @param basis in whitened readings */
export function whiten(
  operator: ForwardOperator,
  readings: Readings,
  values: Float64Array,
  basis: RegionalBasis,
): WhitenedSystem {
  const columns = operator.panels.count;
  const rootWidth = operator.panels.width.map(Math.sqrt);
  const scale = rootWidth.map((root) => 1 / root);
  const matrix = new Float64Array(operator.matrix.length);
  for (let i = 0; i < operator.readings; ++i) {
    const inverse = 1 / readings.noise[i];
    for (let j = 0; j < columns; ++j) matrix[i * columns + j] = operator.matrix[i * columns + j] * inverse * scale[j];
  }
  projectOutOfColumnsInPlace(matrix, columns, basis);
  return {rows: operator.readings, columns, matrix, data: whitenData(values, readings, basis), rootWidth};
}

/** Q d / σ. */
export const whitenData = (values: Float64Array, readings: Readings, basis: RegionalBasis): Float64Array =>
  projectOutInPlace(
    values.map((value, i) => value / readings.noise[i]),
    basis,
  );
