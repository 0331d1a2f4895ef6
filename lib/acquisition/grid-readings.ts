/** Readings of a grid at places between its pixels, window by window. */
import type {Raster} from "../formats/geotiff-read.ts";
import {type Sampling, type Taps, tapsAt} from "./sampling.ts";

/** Pixels of a window: 8 MB. */
const WINDOW = 2 ** 20;

/**
 * @param columns in pixels, whole numbers at their centres
 * @param rows as many
 * @returns NaN where a pixel that takes part has no value or lies outside the grid
 */
export async function readingsAt(
  raster: Raster,
  sampling: Sampling,
  columns: Float64Array,
  rows: Float64Array,
): Promise<Float64Array> {
  const readings = new Float64Array(columns.length).fill(Number.NaN);
  const across = Array.from(columns, (at) => tapsAt(sampling, at));
  const down = Array.from(rows, (at) => tapsAt(sampling, at));
  const inGrid = (k: number): boolean => inside(across[k]!, raster.width) && inside(down[k]!, raster.height);
  /** Samples `first … last − 1`, in halves as long as their window is too large. */
  const fill = async (first: number, last: number): Promise<void> => {
    const members: number[] = [];
    let [left, right, top, bottom] = [Infinity, -Infinity, Infinity, -Infinity];
    for (let k = first; k < last; ++k) {
      if (!inGrid(k)) continue;
      members.push(k);
      left = Math.min(left, across[k]!.first);
      right = Math.max(right, end(across[k]!));
      top = Math.min(top, down[k]!.first);
      bottom = Math.max(bottom, end(down[k]!));
    }
    if (members.length === 0) return;
    const window = {row0: top, rows: bottom - top, column0: left, columns: right - left};
    if (window.rows * window.columns > WINDOW && last - first > 1) {
      const middle = (first + last) >> 1;
      await fill(first, middle);
      await fill(middle, last);
      return;
    }
    const values = await raster.window(window);
    for (const k of members) readings[k] = weighted(values, window.columns, left, top, across[k]!, down[k]!);
  };
  await fill(0, columns.length);
  return readings;
}

const end = ({first, weights}: Taps): number => first + weights.length;
const inside = (taps: Taps, size: number): boolean => taps.first >= 0 && end(taps) <= size;

/** A pixel without a value makes the sum NaN, whatever its weight. */
function weighted(values: Float64Array, width: number, left: number, top: number, across: Taps, down: Taps): number {
  let sum = 0;
  for (let r = 0; r < down.weights.length; ++r) {
    const start = (down.first - top + r) * width + across.first - left;
    let inRow = 0;
    for (let c = 0; c < across.weights.length; ++c) inRow += across.weights[c]! * values[start + c]!;
    sum += down.weights[r]! * inRow;
  }
  return sum;
}
