/**
 * Windows of a level, even line that are centred on what is asked, for readings of the vertical component: where they
 * lie within line and support they are one and the same but for a shift, and share their modes; and numbers that lie
 * alike among the stations share all of their estimate but the readings and the regional.
 *
 * The modes are those of an endless support. It holds the support of every such window, so that the worst bias found
 * with it is never below the true one. What it adds is what an estimate of unit sum seen from far, h/(π d²), holds
 * beyond the support, next to nothing: a window's ends are twelve heights from what is asked (half-widths of means
 * 0.4, 2 and 10 heights long grow by 1e-5, 3e-4 and 4e-3 at most where the support ends with the window, and as much
 * is lost to stations beyond it; measured on lines of 80 heights). Other components fade too slowly for that.
 */
import {toeplitzEigen} from "../numeric/even-odd-eigen.ts";
import {type Continuum, continuumOf, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import type {LevelLine} from "../operators/level-cells.ts";
import {pick} from "../operators/readings.ts";
import {pairOver} from "../potential/pair.ts";
import {type DataModes, dataModes, USABLE} from "../spectral/singular-system.ts";
import type {IntervalStore} from "./interval-store.ts";
import {LEAST_STATIONS, WINDOW_MARGIN} from "./window-layout.ts";

/** Half lengths of what is asked that windows are made for, in heights; longer ones have windows in blocks. */
const HALVES = [1, 2, 4, 6, 9, 12] as const;
/** And at the ends of the line, where every window has modes of its own. */
const END_HALVES = [3, 12] as const;
/** Margin of a window for a point above the boundary, whose kernel fades no faster than those of the stations. */
const POINT_MARGIN = 18;
/** Endless, in heights: in closed forms, and for nodes at least, which a longer support needs more of. */
const ENDLESS = 1e9;
const ENDLESS_NODES = 2 ** 14;
/** Larger windows have their modes from nodes, which are then fewer than stations. */
const MOST_STATIONS = 600;
/** Places are taken to this part of a spacing, so that rounding does not tell apart what lies alike. */
const PART = 2 ** -24;

/** A number asked, as it is seen from its window. */
export interface Alike {
  readonly key: string;
  readonly functional: Functional;
  /** The stations of the window, from x = 0 on over an endless support. */
  readonly stations: Continuum;
}

/** Stations of a window, and whether it is one of those that are alike; else it is the last of the line's end. */
interface Placed {
  readonly first: number;
  readonly last: number;
  readonly isLike: boolean;
}

export interface CentredWindows {
  /** The window for a number; undefined for one as long as two blocks, or in the middle of the line near an end of the support. */
  around(functional: Functional, scale: number): Placed | undefined;
  modes(count: number): DataModes;
  /** Undefined for a number that is like no other. */
  alike(functional: Functional, first: number, last: number): Alike | undefined;
}

/** @returns undefined for other than the vertical component */
export function centredWindows(
  continuum: Continuum,
  line: LevelLine,
  floor: number,
  store: IntervalStore,
): CentredWindows | undefined {
  const {x, count, support, aRe, aIm, order, noise} = continuum;
  if (order[0] !== 0 || aRe[0] !== 0) return undefined;
  const {spacing, height} = line;
  const name = [spacing, height, aIm[0], noise[0], floor].join();
  const known = new Map<number, Continuum>();
  const stationsOf = (length: number): Continuum => {
    const found = known.get(length);
    if (found !== undefined) return found;
    const readings = pick(
      continuum,
      Int32Array.from({length}, (_, j) => j),
    );
    const half = ENDLESS * height;
    const made = continuumOf({...readings, x: readings.x.map((_, j) => j * spacing), z: readings.z.fill(height)}, [
      {from: -half, to: half},
    ]);
    known.set(length, made);
    return made;
  };
  const modesOf = (length: number): DataModes => {
    const stations = stationsOf(length);
    if (length > MOST_STATIONS) {
      const reach = ENDLESS_NODES * height;
      const over = {...stations, support: [{from: -reach, to: reach}]};
      const nodes = nodesFor(over, 0, length);
      return dataModes(nodeMatrix(over, nodes, 0, length), length, nodes.count, floor);
    }
    const scale = 1 / noise[0] ** 2;
    const {poles} = stations;
    const diagonals = Float64Array.from(poles, (pole) => scale * pairOver(stations.support, poles[0]!, pole));
    const {count: modes, values, vectors} = toeplitzEigen(diagonals, floor);
    let kept = 0;
    while (kept < modes && values[kept] > USABLE * values[0]) ++kept;
    return {rows: length, count: kept, eigenvalues: values.slice(0, kept), left: vectors.subarray(0, kept * length)};
  };
  return {
    around({from, to, spread}, scale) {
      const margin = spread > 0 ? POINT_MARGIN : WINDOW_MARGIN;
      const sizeFor = (halves: readonly number[]): number | undefined => {
        const half = halves.find((own) => to - from <= 2 * own * scale);
        return half === undefined
          ? undefined
          : 2 * Math.max(Math.ceil(((half + margin) * scale) / spacing), LEAST_STATIONS / 2);
      };
      const size = sizeFor(HALVES);
      if (size === undefined) return undefined;
      const middle = Math.round((0.5 * (from + to) - x[0]) / (spacing * PART)) * PART;
      const first = Math.floor(middle) + 1 - size / 2;
      const last = first + size;
      if (first >= 0 && last <= count)
        return support.some((part) => part.from <= x[first] && x[last - 1] <= part.to)
          ? {first, last, isLike: true}
          : undefined;
      const own = Math.min(sizeFor(END_HALVES)!, count);
      return first < 0 && middle < 0.5 * count
        ? {first: 0, last: own, isLike: false}
        : {first: count - own, last: count, isLike: false};
    },
    modes: (length) => store.modes(`${name}:${length}`, () => modesOf(length)),
    alike(functional, first, last) {
      const {moved} = functional;
      if (moved === undefined) return undefined;
      const stations = stationsOf(last - first);
      const own = moved(x[0] + first * spacing, spacing * PART, stations);
      return {key: `${name}:${last - first}:${own.key}`, functional: own.functional, stations};
    },
  };
}
