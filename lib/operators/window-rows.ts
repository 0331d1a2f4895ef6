/**
 * Rows of B for a stretch of readings, panels far from it joined into longer ones: what stands for the whole operator in
 * the inner products of the stretch. Joined panels carry one density between them, by the exact kernel over all of them.
 */
import {kernelOverPiece} from "../potential/kernel.ts";
import {whitenedInto} from "./correlated-noise.ts";
import type {Panels} from "./panels.ts";
import type {Readings} from "./readings.ts";

/** Panels are joined as long as they are no longer than this share of their distance from the readings. A heuristic. */
const SHARE = 0.35;

export interface WindowRows {
  readonly columns: number;
  /** readings × columns, row-major, whitened. */
  readonly matrix: Float64Array;
}

/**
 * @param readings in increasing chainage
 * @param lowest least height of the readings `first … last − 1` above the boundary, m
 */
export function windowRows(
  readings: Readings,
  panels: Panels,
  first: number,
  last: number,
  lowest: number,
): WindowRows {
  const {x, z, aRe, aIm, order, noise} = readings;
  const ends = joinedEnds(panels, x[first], x[last - 1], lowest);
  const columns = ends.length - 1 - ends.filter((j, k) => k > 0 && j === ends[k - 1]).length;
  const rows = last - first;
  const matrix = new Float64Array(rows * columns);
  const column = new Float64Array(rows);
  let at = 0;
  for (let k = 0; k + 1 < ends.length; ++k) {
    const j = ends[k];
    const e = ends[k + 1] - 1;
    if (e < j) continue;
    const {from, to, yFrom, yTo} = panels;
    const scale = 1 / Math.sqrt(to[e] - from[j]);
    const raw = (i: number): number =>
      kernelOverPiece(aRe[i], aIm[i], order[i], from[j] - x[i], z[i] - yFrom[j], to[e] - x[i], z[i] - yTo[e]);
    if (readings.correlated) whitenedInto(column, readings, first, last, raw);
    else for (let i = first; i < last; ++i) column[i - first] = raw(i) / noise[i];
    for (let i = 0; i < rows; ++i) matrix[i * columns + at] = column[i] * scale;
    ++at;
  }
  return {columns, matrix};
}

/** First panels of the joined ones, and the number of panels. */
function joinedEnds(
  {components, from, to, width, count}: Panels,
  left: number,
  right: number,
  lowest: number,
): number[] {
  const ends: number[] = [];
  for (const {first, count: own} of components) {
    const stop = first + own;
    for (let j = first; j < stop; ) {
      ends.push(j);
      const ahead = from[j] - right;
      let joined: number;
      if (ahead >= 0) joined = (SHARE * Math.max(ahead, lowest)) / width[j];
      else {
        // Left of the readings the near end is the one that is sought: d − l = l/SHARE.
        const behind = left - from[j];
        joined = Math.max(SHARE * lowest, behind > 0 ? (SHARE * behind) / (1 + SHARE) : 0) / width[j];
      }
      j = Math.min(stop, j + Math.max(1, Math.floor(joined)));
      if (to[j - 1] === undefined) break;
    }
  }
  ends.push(count);
  return ends;
}
