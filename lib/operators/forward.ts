/** The truncated Poisson operator: density on panels → field at stations. */
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
import {poissonRowInto} from "../potential/poisson.ts";
import type {Panels} from "./panels.ts";

export interface ForwardOperator {
  readonly stations: number;
  readonly panels: Panels;
  /** stations × panels, row-major: harmonic measures. */
  readonly matrix: Float64Array;
}

/**
 * @param x chainage of the stations, m
 * @param z height of the stations above the boundary, m
 * @throws {ModelError} `potential/station-below-boundary`
 */
export function forwardOperator(x: Float64Array, z: Float64Array, panels: Panels): ForwardOperator {
  const matrix = new Float64Array(x.length * panels.count);
  for (let i = 0; i < x.length; ++i)
    for (const {edges, first} of panels.components) poissonRowInto(matrix, i * panels.count + first, edges, x[i], z[i]);
  return {stations: x.length, panels, matrix};
}

/** Field at the stations of a density on the panels; `target` (stations) must not alias `density` (panels). */
export const applyInto = (target: Float64Array, operator: ForwardOperator, density: Float64Array): Float64Array =>
  matVecInto(target, operator.matrix, density, operator.stations, operator.panels.count);

/** The adjoint in the plain dot products: stations → panels. */
export const adjointInto = (target: Float64Array, operator: ForwardOperator, data: Float64Array): Float64Array =>
  transposedMatVecInto(target, operator.matrix, data, operator.stations, operator.panels.count);
