/**
 * The one place that whitens: readings by the noise, panels by the square root of their width, so that
 * plain Euclidean norms are the misfit and ‖f‖ in L². The regional is projected out on the way.
 */
import {whitened} from "./correlated-noise.ts";
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
  /** What was projected out, in whitened readings. */
  readonly basis: RegionalBasis;
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
    const before = readings.before[i];
    const rho = readings.rho[i];
    if (before < 0)
      for (let j = 0; j < columns; ++j) matrix[i * columns + j] = operator.matrix[i * columns + j] * inverse * scale[j];
    else
      for (let j = 0; j < columns; ++j)
        matrix[i * columns + j] =
          (operator.matrix[i * columns + j] - rho * operator.matrix[before * columns + j]) * inverse * scale[j];
  }
  projectOutOfColumnsInPlace(matrix, columns, basis);
  return {rows: operator.readings, columns, matrix, data: whitenData(values, readings, basis), rootWidth, basis};
}

/** Q d / σ; where the noise is correlated, Q W d with W of `correlated-noise.ts`. */
export const whitenData = (values: Float64Array, readings: Readings, basis: RegionalBasis): Float64Array =>
  projectOutInPlace(whitened(values, readings), basis);
