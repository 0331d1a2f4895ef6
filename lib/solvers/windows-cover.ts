/** Overlapping stretches of a long line with the modes of each: what `iterative.ts` preconditions by, and counts with. */
import {boundaryAt} from "../geometry/boundary-line.ts";
import type {Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {windowRows} from "../operators/window-rows.ts";
import {dataModes} from "../spectral/singular-system.ts";
import {type Patch, patchedInverse} from "./patches.ts";

/**
 * Core and margin of a window in heights. The widest serve best where heights jump from station to station; the first
 * whose modes fit into memory and whose windows are quick to diagonalise are taken. Heuristics; on smooth heights 12 takes
 * 6–9 steps to 1e-10, 6 takes 9–12, 4 takes 11–16; on heights that jump by ±40 % the number of steps doubles from 12 to 8.
 */
const WIDTHS = [12, 8, 6, 4, 3] as const;
const MOST_ENTRIES = 8e7;
const MOST_ROWS = 320;

interface Stretch extends Omit<Patch, "block"> {
  readonly first: number;
  readonly last: number;
  /** Least height above the boundary, m. */
  readonly lowest: number;
}

export interface WindowsCover {
  readonly patches: readonly Patch[];
  /** Nearly (BBᵀ + α)⁻¹ r; a new list. */
  inverse(residual: Float64Array, alpha: number): Float64Array;
  /** Σ g(λ) over the modes of the line, as windows see them: tr g(BBᵀ) for g(0) = 0. */
  trace(weigh: (eigenvalue: number) => number): number;
}

/**
 * @param readings in increasing chainage
 * @param floor modes with λ ≤ floor count as none
 */
export function windowsCover(readings: Readings, panels: Panels, floor: number): WindowsCover {
  const {x} = readings;
  const patches = stretches(readings, panels).map(({first, last, lowest, from, to}): Patch => {
    const {matrix, columns} = windowRows(readings, panels, first, last, lowest);
    return {block: {first, last, modes: dataModes(matrix, last - first, columns, floor)}, from, to};
  });
  /** How much of each mode lies on its own patch. */
  const shares = patches.map(({block: {first, last, modes}, from, to}) => {
    const rows = last - first;
    const share = new Float64Array(modes.count);
    for (let i = 0; i < rows; ++i)
      if (x[first + i] >= from && x[first + i] < to)
        for (let k = 0; k < modes.count; ++k) share[k] += modes.left[k * rows + i] ** 2;
    return share;
  });
  return {
    patches,
    inverse: patchedInverse(x, patches),
    trace(weigh) {
      let sum = 0;
      patches.forEach(({block: {modes}}, p) => {
        for (let k = 0; k < modes.count; ++k) sum += shares[p][k] * weigh(modes.eigenvalues[k]);
      });
      return sum;
    },
  };
}

function stretches(readings: Readings, panels: Panels): readonly Stretch[] {
  const heights = readings.z.map((z, i) => z - boundaryAt(panels.boundary, readings.x[i]));
  for (const width of WIDTHS) {
    const found = stretchesOf(readings, heights, width);
    const entries = found.reduce((sum, {first, last}) => sum + (last - first) ** 2, 0);
    const rows = found.reduce((most, {first, last}) => Math.max(most, last - first), 0);
    if ((entries <= MOST_ENTRIES && rows <= MOST_ROWS) || width === WIDTHS.at(-1)) return found;
  }
  return [];
}

/** One after another along the line, each as long as the readings on it are high. */
function stretchesOf({x, count}: Readings, heights: Float64Array, width: number): readonly Stretch[] {
  const found: Stretch[] = [];
  let next = 0;
  while (next < count) {
    const from = x[next];
    let height = heights[next];
    let end = next;
    let sum = 0;
    // As far as the mean height of the readings passed so far reaches.
    while (end < count && x[end] < from + width * height) {
      sum += heights[end++];
      height = sum / (end - next);
    }
    if (end === next) ++end;
    const to = end < count ? x[end] : Infinity;
    const margin = width * height;
    const first = placeOf(x, from - margin);
    const last = placeOf(x, Math.min(to, x[end - 1]) + margin);
    let lowest = Infinity;
    for (let i = first; i < last; ++i) lowest = Math.min(lowest, heights[i]);
    found.push({from, to, first: Math.min(first, next), last: Math.max(last, end), lowest});
    next = end;
  }
  return found;
}

/** Number of readings left of a place. */
function placeOf(x: Float64Array, place: number): number {
  let low = 0;
  let high = x.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (x[middle] < place) low = middle + 1;
    else high = middle;
  }
  return low;
}
