/** Where windows lie: blocks of a length of their own along the line, and the stations around a run of blocks. */
import {boundaryAt} from "../geometry/boundary-line.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {LevelLine} from "../operators/level-cells.ts";

/** Core and margin of a window in heights; what is lost is measured in the tests of `intervals.ts`. */
const WINDOW_CORE = 12;
export const WINDOW_MARGIN = 12;
/** A window reaches out until it holds this many stations. */
export const LEAST_STATIONS = 48;
/** Blocks beyond either end of the line; further out windows hold the same stations, the last of it. */
export const BLOCKS_BEYOND = 2;

export interface WindowLayout {
  /** Length of a block for windows of this scale, m. */
  core(scale: number): number;
  /** How many blocks the line has. */
  blocks(scale: number): number;
  /** The block that holds x, at most a few beyond the line. */
  blockAt(x: number, scale: number): number;
  /** Sorted stations around the blocks `left … right`, within a margin and at least a few dozen where there are. */
  stations(left: number, right: number, scale: number): readonly [first: number, last: number];
}

/** @param even spacing and height where all stations are evenly spaced at one height: blocks are then whole spacings long */
export function windowLayout(continuum: Continuum, even: LevelLine | undefined): WindowLayout {
  const {x, count} = continuum;
  const span = x[count - 1] - x[0];
  const steps = (scale: number, spacing: number): number => Math.max(1, Math.round((WINDOW_CORE * scale) / spacing));
  const core = (scale: number): number =>
    even === undefined ? WINDOW_CORE * scale : steps(scale, even.spacing) * even.spacing;
  const blocks = (scale: number): number => Math.floor(span / core(scale)) + 1;
  return {
    core,
    blocks,
    blockAt: (at, scale) =>
      Math.min(Math.max(Math.floor((at - x[0]) / core(scale)), -BLOCKS_BEYOND), blocks(scale) - 1 + BLOCKS_BEYOND),
    stations(left, right, scale) {
      if (even === undefined) {
        const size = core(scale);
        return stationsAround(continuum, x[0] + size * left, x[0] + size * (1 + right), scale);
      }
      // By number, so that windows in the middle of the line hold equally many.
      const length = steps(scale, even.spacing);
      const margin = Math.max(Math.ceil((WINDOW_MARGIN * scale) / even.spacing), LEAST_STATIONS / 2);
      const first = Math.min(Math.max(left * length - margin, 0), Math.max(count - LEAST_STATIONS, 0));
      const last = Math.max(Math.min((right + 1) * length + margin, count), Math.min(count, LEAST_STATIONS));
      return [first, last];
    },
  };
}

/** Height of reading i above the boundary under it, m. */
export const heightOf = ({boundary, x, z}: Continuum, i: number): number => z[i] - boundaryAt(boundary, x[i]);

/** The first of the increasing places that is not below `least`. */
function firstFrom(x: Float64Array, least: number): number {
  let low = 0;
  let high = x.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (x[middle] < least) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Sorted stations within a margin of [left, right], at least a few dozen where there are. */
function stationsAround(continuum: Continuum, left: number, right: number, scale: number): readonly [number, number] {
  const {x, count} = continuum;
  const margin = (from: number, to: number): readonly [number, number] => {
    const first = firstFrom(x, from);
    let last = Math.max(first, firstFrom(x, to));
    while (last < count && x[last] <= to) ++last;
    return [first, last];
  };
  let [first, last] = margin(left - WINDOW_MARGIN * scale, right + WINDOW_MARGIN * scale);
  let highest = scale;
  for (let i = first; i < last; ++i) highest = Math.max(highest, heightOf(continuum, i));
  if (highest > scale) [first, last] = margin(left - WINDOW_MARGIN * highest, right + WINDOW_MARGIN * highest);
  const middle = 0.5 * (left + right);
  while (last - first < Math.min(count, LEAST_STATIONS)) {
    const before = first > 0 ? Math.abs(middle - x[first - 1]) : Infinity;
    const after = last < count ? Math.abs(x[last] - middle) : Infinity;
    if (before <= after) --first;
    else ++last;
  }
  return [first, last];
}
