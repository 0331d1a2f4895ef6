/** The truncated operator: density on panels → readings. */
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
import {kernelOverPiece, requireAbove} from "../potential/kernel.ts";
import {poissonRowInto} from "../potential/poisson.ts";
import type {Panels} from "./panels.ts";
import type {Readings} from "./readings.ts";

export interface ForwardOperator {
  readonly readings: number;
  readonly panels: Panels;
  /** readings × panels, row-major. */
  readonly matrix: Float64Array;
}

/** @throws {ModelError} `potential/station-below-boundary` */
export function forwardOperator(readings: Readings, panels: Panels): ForwardOperator {
  const matrix = new Float64Array(readings.count * panels.count);
  for (let i = 0; i < readings.count; ++i) readingRowInto(matrix, i * panels.count, readings, i, panels);
  return {readings: readings.count, panels, matrix};
}

/** One row: what each panel's density adds to reading i. Dispatch is per row. */
function readingRowInto(matrix: Float64Array, offset: number, readings: Readings, i: number, panels: Panels): void {
  const x = readings.x[i];
  const z = readings.z[i];
  const aRe = readings.aRe[i];
  const aIm = readings.aIm[i];
  const order = readings.order[i];
  if (panels.flat && order === 0 && aRe === 0) {
    for (const {edges, first} of panels.components) poissonRowInto(matrix, offset + first, edges, x, z);
    const scale = -aIm * Math.PI;
    if (scale !== 1) for (let j = 0; j < panels.count; ++j) matrix[offset + j] *= scale;
    return;
  }
  requireAbove(x, z - heightUnder(panels, x));
  for (let j = 0; j < panels.count; ++j)
    matrix[offset + j] = kernelOverPiece(
      aRe,
      aIm,
      order,
      panels.from[j] - x,
      z - panels.yFrom[j],
      panels.to[j] - x,
      z - panels.yTo[j],
    );
}

/** Height of the panel under x; beyond them all nothing is known of the boundary, and any height will do. */
function heightUnder({flat, components, from, width, yFrom, yTo}: Panels, x: number): number {
  if (flat) return 0;
  const under = components.find(({interval}) => interval.from <= x && x <= interval.to);
  if (under === undefined) return -Infinity;
  const {first, count, interval} = under;
  const j = first + Math.min(count - 1, Math.floor((x - interval.from) / width[first]));
  return yFrom[j] + ((x - from[j]) / width[j]) * (yTo[j] - yFrom[j]);
}

/** Readings of a density on the panels; `target` (readings) must not alias `density` (panels). */
export const applyInto = (target: Float64Array, operator: ForwardOperator, density: Float64Array): Float64Array =>
  matVecInto(target, operator.matrix, density, operator.readings, operator.panels.count);

/** The adjoint in the plain dot products: readings → panels. */
export const adjointInto = (target: Float64Array, operator: ForwardOperator, data: Float64Array): Float64Array =>
  transposedMatVecInto(target, operator.matrix, data, operator.readings, operator.panels.count);
