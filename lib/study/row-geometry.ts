/**
 * Everything about a row of a grid that does not depend on its readings. Rows with readings at the same places
 * share it: one eigen-decomposition, or none where the row is long, level and complete; one set of half-widths.
 */
import type {LevelSetting} from "../continuation/level-profile.ts";
import {levelHeights, responsesOf} from "../continuation/levels.ts";
import {type Support, totalLength} from "../geometry/interval.ts";
import {resolutionOf, stretchAt} from "../inverse/averages.ts";
import {intervalSolver} from "../inverse/intervals.ts";
import type {BoundChoice} from "../inverse/nouns.ts";
import {continuumOf} from "../operators/continuum.ts";
import {fieldAt, meanOver} from "../operators/functional.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {readingsOfLine} from "../operators/readings-of-line.ts";
import {type RegionalBasis, regionalBasis} from "../operators/regional.ts";
import type {Response} from "../potential/kernel.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {type LevelRows, levelRows} from "./level-rows.ts";
import {type ModalRows, modalRows} from "./modal-rows.ts";
import type {RowWork} from "./row-work.ts";
import type {Settings} from "./settings.ts";
import {panelsOfLine, supportOfLine} from "./support-of-line.ts";

export interface RowGeometry {
  readonly panels: Panels;
  readonly support: Support;
  readonly supportLength: number;
  readonly readings: Readings;
  readonly basis: RegionalBasis;
  readonly conditioned: ConditionedLine;
  readonly rows: ModalRows | LevelRows;
}

/** What a row's readings come to at the one multiplier. */
export interface RowFigures {
  /** At every station, one for each band asked. */
  readonly values: readonly Float64Array[];
  readonly norm: number;
  readonly misfit: number;
  readonly degreesOfFreedom: number;
}

/** A field to be given at every station. */
export interface BandAsked {
  /** Height above the boundary at each station; all 0: the source. */
  readonly height: Float64Array;
  /** One, or two whose root of squares is the answer. */
  readonly responses: readonly Response[];
}

export interface RowAnswers {
  /** Worked out when first asked for, like the half-widths. */
  resolution(): number;
  /** Of each band at every station; the first is the source. */
  halfWidths(): readonly Float64Array[];
  /** The band of each level. */
  readonly levels: readonly {readonly setting: LevelSetting; readonly band: number}[];
  /** @param data Q d/σ of rows that share this geometry */
  solve(data: readonly Float64Array[]): RowFigures[];
  /** The same for another thread, but for the readings; undefined where rows are not level. */
  readonly work: Omit<RowWork, "values"> | undefined;
}

/** @param area the part of the row inside the polygons of the support, if any were asked */
export function rowGeometry(conditioned: ConditionedLine, settings: Settings, area: Support | undefined): RowGeometry {
  const support = supportOfLine(conditioned, settings.model, area);
  const panels = panelsOfLine(conditioned, support, settings.model);
  const readings = readingsOfLine(conditioned);
  const basis = regionalBasis(readings, settings.model.regional);
  const level = settings.bound.modes
    ? undefined
    : levelRows(readings, panels, settings.model.regional, bandsOf(conditioned, settings).bands);
  return {
    panels,
    support,
    supportLength: totalLength(support),
    readings,
    basis,
    conditioned,
    rows: level ?? modalRows(conditioned, readings, panels, basis),
  };
}

/** The bands, the source first, and which of them each level is. */
function bandsOf(conditioned: ConditionedLine, settings: Settings) {
  const quantity = settings.wanted.levelQuantity ?? BOUNDARY_FIELD;
  const {method} = conditioned.channels[0].channel.observable.source;
  const bands: BandAsked[] = [
    {height: new Float64Array(conditioned.line.stations.count), responses: BOUNDARY_FIELD.responses(undefined)},
  ];
  const levels = settings.wanted.levels.map((setting) => {
    const height = levelHeights(setting, conditioned);
    // On the boundary the boundary field is the source.
    if (quantity === BOUNDARY_FIELD && height.every((z) => z === 0)) return {setting, band: 0};
    bands.push({height, responses: responsesOf(quantity, method, conditioned.direction)});
    return {setting, band: bands.length - 1};
  });
  return {bands, levels};
}

/** @param key of the geometry */
export function rowAnswers(
  key: string,
  geometry: RowGeometry,
  settings: Settings,
  {bound, multiplier}: Pick<BoundChoice, "bound" | "multiplier">,
): RowAnswers {
  const {panels, readings, rows} = geometry;
  const {bands, levels} = bandsOf(geometry.conditioned, settings);
  let widths: ReturnType<typeof widthsOf> | undefined;
  let solve: RowAnswers["solve"] | undefined;
  const asked = () => {
    widths ??= widthsOf(geometry, settings, bands, bound, multiplier);
    return widths;
  };
  return {
    resolution: () => asked().resolution,
    halfWidths: () => asked().halfWidths,
    levels,
    solve: (data) => {
      solve ??= rows.answering(bands, multiplier);
      return solve(data);
    },
    work: "modes" in rows ? undefined : {key, readings, panels, degree: settings.model.regional, bands, multiplier},
  };
}

/** @param bound M, SI·√m; @param multiplier of the estimate */
function widthsOf(
  {panels, support, conditioned, readings}: RowGeometry,
  settings: Settings,
  bands: readonly BandAsked[],
  bound: number,
  multiplier: number,
) {
  const {chainage} = conditioned.line.stations;
  const continuum = continuumOf(readings, support, boundaryOfPanels(panels));
  const sorted = regionalBasis(continuum, settings.model.regional);
  const solver = intervalSolver(continuum, sorted, new Float64Array(continuum.count), {
    bound,
    confidence: settings.wanted.confidence,
  });
  const resolution = resolutionOf(solver, panels, multiplier, chainage);
  return {
    resolution: resolution.length,
    halfWidths: bands.map(({height, responses}) =>
      chainage.map((x, i) => {
        if (responses.length > 1) return Number.NaN;
        if (height[i] > 0) return solver.interval(fieldAt(x, height[i], responses[0]!, continuum)).halfWidth;
        const stretch = stretchAt(panels, resolution, x);
        return stretch === undefined ? 0 : solver.interval(meanOver(stretch, support)).halfWidth;
      }),
    ),
  };
}
