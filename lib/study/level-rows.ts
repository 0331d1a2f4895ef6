/** Long rows that are level and complete: solved without modes, two at a time, by transforms that all rows share. */
import {toeplitzProduct} from "../numeric/fft.ts";
import {type LevelCells, levelCells} from "../operators/level-cells.ts";
import type {Panels} from "../operators/panels.ts";
import {pick, type Readings, readingsOf} from "../operators/readings.ts";
import {regionalBasis} from "../operators/regional.ts";
import {type LevelSystem, levelSystem} from "../solvers/level-system.ts";
import {manyRows} from "../solvers/many-rows.ts";
import {byChainage} from "../survey/by-chainage.ts";
import {joined} from "./modal-rows.ts";
import {LEVEL_STATIONS} from "./operated.ts";
import type {BandAsked, RowFigures} from "./row-geometry.ts";

export interface LevelRows {
  /** For the multiplier: made when it is first asked for. */
  system(): LevelSystem;
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
  const basis = regionalBasis(inOrder, degree);
  let system: LevelSystem | undefined;
  const sorted = (data: Float64Array): Float64Array => {
    const placed = new Float64Array(order.length);
    for (let k = 0; k < order.length; ++k) placed[k] = data[order[k]!]!;
    return placed;
  };
  const unsorted = (values: Float64Array): Float64Array => {
    const placed = new Float64Array(values.length);
    for (let k = 0; k < order.length; ++k) placed[order[k]!] = values[k]!;
    return placed;
  };
  return {
    system() {
      system ??= levelSystem(cells, basis);
      return system;
    },
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
      const at = manyRows(cells, basis, multiplier);
      const onCells = new Float64Array(cells.count);
      return (data) =>
        at.solve(data.map(sorted)).map(({weights, norm, misfit}) => {
          if (maps.some((parts) => parts.some((map) => map.from === "source"))) cells.adjointInto(onCells, weights);
          const values = maps.map((parts) =>
            unsorted(joined(parts.map(({from, map}) => map(from === "source" ? onCells : weights)))),
          );
          return {values, norm, misfit, degreesOfFreedom: at.degreesOfFreedom};
        });
    },
  };
}

/** To the field at every station, from f √w on the cells, or from the weights c that it is Bᵀc of. */
interface CellMap {
  readonly from: "source" | "weights";
  readonly map: (values: Float64Array) => Float64Array;
}

/** Below half a cell's width its steps would show. */
const STEPS_SHOW = 0.5;

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
  const maps = responses.map((response): CellMap | undefined => {
    const field = levelCells(readingsOf([{x, z: new Float64Array(x.length).fill(above), response, noise: 1}]), panels);
    return field && {from: "source", map: (source) => field.applyInto(new Float64Array(x.length), source)};
  });
  return maps.every((map) => map !== undefined) ? maps : undefined;
}

/** Cells this share of their width apart are neighbours. */
const TOUCHING = 1e-6;

/** The broken line through the centres of neighbouring cells, level beyond the outermost, as between those of panels. */
function onBoundary(cells: LevelCells, x: Float64Array): CellMap {
  const {from, to, count} = cells;
  const n = x.length;
  const left = new Int32Array(n).fill(-1);
  /** Of the left cell and of the one right of it. */
  const near = new Float64Array(n);
  const next = new Float64Array(n);
  const centre = from.map((edge, j) => 0.5 * (edge + to[j]!));
  const scale = from.map((edge, j) => 1 / Math.sqrt(to[j]! - edge));
  let cell = 0;
  x.forEach((at, i) => {
    while (cell < count - 1 && to[cell]! < at) ++cell;
    if (at < from[cell]! || at > to[cell]!) return;
    const j = at < centre[cell]! ? cell - 1 : cell;
    const touching = j >= 0 && j + 1 < count && from[j + 1]! - to[j]! <= TOUCHING * (to[j]! - from[j]!);
    const share = touching ? (at - centre[j]!) / (centre[j + 1]! - centre[j]!) : 0;
    left[i] = touching ? j : cell;
    near[i] = (1 - share) * scale[left[i]!]!;
    next[i] = share > 0 ? share * scale[j + 1]! : 0;
  });
  const whole = fromWeights(cells, left, near, next);
  if (whole !== undefined) return whole;
  return {
    from: "source",
    map: (source) => {
      const field = new Float64Array(n);
      for (let i = 0; i < n; ++i) {
        const j = left[i]!;
        if (j >= 0) field[i] = near[i]! * source[j]! + (next[i]! > 0 ? next[i]! * source[j + 1]! : 0);
      }
      return field;
    },
  };
}

/**
 * Where every station lies alike among its cells, the broken line on Bᵀc is one Toeplitz matrix more: its first column and
 * row are what the readings see of the cells at the first and the last station.
 */
function fromWeights(
  {applyInto, count, readings: n}: LevelCells,
  left: Int32Array,
  near: Float64Array,
  next: Float64Array,
): CellMap | undefined {
  const stride = left[1]! - left[0]!;
  for (let i = 0; i < n; ++i) {
    if (left[i]! < 0 || left[i]! !== left[0]! + i * stride) return undefined;
    if (!(Math.abs(near[i]! - near[0]!) <= TOUCHING * near[0]!)) return undefined;
    if (!(Math.abs(next[i]! - next[0]!) <= TOUCHING * near[0]!)) return undefined;
  }
  const seenAt = (i: number): Float64Array => {
    const onCells = new Float64Array(count);
    onCells[left[i]!] = near[0]!;
    if (next[0]! > 0) onCells[left[i]! + 1] = next[0]!;
    return applyInto(new Float64Array(n), onCells);
  };
  // Entry (s, i) is what reading i sees of station s, a matter of i − s alone.
  const product = toeplitzProduct(seenAt(n - 1).reverse(), seenAt(0));
  return {from: "weights", map: (weights) => product.applyInto(new Float64Array(n), weights)};
}
