/**
 * Everything about a row of a grid that does not depend on its readings. Rows with readings at the same places
 * share it: one eigen-decomposition, one set of half-widths.
 */
import {levelRowInto} from "../continuation/field-on-level.ts";
import type {LevelSetting} from "../continuation/level-profile.ts";
import {levelHeights, responsesOf} from "../continuation/levels.ts";
import {type Support, totalLength} from "../geometry/interval.ts";
import {resolutionOf, stretchAt} from "../inverse/averages.ts";
import {intervalSolver} from "../inverse/intervals.ts";
import {multiplyTransposedInto} from "../numeric/matmul.ts";
import {continuumOf} from "../operators/continuum.ts";
import {forwardOperator} from "../operators/forward.ts";
import {fieldAt, meanOver} from "../operators/functional.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {readingsOfLine, valuesOfLine} from "../operators/readings-of-line.ts";
import {type RegionalBasis, regionalBasis} from "../operators/regional.ts";
import {whiten} from "../operators/whitened.ts";
import type {Response} from "../potential/kernel.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import {type SingularSystem, singularSystem} from "../spectral/singular-system.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {Settings} from "./settings.ts";
import {panelsOfLine, supportOfLine} from "./support-of-line.ts";

export interface RowGeometry {
  readonly panels: Panels;
  readonly support: Support;
  readonly supportLength: number;
  readonly readings: Readings;
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
  /** One, or two whose root of squares is the answer. */
  readonly fromModes: readonly Float64Array[];
  readonly halfWidth: Float64Array;
}

/** @param area the part of the row inside the polygons of the support, if any were asked */
export function rowGeometry(conditioned: ConditionedLine, settings: Settings, area: Support | undefined): RowGeometry {
  const support = supportOfLine(conditioned, settings.model, area);
  const panels = panelsOfLine(conditioned, support, settings.model);
  const readings = readingsOfLine(conditioned);
  const basis = regionalBasis(readings, settings.model.regional);
  const system = whiten(forwardOperator(readings, panels), readings, valuesOfLine(conditioned), basis);
  const modes = singularSystem(system.matrix, system.rows, system.columns);
  return {
    panels,
    support,
    supportLength: totalLength(support),
    readings,
    basis,
    modes,
    rootWidth: system.rootWidth,
    conditioned,
  };
}

/** @param bound M, SI·√m; @param multiplier of the estimate, for the resolution */
export function rowAnswers(geometry: RowGeometry, settings: Settings, bound: number, multiplier: number): RowAnswers {
  const {panels, support, conditioned, modes} = geometry;
  const {chainage} = conditioned.line.stations;
  const continuum = continuumOf(geometry.readings, support, boundaryOfPanels(panels));
  const sorted = regionalBasis(continuum, settings.model.regional);
  const solver = intervalSolver(continuum, sorted, new Float64Array(continuum.count), {
    bound,
    confidence: settings.wanted.confidence,
  });
  const resolution = resolutionOf(solver, panels, multiplier, chainage);
  const answer = (height: Float64Array, responses: readonly Response[]): RowAnswer => {
    const halfWidth = chainage.map((x, i) => {
      if (responses.length > 1) return Number.NaN;
      if (height[i] > 0) return solver.interval(fieldAt(x, height[i], responses[0], continuum)).halfWidth;
      const stretch = stretchAt(panels, resolution, x);
      return stretch === undefined ? 0 : solver.interval(meanOver(stretch, support)).halfWidth;
    });
    const fromModes = responses.map((response) => {
      // Stations × panels on densities √w-free, then onto the modes: answers = (level matrix · D) Vᵀ.
      const matrix = new Float64Array(chainage.length * panels.count);
      for (let i = 0; i < chainage.length; ++i) {
        levelRowInto(matrix, i * panels.count, panels, chainage[i], 0, height[i], response);
        for (let j = 0; j < panels.count; ++j) matrix[i * panels.count + j] /= geometry.rootWidth[j];
      }
      return multiplyTransposedInto(
        new Float64Array(chainage.length * modes.count),
        matrix,
        modes.right,
        chainage.length,
        panels.count,
        modes.count,
      );
    });
    return {fromModes, halfWidth};
  };
  const quantity = settings.wanted.levelQuantity ?? BOUNDARY_FIELD;
  const {method} = conditioned.channels[0].channel.observable.source;
  const source = answer(new Float64Array(chainage.length), BOUNDARY_FIELD.responses(undefined));
  return {
    resolution: resolution.length,
    source,
    levels: settings.wanted.levels.map((setting) => {
      const height = levelHeights(setting, conditioned);
      // On the boundary the boundary field is the source.
      if (quantity === BOUNDARY_FIELD && height.every((z) => z === 0)) return {setting, answer: source};
      return {setting, answer: answer(height, responsesOf(quantity, method, conditioned.direction))};
    }),
  };
}
