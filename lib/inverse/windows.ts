/**
 * Windows of stations for functionals: the whole line where it is short, else the stations within a margin around the
 * functional. Sources outside a window still count, through the inner products over the whole support.
 */
import {boundaryAt} from "../geometry/boundary-line.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {type Continuum, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import {basisWithin, projectOutInPlace, projectOutOfColumnsInPlace, type RegionalBasis} from "../operators/regional.ts";
import {dataModes} from "../spectral/singular-system.ts";
import {type RegionalReader, regionalReader} from "./regional-reader.ts";
import {type Block, type Patch, type WholeLine, wholeLine} from "./whole-line.ts";

/** Lines with no more stations than this, or no more nodes than the next, are one window. Heuristics, for speed alone. */
const WHOLE_STATIONS = 480;
const WHOLE_NODES = 640;
/** Core and margin of a window in heights; what is lost is measured in the tests of `intervals.ts`. */
const WINDOW_CORE = 12;
const WINDOW_MARGIN = 12;
/** Windows of levels above the line are this much wider; a level far above would gain from more, at the cost of the cube. */
const WIDEST_WINDOW = 2;
/** A window reaches out until it holds this many stations. */
const LEAST_STATIONS = 48;
/** Blocks beyond either end of the line; further out windows hold the same stations, the last of it. */
const BLOCKS_BEYOND = 2;
/** Modes with λ below this share of 1/M² are counted as bias: a relative change of the half-width below 1e-4. */
const MODE_FLOOR = 1e-5;

/** Readers of the regional are made for values of a this far apart, as a factor; the nearest one serves. A heuristic. */
const READER_STEP = 12;

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

/** A reader of the regional as a window sees it: u_kᵀ W and u_kᵀ G W, modes × terms. */
export interface WindowReader {
  readonly reader: RegionalReader;
  readonly weights: Float64Array;
  readonly weightsGram: Float64Array;
}

