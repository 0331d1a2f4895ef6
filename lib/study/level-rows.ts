/** Long rows that are level and complete: solved without modes, two at a time, by transforms that all rows share. */
import {type LevelCells, levelCells} from "../operators/level-cells.ts";
import type {Panels} from "../operators/panels.ts";
import {pick, type Readings, readingsOf} from "../operators/readings.ts";
import {regionalBasis} from "../operators/regional.ts";
import {type LevelSystem, levelSystem} from "../solvers/level-system.ts";
import {byChainage} from "../survey/by-chainage.ts";
import {joined} from "./modal-rows.ts";
import {LEVEL_STATIONS} from "./operated.ts";
import type {BandAsked, RowFigures} from "./row-geometry.ts";

export interface LevelRows {
  readonly system: LevelSystem;
  /** Whitened readings of a row in the order of chainage, as the system takes them. */
  sorted(data: Float64Array): Float64Array;
  answering(bands: readonly BandAsked[], multiplier: number): (data: readonly Float64Array[]) => RowFigures[];
}

/** @returns undefined where the rows are short, not level and even, or a level lies too close above the boundary for cells */
export function levelRows(
  readings: Readings,
  panels: Panels,
  degree: number,
  bands: readonly BandAsked[],
): LevelRows | undefined {
  if (readings.count < LEVEL_STATIONS) return undefined;
  const order = Int32Array.from(byChainage(readings.x));
  const inOrder = pick(readings, order);
  const cells = levelCells(inOrder, panels);
  if (cells === undefined) return undefined;
  const maps = bands.map((band) => bandMaps(cells, inOrder, panels, band));
  if (!maps.every((map) => map !== undefined)) return undefined;
  const system = levelSystem(cells, regionalBasis(inOrder, degree));
  const sorted = (data: Float64Array): Float64Array => Float64Array.from(order, (place) => data[place]!);
  const unsorted = (values: Float64Array): Float64Array => {
    const placed = new Float64Array(values.length);
    order.forEach((place, k) => {
      placed[place] = values[k]!;
    });
    return placed;
  };
  return {
    system,
    sorted,
    answering(_, multiplier) {
      if (multiplier === Infinity)
        return (data) =>
          data.map((row) => ({
            values: maps.map(() => new Float64Array(row.length)),
            norm: 0,
            misfit: row.reduce((sum, value) => sum + value * value, 0),
            degreesOfFreedom: 0,
          }));
      const at = system.at(multiplier);
      return (data) =>
        at.plain(data.map(sorted)).map(({source, residual}) => ({
          values: maps.map((parts) => unsorted(joined(parts.map((map) => map(source))))),
          norm: Math.sqrt(source.reduce((sum, value) => sum + value * value, 0)),
          misfit: residual.reduce((sum, value) => sum + value * value, 0),
          degreesOfFreedom: at.degreesOfFreedom,
        }));
    },
  };
}

type CellMap = (source: Float64Array) => Float64Array;

/** Below half a cell's width its steps would show. */
const STEPS_SHOW = 0.5;

/** f √w on the cells → the field at every station. */
function bandMaps(
  cells: LevelCells,
  {x}: Readings,
  panels: Panels,
  {height, responses}: BandAsked,
): readonly CellMap[] | undefined {
  const above = height[0]!;
  const widest = cells.from.reduce((most, from, j) => Math.max(most, cells.to[j]! - from), 0);
  if (!height.every((own) => own === above) || (above > 0 && above < STEPS_SHOW * widest)) return undefined;
  if (above === 0) return [onBoundary(cells, x)];
  const maps = responses.map((response) => {
    const field = levelCells(readingsOf([{x, z: new Float64Array(x.length).fill(above), response, noise: 1}]), panels);
    return field === undefined
      ? undefined
      : (source: Float64Array) => field.applyInto(new Float64Array(x.length), source);
  });
  return maps.every((map) => map !== undefined) ? maps : undefined;
}

/** Cells this share of their width apart are neighbours. */
const TOUCHING = 1e-6;

/** The broken line through the centres of neighbouring cells, level beyond the outermost, as between those of panels. */
function onBoundary({from, to, count}: LevelCells, x: Float64Array): CellMap {
  const centre = from.map((left, j) => 0.5 * (left + to[j]!));
  const scale = from.map((left, j) => 1 / Math.sqrt(to[j]! - left));
  const left = new Int32Array(x.length).fill(-1);
  const share = new Float64Array(x.length);
  let cell = 0;
  x.forEach((at, i) => {
    while (cell < count - 1 && to[cell]! < at) ++cell;
    if (at < from[cell]! || at > to[cell]!) return;
    const j = at < centre[cell]! ? cell - 1 : cell;
    const touching = j >= 0 && j + 1 < count && from[j + 1]! - to[j]! <= TOUCHING * (to[j]! - from[j]!);
    left[i] = touching ? j : cell;
    share[i] = touching ? (at - centre[j]!) / (centre[j + 1]! - centre[j]!) : 0;
  });
  return (source) =>
    x.map((_, i) => {
      const j = left[i]!;
      if (j < 0) return 0;
      const here = source[j]! * scale[j]!;
      return share[i]! > 0 ? (1 - share[i]!) * here + share[i]! * source[j + 1]! * scale[j + 1]! : here;
    });
}
