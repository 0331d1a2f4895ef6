/** A transect on the map of a grid, and the places along it where the grid is read. */
import {InputError} from "../errors.ts";
import type {Raster} from "../formats/geotiff-read.ts";
import type {Position} from "../geometry/transformation.ts";
import type {LineAxis} from "../survey/line-axis.ts";

export interface Path {
  /** Of the positions, m on the map. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** From the first position straight to the last. */
  readonly axis: LineAxis;
}

/**
 * @param line longitude, latitude, longitude, latitude …
 * @param metric to metres on the map of the grid
 * @param words the feature, for messages
 * @throws {InputError} `transect/one-place`, `transect/closed`
 */
export function pathOf(
  line: Float64Array,
  metric: (longitude: number, latitude: number) => Position,
  words: string,
  file: string,
): Path {
  const count = line.length / 2;
  const x = new Float64Array(count);
  const y = new Float64Array(count);
  let longest = 0;
  for (let i = 0; i < count; ++i) {
    [x[i], y[i]] = metric(line[2 * i]!, line[2 * i + 1]!);
    longest = Math.max(longest, Math.hypot(x[i]! - x[0]!, y[i]! - y[0]!));
  }
  // A millimetre on the map is one place.
  if (!(longest > 1e-3))
    throw new InputError(
      "transect/one-place",
      `${words} has ${count} positions at one place; two different ones were needed. Draw it again, or remove it.`,
      {place: {file}},
    );
  const [dx, dy] = [x[count - 1]! - x[0]!, y[count - 1]! - y[0]!];
  const length = Math.hypot(dx, dy);
  if (!(length > 1e-3))
    throw new InputError(
      "transect/closed",
      `${words} ends where it begins, so no direction along it can be told. Draw it from one side to the other.`,
      {place: {file}},
    );
  const azimuth = (Math.atan2(dx, dy) * 180) / Math.PI;
  return {x, y, axis: {azimuth, origin: [x[0]!, y[0]!], along: [dx / length, dy / length]}};
}

/** Where the grid is read, one entry a sample. */
export interface Samples {
  /** Number of the sample along the transect, from 1. */
  readonly number: Float64Array;
  /** m on the map. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** In pixels, whole numbers at their centres. */
  readonly column: Float64Array;
  readonly row: Float64Array;
  /** With those off the grid. */
  readonly total: number;
}

/** Distances count in steps; so near to a whole number a sample is on the end. */
const ON_END = 1e-9;

/**
 * Every `step` metres along the path from its first position; those outside the outermost pixel centres are counted only,
 * so that a transect around the Earth costs no more than its part on the grid.
 * @param unit metres in one unit of the map
 */
export function samplesOn({x, y}: Path, step: number, {affine, width, height}: Raster, unit: number): Samples {
  const columnOf = (at: number): number => (at / unit - affine.x0) / affine.dxCol - 0.5;
  const rowOf = (at: number): number => (at / unit - affine.y0) / affine.dyRow - 0.5;
  const kept: number[][] = [];
  let before = 0;
  let next = 0;
  for (let i = 1; i < x.length; ++i) {
    const [dx, dy] = [x[i]! - x[i - 1]!, y[i]! - y[i - 1]!];
    const length = Math.hypot(dx, dy);
    const last = Math.floor((before + length) / step + ON_END);
    const inColumns = within(columnOf(x[i - 1]!), columnOf(x[i]!), width - 1);
    const inRows = within(rowOf(y[i - 1]!), rowOf(y[i]!), height - 1);
    const from = Math.max(next, Math.ceil((before + Math.max(inColumns[0], inRows[0]) * length) / step - ON_END));
    const to = Math.min(last, Math.floor((before + Math.min(inColumns[1], inRows[1]) * length) / step + ON_END));
    for (let k = from; k <= to; ++k) {
      const t = (k * step - before) / length;
      const [atX, atY] = [x[i - 1]! + t * dx, y[i - 1]! + t * dy];
      kept.push([k + 1, atX, atY, columnOf(atX), rowOf(atY)]);
    }
    next = Math.max(next, last + 1);
    before += length;
  }
  const pick = (entry: number): Float64Array => Float64Array.from(kept, (sample) => sample[entry]!);
  return {number: pick(0), x: pick(1), y: pick(2), column: pick(3), row: pick(4), total: next};
}

/** The part [t0, t1] of a segment from `a` to `b` between 0 and `most`, with a hair of pixel on either side. */
function within(a: number, b: number, most: number): readonly [number, number] {
  const [low, high] = [-1e-6, most + 1e-6];
  if (a === b) return a >= low && a <= high ? [0, 1] : [1, 0];
  const [s, t] = [(low - a) / (b - a), (high - a) / (b - a)];
  return [Math.max(0, Math.min(s, t)), Math.min(1, Math.max(s, t))];
}
