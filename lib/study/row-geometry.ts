/**
 * Everything about a row of a grid that does not depend on its readings. Rows with readings at the same places
 * share it: one eigen-decomposition, one set of half-widths.
 */
import {levelRowInto} from "../continuation/field-on-level.ts";
import type {LevelSetting} from "../continuation/level-profile.ts";
import {levelHeights} from "../continuation/levels.ts";
import {type Support, totalLength} from "../geometry/interval.ts";
import {resolutionOf, stretchAt} from "../inverse/averages.ts";
import {intervalSolver} from "../inverse/intervals.ts";
import {multiplyTransposedInto} from "../numeric/matmul.ts";
import {continuumOf} from "../operators/continuum.ts";
import {forwardOperator} from "../operators/forward.ts";
import {fieldAt, meanOver} from "../operators/functional.ts";
import type {Panels} from "../operators/panels.ts";
import {type RegionalBasis, regionalBasis} from "../operators/regional.ts";
import {whiten} from "../operators/whitened.ts";
import {type SingularSystem, singularSystem} from "../spectral/singular-system.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {Settings} from "./settings.ts";
import {panelsOfLine, supportOfLine} from "./support-of-line.ts";

export interface RowGeometry {
  readonly panels: Panels;
  readonly support: Support;
  readonly supportLength: number;
  readonly basis: RegionalBasis;
  readonly modes: SingularSystem;
  readonly rootWidth: Float64Array;
  readonly conditioned: ConditionedLine;
}

/** Half-widths at every station, and the matrices that turn mode weights into answers there (stations × modes). */
export interface RowAnswers {
  readonly resolution: number;
  readonly source: RowAnswer;
  readonly levels: readonly {readonly setting: LevelSetting; readonly answer: RowAnswer}[];
}

interface RowAnswer {
  readonly fromModes: Float64Array;
  readonly halfWidth: Float64Array;
}

/** @param area the part of the row inside the polygons of the support, if any were asked */
export function rowGeometry(conditioned: ConditionedLine, settings: Settings, area: Support | undefined): RowGeometry {
  const {chainage} = conditioned.line.stations;
  const support = supportOfLine(conditioned, settings.model, area);
  const panels = panelsOfLine(conditioned, support, settings.model);
  const basis = regionalBasis(chainage, settings.model.regional);
  const system = whiten(
    forwardOperator(chainage, conditioned.height, panels),
    conditioned.values,
    conditioned.noise,
    basis,
  );
  const modes = singularSystem(system.matrix, system.rows, system.columns);
  return {panels, support, supportLength: totalLength(support), basis, modes, rootWidth: system.rootWidth, conditioned};
}

/** @param bound M, SI·√m; @param multiplier of the estimate, for the resolution */
export function rowAnswers(geometry: RowGeometry, settings: Settings, bound: number, multiplier: number): RowAnswers {
  const {panels, support, conditioned, modes} = geometry;
  const {chainage} = conditioned.line.stations;
  const continuum = continuumOf(chainage, conditioned.height, support, conditioned.noise);
  const sorted = regionalBasis(continuum.x, settings.model.regional);
  const solver = intervalSolver(
    continuum,
    sorted,
    new Float64Array(chainage.length),
    bound,
    settings.wanted.confidence,
  );
  const resolution = resolutionOf(solver, panels, multiplier, chainage);
  const answer = (height: Float64Array): RowAnswer => {
    const halfWidth = chainage.map((x, i) => {
      if (height[i] > 0) return solver.interval(fieldAt(x, height[i], support)).halfWidth;
      const stretch = stretchAt(panels, resolution, x);
      return stretch === undefined ? 0 : solver.interval(meanOver(stretch, support)).halfWidth;
    });
    // Stations × panels on densities √w-free, then onto the modes: answers = (level matrix · D) Vᵀ.
    const matrix = new Float64Array(chainage.length * panels.count);
    for (let i = 0; i < chainage.length; ++i) {
      levelRowInto(matrix, i * panels.count, panels, chainage[i], height[i]);
      for (let j = 0; j < panels.count; ++j) matrix[i * panels.count + j] /= geometry.rootWidth[j];
    }
    const fromModes = multiplyTransposedInto(
      new Float64Array(chainage.length * modes.count),
      matrix,
      modes.right,
      chainage.length,
      panels.count,
      modes.count,
    );
    return {fromModes, halfWidth};
  };
  const source = answer(new Float64Array(chainage.length));
  return {
    resolution: resolution.length,
    source,
    levels: settings.wanted.levels.map((setting) => {
      const height = levelHeights(setting, conditioned);
      // On the boundary the field is the source.
      return {setting, answer: height.every((z) => z === 0) ? source : answer(height)};
    }),
  };
}
