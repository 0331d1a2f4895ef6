/** Level lines in all their kinds, and their cells as panels, for the dense route beside the fast one. */
import type {Support} from "../../lib/geometry/interval.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {type LevelCells, levelCells} from "../../lib/operators/level-cells.ts";
import {type Panels, panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import type {Response} from "../../lib/potential/kernel.ts";

export const STATIONS = 120;
export const SPACING = 4;
export const HEIGHT = 20;
export const NOISE = 0.01;
const FROM = 100;
const HALF = 0.5 * SPACING;
const END = FROM + (STATIONS - 1) * SPACING;

/** Total field at mid latitude: the anomaly leans. */
export const RESPONSES: readonly (readonly [name: string, response: Response])[] = [
  ["vertical", {re: 1, im: 0, order: 0}],
  ["along the line", {re: 0, im: 1, order: 0}],
  ["slanted", {re: 0.6, im: 0.8, order: 0}],
  ["vertical gradient", {re: 0, im: -1, order: 1}],
  ["slanted gradient", {re: 0.8, im: 0.6, order: 1}],
];

/** Cells alone; an apron and cells cut by its ends; half a spacing wide, a gap inside, readings beyond the end. */
export const ZONES: readonly (readonly [name: string, support: Support, width: number])[] = [
  ["the cells of the stations", [{from: FROM - HALF, to: END + HALF}], 4],
  ["an apron", [{from: 0, to: 700}], 4],
  [
    "a gap, and an end inside the line",
    [
      {from: 33.3, to: 300.1},
      {from: 360, to: 531},
    ],
    2,
  ],
];

export const levelReadings = (response: Response, noise = NOISE): Readings =>
  readingsOf([
    {
      x: Float64Array.from({length: STATIONS}, (_, i) => FROM + i * SPACING),
      z: new Float64Array(STATIONS).fill(HEIGHT),
      response,
      noise,
    },
  ]);

export function levelCase(response: Response, support: Support, width: number) {
  const readings = levelReadings(response);
  const wide = panelsOn(support, width);
  const cells = levelCells(readings, wide);
  if (cells === undefined) throw new Error("the line is level and even, and was not taken for it");
  return {readings, cells, panels: asPanels(cells)};
}

/** An anomaly, a slope and noise. */
export const levelValues = (seed = 7): Float64Array =>
  normalDeviates(seededRandom(seed), STATIONS).map(
    (deviate, i) => NOISE * deviate + Math.exp(-(((i - 50) / 12) ** 2)) + 3 + i / 100,
  );

/** The cells as panels. */
function asPanels({count, from, to}: LevelCells): Panels {
  const components: Panels["components"][number][] = [];
  let first = 0;
  for (let j = 1; j <= count; ++j) {
    if (j < count && from[j]! - to[j - 1]! < 1e-9 * HEIGHT) continue;
    const edges = Float64Array.of(...from.subarray(first, j), to[j - 1]!);
    components.push({interval: {from: edges[0]!, to: to[j - 1]!}, first, count: j - first, edges});
    first = j;
  }
  const none = new Float64Array(count);
  return {
    count,
    from,
    to,
    centre: from.map((left, j) => 0.5 * (left + to[j]!)),
    width: from.map((left, j) => to[j]! - left),
    yFrom: none,
    yTo: none,
    flat: true,
    boundary: undefined,
    components,
  };
}
