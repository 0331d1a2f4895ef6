/** Rows of one geometry by its modes: their energies pooled, and their answers as matrices on the modes. */
import {levelRowInto} from "../continuation/field-on-level.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {forwardOperator} from "../operators/forward.ts";
import type {Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {valuesOfLine} from "../operators/readings-of-line.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import {whiten} from "../operators/whitened.ts";
import {energyOutside, modalSums} from "../solvers/spectral.ts";
import {dataCoefficients, type SingularSystem, singularSystem} from "../spectral/singular-system.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {BandAsked, RowFigures} from "./row-geometry.ts";

export interface ModalRows {
  readonly modes: SingularSystem;
  /** Turns rows of whitened readings into answers. */
  answering(bands: readonly BandAsked[], multiplier: number): (data: readonly Float64Array[]) => RowFigures[];
}

export function modalRows(
  conditioned: ConditionedLine,
  readings: Readings,
  panels: Panels,
  basis: RegionalBasis,
): ModalRows {
  const system = whiten(forwardOperator(readings, panels), readings, valuesOfLine(conditioned), basis);
  const modes = singularSystem(system.matrix, system.rows, system.columns);
  const {chainage} = conditioned.line.stations;
  return {
    modes,
    answering(bands, multiplier) {
      const matrices = bands.map(({height, responses}) =>
        responses.map((response) => {
          // Stations × panels on densities √w-free, then onto the modes: answers = (level matrix · D) Vᵀ.
          const matrix = new Float64Array(chainage.length * panels.count);
          for (let i = 0; i < chainage.length; ++i) {
            levelRowInto(matrix, i * panels.count, panels, chainage[i], 0, height[i], response);
            for (let j = 0; j < panels.count; ++j) matrix[i * panels.count + j] /= system.rootWidth[j];
          }
          return multiplyTransposedInto(
            new Float64Array(chainage.length * modes.count),
            matrix,
            modes.right,
            chainage.length,
            panels.count,
            modes.count,
          );
        }),
      );
      return (data) =>
        data.map((row) => {
          const {coefficients, energies, outside} = onModes(modes, row);
          const sums = modalSums(modes.eigenvalues, energies, outside);
          const weights = coefficients.map(
            (c, k) => (Math.sqrt(modes.eigenvalues[k]) * c) / (modes.eigenvalues[k] + multiplier),
          );
          return {
            values: matrices.map((parts) =>
              joined(
                parts.map((matrix) =>
                  matVecInto(new Float64Array(chainage.length), matrix, weights, chainage.length, modes.count),
                ),
              ),
            ),
            norm: sums.norm(multiplier),
            misfit: sums.misfit(multiplier),
            degreesOfFreedom: sums.degreesOfFreedom(multiplier),
          };
        });
    },
  };
}

/** One band, or the root of squares of two. */
export const joined = (parts: readonly Float64Array[]): Float64Array =>
  parts.length === 1 ? parts[0]! : parts[0]!.map((_, i) => Math.hypot(...parts.map((part) => part[i]!)));

/** A row's readings seen by the modes of its geometry: c_k, c_k², and the energy outside their span. */
export function onModes(modes: SingularSystem, data: Float64Array) {
  const coefficients = dataCoefficients(modes, data);
  const energies = coefficients.map((c) => c * c);
  return {coefficients, energies, outside: energyOutside(data, energies)};
}
