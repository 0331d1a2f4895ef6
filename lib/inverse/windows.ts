/**
 * Windows of stations for functionals: the whole line where it is short, else the stations within a margin around the
 * functional. Sources outside a window still count, through the inner products over the whole support.
 */
import {matVecInto} from "../numeric/matmul.ts";
import {recent} from "../numeric/recent.ts";
import {type Continuum, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import {gramMatrix} from "../operators/gram-matrix.ts";
import {type LevelLine, levelLine} from "../operators/level-cells.ts";
import {basisWithin, projectOutInPlace, projectOutOfColumnsInPlace, type RegionalBasis} from "../operators/regional.ts";
import type {Block, Patch} from "../solvers/patches.ts";
import {type DataModes, dataModes, dataModesOfGramInPlace} from "../spectral/singular-system.ts";
import {type Alike, centredWindows} from "./centred-windows.ts";
import {congruentWindows} from "./congruent.ts";
import {type IntervalStore, intervalStore} from "./interval-store.ts";
import {levelWholeLine} from "./level-whole-line.ts";
import {modalWholeLine} from "./modal-whole-line.ts";
import {remember} from "./remember.ts";
import {type WholeLine, wholeLine} from "./whole-line.ts";
import {BLOCKS_BEYOND, heightOf, windowLayout} from "./window-layout.ts";
import {windowModes} from "./window-modes.ts";

/** Lines with no more stations than this, or no more nodes than the next, are one window. Heuristics, for speed alone. */
const WHOLE_STATIONS = 480;
const WHOLE_NODES = 640;
/** Windows kept at a time: one takes about a megabyte. */
const WINDOWS_KEPT = 64;
/** A support of so many heights has more nodes than one window, and is not asked for them. */
const SURELY_LONG = 2000;
/** Windows of levels above the line are this much wider; a level far above would gain from more, at the cost of the cube. */
const WIDEST_WINDOW = 2;
/** Modes with λ below this share of 1/M² are counted as bias: a relative change of the half-width below 1e-4. */
const MODE_FLOOR = 1e-5;

/** Up to so many stations a window is seen by their inner products, and by nodes where there are more: memory. */
const MOST_IN_GRAM = 1536;

/** One window or many; by size of the line unless a test asks. */
export type Layout = "by size" | "whole" | "windows";

/** How windows keep blind to the regional: by what the whole line knows of it, or each by its own stations alone. */
export type RegionalOf = "line" | "window";

export interface Window extends Block {
  /** u_kᵀ d. */
  readonly data: Float64Array;
  /** The regional of its own stations, projected out of its modes; undefined where a reader of the line sees to it. */
  readonly projected: RegionalBasis | undefined;
}

export interface WindowAlike extends Alike {
  readonly first: number;
  readonly last: number;
  /** η_k = u_kᵀ Pq, and the modes. */
  seen(): {readonly eta: Float64Array; readonly modes: DataModes};
}

export interface Windows {
  readonly store: IntervalStore;
  /** Upper bound on the number of different windows that can ever be asked for. */
  readonly possible: number;
  /** The longest mean that one window can serve, m. */
  readonly reach: number;
  /** The pieces that a longer mean may be cut into, m. */
  readonly piece: number;
  /** The whole line, for numbers beyond the reach of windows; not where it is one window. */
  line(): WholeLine;
  for(functional: Functional): Window;
  /** What numbers that lie alike share; undefined for one that is like no other. */
  alike(functional: Functional): WindowAlike | undefined;
  /** The functional seen by a window's modes: η_k = u_kᵀ Pq. */
  seenBy(window: Window, functional: Functional): Float64Array;
  /** See `IntervalSolver`. */
  resolvingPower(point: Functional, multiplier: number): number;
  kernelWeights(point: Functional, multiplier: number): Float64Array;
  /** Spacing and height of a line that is level and even over a flat boundary. */
  readonly even: LevelLine | undefined;
  /** Of the geometry of such a line in the store. */
  readonly number: number | undefined;
  /** The median height of the stations above the boundary, m. */
  readonly height: number;
  /** Terms of the regional that a window must be freed of: none where they were projected out before. */
  readonly terms: number;
}

/**
 * @param basis regional at the stations in the order of `continuum`
 * @param data Q d/σ in that order
 * @param bound M, SI·√m; windows serve any bound up to `loosest` times it
 */
export function windowsOf(
  continuum: Continuum,
  basis: RegionalBasis,
  data: Float64Array,
  bound: number,
  loosest: number,
  layout: Layout,
  regionalOf: RegionalOf = "line",
  store = intervalStore(),
): Windows {
  // A mean over a stretch of the boundary has no height.
  const heights = continuum.z
    .map((_, i) => heightOf(continuum, i))
    .filter((_, i) => continuum.stretches?.[i] === undefined)
    .sort();
  const height = heights[heights.length >> 1];
  const span = continuum.x[continuum.count - 1] - continuum.x[0];
  const whole =
    layout === "whole" ||
    (layout === "by size" &&
      (continuum.count <= WHOLE_STATIONS ||
        (span < SURELY_LONG * height && nodesFor(continuum, 0, continuum.count).count <= WHOLE_NODES)));
  const even = continuum.boundary === undefined && continuum.known === undefined ? levelLine(continuum) : undefined;
  const {core, blocks, blockAt, stations} = windowLayout(continuum, even);
  const windows = recent<string, Window>(WINDOWS_KEPT);
  const response = new Float64Array(continuum.count);
  const floor = MODE_FLOOR / (loosest * bound) ** 2;
  // Shared modes overstate the Gram matrix a little, which is safe for affine estimates alone.
  const centred =
    even === undefined || whole || regionalOf !== "line" ? undefined : centredWindows(continuum, even, floor, store);
  const congruent =
    even === undefined || whole || regionalOf !== "line" ? undefined : congruentWindows(continuum, even, floor);
  const number = even === undefined ? undefined : store.number(figuresOf(continuum));
  const ownModes =
    centred === undefined || even === undefined ? undefined : windowModes(continuum, even, floor, store, number!);
  const terms = whole || regionalOf === "window" ? 0 : basis.terms;

  const modesOn = (first: number, last: number, over: Continuum, projected: RegionalBasis | undefined): DataModes => {
    const gram =
      over === continuum && projected === undefined && last - first <= MOST_IN_GRAM
        ? gramMatrix(over, first, last)
        : undefined;
    if (gram !== undefined) return dataModesOfGramInPlace(gram, last - first, floor);
    const nodes = nodesFor(over, first, last);
    const matrix = nodeMatrix(over, nodes, first, last);
    if (projected !== undefined) projectOutOfColumnsInPlace(matrix, nodes.count, projected);
    return dataModes(matrix, last - first, nodes.count, floor);
  };
  const windowOn = (first: number, last: number): Window => {
    const projected = whole ? basis : regionalOf === "window" ? basisWithin(basis, first, last) : undefined;
    const rows = last - first;
    const like = congruent?.like(first, last);
    const modes =
      like === undefined
        ? (ownModes?.(first, last) ?? modesOn(first, last, continuum, projected))
        : store.modes(`${number} ${like.key}`, () =>
            modesOn(like.first, like.first + rows, congruent!.extended, undefined),
          );
    const seen = matVecInto(new Float64Array(modes.count), modes.left, data.subarray(first, last), modes.count, rows);
    return {first, last, modes, data: seen, projected};
  };
  const centredOn = (first: number, last: number): Window => {
    const modes = centred!.modes(last - first);
    // Most are asked for once, and for what they share with others alone.
    return {
      ...{first, last, modes, projected: undefined},
      get data() {
        return matVecInto(
          new Float64Array(modes.count),
          modes.left,
          data.subarray(first, last),
          modes.count,
          modes.rows,
        );
      },
    };
  };
  const remembered = (first: number, last: number): Window => windows(`${first}-${last}`, () => windowOn(first, last));
  const around = (from: number, to: number, scale: number): Window =>
    remembered(...stations(blockAt(from, scale), blockAt(to, scale), scale));

  const cover = (): Patch[] => {
    const size = core(height);
    return Array.from({length: blocks(height)}, (_, k) => {
      const from = continuum.x[0] + size * k;
      const middle = from + 0.5 * size;
      return {block: around(middle, middle, height), from, to: from + size};
    });
  };
  const lines = new Map<"line", WholeLine>();
  const line = (): WholeLine =>
    remember(
      lines,
      "line",
      () => levelWholeLine(continuum) ?? modalWholeLine(continuum, floor) ?? wholeLine(continuum, cover()),
    );
  const scaleOf = ({spread}: Functional): number => (spread > height ? WIDEST_WINDOW * height : height);
  const windowFor = (functional: Functional): Window => {
    if (whole) return remembered(0, continuum.count);
    const scale = scaleOf(functional);
    const own = centred?.around(functional, scale);
    if (own !== undefined) return own.isLike ? centredOn(own.first, own.last) : remembered(own.first, own.last);
    const {from, to} = functional;
    // Whole blocks, so that neighbouring functionals share a window.
    if (to - from > core(scale)) return around(from, to, scale);
    const middle = 0.5 * (from + to);
    return around(middle, middle, scale);
  };
  const seenBy = (window: Window, functional: Functional): Float64Array => {
    functional.respondInto(response, continuum, window.first, window.last);
    // Rounding mixes the regional into modes of small λ, and a response to it is large: both sides must be free of it.
    if (window.projected !== undefined) projectOutInPlace(response, window.projected);
    return matVecInto(
      new Float64Array(window.modes.count),
      window.modes.left,
      response,
      window.modes.count,
      window.last - window.first,
    );
  };

  const alike = (functional: Functional): WindowAlike | undefined => {
    const own = functional.moved === undefined ? undefined : centred?.around(functional, scaleOf(functional));
    if (own?.isLike !== true) return undefined;
    const {first, last} = own;
    const found = centred!.alike(functional, first, last);
    return (
      found && {
        ...found,
        first,
        last,
        seen() {
          const modes = centred!.modes(last - first);
          found.functional.respondInto(response, found.stations, 0, modes.rows);
          return {modes, eta: matVecInto(new Float64Array(modes.count), modes.left, response, modes.count, modes.rows)};
        },
      }
    );
  };
  const powerOf = (eta: Float64Array, {eigenvalues}: DataModes, multiplier: number): number =>
    eta.reduce((power, value, k) => power + (value * value) / (eigenvalues[k] + multiplier), 0);

  return {
    store,
    alike,
    // A mean reaches over its own block and up to two more; a point is in one block, of either scale.
    possible: whole ? 1 : 3 * (blocks(height) + 2 * BLOCKS_BEYOND) + blocks(WIDEST_WINDOW * height) + 2 * BLOCKS_BEYOND,
    reach: whole ? Infinity : 2 * core(height),
    piece: core(height),
    line,
    even,
    number,
    height,
    terms,
    for: windowFor,
    seenBy,
    resolvingPower(point, multiplier) {
      const shared = alike(point);
      if (shared !== undefined)
        return store.resolving(`${multiplier} ${shared.key}`, () => {
          const {eta, modes} = shared.seen();
          return powerOf(eta, modes, multiplier);
        });
      const window = windowFor(point);
      return powerOf(seenBy(window, point), window.modes, multiplier);
    },
    kernelWeights(point, multiplier) {
      const window = windowFor(point);
      const weights = new Float64Array(continuum.count);
      addOnModes(weights, window, seenBy(window, point), multiplier);
      return weights;
    },
  };
}

/** All that a level line of one kind and white noise is made of, but its readings. */
function figuresOf({x, z, aRe, aIm, order, noise, support}: Continuum): Float64Array {
  const ends = support.flatMap(({from, to}) => [from, to]);
  const figures = new Float64Array(4 + ends.length + x.length + z.length);
  figures.set([aRe[0], aIm[0], order[0], noise[0], ...ends]);
  figures.set(x, 4 + ends.length);
  figures.set(z, 4 + ends.length + x.length);
  return figures;
}

/** Adds Σ η_k/(λ_k + a) u_k to weights over the whole line. */
export function addOnModes(c: Float64Array, {modes, first, last}: Window, eta: Float64Array, a: number): void {
  for (let k = 0; k < modes.count; ++k) {
    const g = eta[k] / (modes.eigenvalues[k] + a);
    const row = k * (last - first);
    for (let i = first; i < last; ++i) c[i] += g * modes.left[row + i - first];
  }
}