export interface Windows {
  /** Upper bound on the number of different windows that can ever be asked for. */
  readonly possible: number;
  /** The longest mean that one window can serve, m. */
  readonly reach: number;
  /** The pieces that a longer mean may be cut into, m. */
  readonly piece: number;
  /** The whole line, for numbers beyond the reach of windows; not where it is one window. */
  line(): WholeLine;
  for(functional: Functional): Window;
  /** The functional seen by a window's modes: η_k = u_kᵀ Pq. */
  seenBy(window: Window, functional: Functional): Float64Array;
  /** See `IntervalSolver`. */
  resolvingPower(point: Functional, multiplier: number): number;
  kernelWeights(point: Functional, multiplier: number): Float64Array;
  /** Terms of the regional that a window must be freed of: none where they were projected out before. */
  readonly terms: number;
  /** u_kᵀ R, modes × terms. */
  regionalOn(window: Window): Float64Array;
  /** The reader for about this `a`, the same object for all `a` near by; and the one for `a` itself. */
  readerAt(a: number): RegionalReader;
  readerFor(a: number): RegionalReader;
  readerOn(window: Window, reader: RegionalReader): WindowReader;
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
): Windows {
  const heights = continuum.z.map((_, i) => heightOf(continuum, i)).sort();
  const height = heights[heights.length >> 1];
  const whole =
    layout === "whole" ||
    (layout === "by size" &&
      (continuum.count <= WHOLE_STATIONS || nodesFor(continuum, 0, continuum.count).count <= WHOLE_NODES));
  const windows = new Map<string, Window>();
  const response = new Float64Array(continuum.count);
  const floor = MODE_FLOOR / (loosest * bound) ** 2;
  const terms = whole || regionalOf === "window" ? 0 : basis.terms;

  const windowOn = (first: number, last: number): Window => {
    const nodes = nodesFor(continuum, first, last);
    const matrix = nodeMatrix(continuum, nodes, first, last);
    const rows = last - first;
    const projected = whole ? basis : regionalOf === "window" ? basisWithin(basis, first, last) : undefined;
    if (projected !== undefined) projectOutOfColumnsInPlace(matrix, nodes.count, projected);
    const modes = dataModes(matrix, rows, nodes.count, floor);
    const seen = matVecInto(new Float64Array(modes.count), modes.left, data.subarray(first, last), modes.count, rows);
    return {first, last, modes, data: seen, projected};
  };
  const remembered = (first: number, last: number): Window => {
    const key = `${first}-${last}`;
    const found = windows.get(key) ?? windowOn(first, last);
    windows.set(key, found);
    return found;
  };
  const span = continuum.x[continuum.count - 1] - continuum.x[0];
  const blocks = (core: number): number => Math.floor(span / core) + 1;
  const blockAt = (x: number, core: number): number =>
    Math.min(Math.max(Math.floor((x - continuum.x[0]) / core), -BLOCKS_BEYOND), blocks(core) - 1 + BLOCKS_BEYOND);
  const around = (from: number, to: number, scale: number): Window => {
    const core = WINDOW_CORE * scale;
    const left = continuum.x[0] + core * blockAt(from, core);
    const right = continuum.x[0] + core * (1 + blockAt(to, core));
    return remembered(...stationsAround(continuum, left, right, scale));
  };

  const cover = (): Patch[] => {
    const core = WINDOW_CORE * height;
    return Array.from({length: blocks(core)}, (_, k) => {
      const from = continuum.x[0] + core * k;
      return {block: around(from, from, height), from, to: from + core};
    });
  };
  const lines = new Map<"line", WholeLine>();
  const line = (): WholeLine => remember(lines, "line", () => wholeLine(continuum, cover()));
  const readers = new Map<number, RegionalReader>();
  const readerFor = (a: number): RegionalReader => regionalReader(line(), basis, data, a);
  const seenReaders = new Map<RegionalReader, Map<Window, WindowReader>>();
  const onModes = ({first, last, modes}: Window, vectors: Float64Array): Float64Array => {
    const rows = last - first;
    const part = new Float64Array(terms * rows);
    for (let t = 0; t < terms; ++t)
      part.set(vectors.subarray(t * continuum.count + first, t * continuum.count + last), t * rows);
    return multiplyTransposedInto(new Float64Array(modes.count * terms), modes.left, part, modes.count, rows, terms);
  };
  const regionals = new Map<Window, Float64Array>();

  const windowFor = (functional: Functional): Window => {
    if (whole) return remembered(0, continuum.count);
    const scale = functional.spread > height ? WIDEST_WINDOW * height : height;
    const {from, to} = functional;
    // Whole blocks, so that neighbouring functionals share a window.
    if (to - from > WINDOW_CORE * scale) return around(from, to, scale);
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

  return {
    // A mean reaches over its own block and up to two more; a point is in one block, of either scale.
    possible: whole
      ? 1
      : 3 * (blocks(WINDOW_CORE * height) + 2 * BLOCKS_BEYOND) +
        blocks(WIDEST_WINDOW * WINDOW_CORE * height) +
        2 * BLOCKS_BEYOND,
    reach: whole ? Infinity : 2 * WINDOW_CORE * height,
    piece: WINDOW_CORE * height,
    line,
    terms,
    for: windowFor,
    seenBy,
    resolvingPower(point, multiplier) {
      const window = windowFor(point);
      const {eigenvalues} = window.modes;
      return seenBy(window, point).reduce((power, eta, k) => power + (eta * eta) / (eigenvalues[k] + multiplier), 0);
    },
    kernelWeights(point, multiplier) {
      const window = windowFor(point);
      const weights = new Float64Array(continuum.count);
      addOnModes(weights, window, seenBy(window, point), multiplier);
      return weights;
    },
    regionalOn: (window) => remember(regionals, window, () => onModes(window, basis.rows)),
    readerAt(a) {
      const place = Math.round(Math.log(a * bound * bound) / Math.log(READER_STEP));
      return remember(readers, place, () => readerFor(READER_STEP ** place / (bound * bound)));
    },
    readerFor,
    readerOn(window, reader) {
      const seen = remember(seenReaders, reader, () => new Map<Window, WindowReader>());
      return remember(seen, window, () => ({
        reader,
        weights: onModes(window, reader.weights),
        weightsGram: onModes(window, reader.gramWeights),
      }));
    },
  };
}

/** Adds Σ η_k/(λ_k + a) u_k to weights over the whole line. */
export function addOnModes(c: Float64Array, {modes, first, last}: Window, eta: Float64Array, a: number): void {
  for (let k = 0; k < modes.count; ++k) {
    const g = eta[k] / (modes.eigenvalues[k] + a);
    const row = k * (last - first);
    for (let i = first; i < last; ++i) c[i] += g * modes.left[row + i - first];
  }
}

/** What `kept` holds for `key`, made now if it was not asked for before. */
function remember<Key, Value>(kept: Map<Key, Value>, key: Key, make: () => Value): Value {
  const found = kept.get(key);
  if (found !== undefined) return found;
  const made = make();
  kept.set(key, made);
  return made;
}

/** Height of reading i above the boundary under it, m. */
const heightOf = ({boundary, x, z}: Continuum, i: number): number => z[i] - boundaryAt(boundary, x[i]);

/** Sorted stations within a margin of [left, right], at least a few dozen where there are. */
function stationsAround(continuum: Continuum, left: number, right: number, scale: number): readonly [number, number] {
  const {x, count} = continuum;
  const margin = (from: number, to: number): readonly [number, number] => {
    let first = 0;
    while (first < count && x[first] < from) ++first;
    let last = count;
    while (last > first && x[last - 1] > to) --last;
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
