/**
 * Windows of stations for functionals: the whole line where it is short, else the stations within a margin around the
 * functional. Sources outside a window still count, through the inner products over the whole support.
 */
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {recent} from "../numeric/recent.ts";
import {type Continuum, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import {levelLine} from "../operators/level-cells.ts";
import {basisWithin, projectOutInPlace, projectOutOfColumnsInPlace, type RegionalBasis} from "../operators/regional.ts";
import {type DataModes, dataModes} from "../spectral/singular-system.ts";
import {congruentWindows} from "./congruent.ts";
import {farStations, type SharedPart} from "./far-stations.ts";
import {levelWholeLine} from "./level-whole-line.ts";
import {type RegionalReader, regionalReader} from "./regional-reader.ts";
import {type Block, type Patch, type WholeLine, wholeLine} from "./whole-line.ts";
import {BLOCKS_BEYOND, heightOf, windowLayout} from "./window-layout.ts";

/** Lines with no more stations than this, or no more nodes than the next, are one window. Heuristics, for speed alone. */
const WHOLE_STATIONS = 480;
const WHOLE_NODES = 640;
/** Windows, and modes that several of them share, kept at a time: a window takes about a megabyte. */
const WINDOWS_KEPT = 64;
const MODES_KEPT = 16;
/** A support of so many heights has more nodes than one window, and is not asked for them. */
const SURELY_LONG = 2000;
/** Windows of levels above the line are this much wider; a level far above would gain from more, at the cost of the cube. */
const WIDEST_WINDOW = 2;
/** Modes with λ below this share of 1/M² are counted as bias: a relative change of the half-width below 1e-4. */
const MODE_FLOOR = 1e-5;

/** Readers of the regional are made for values of a this far apart, as a factor; the nearest one serves. A heuristic. */
const READER_STEP = 12;
/** Readers for one `a` alone, kept: those of one search. */
const READERS_KEPT = 12;

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
interface WindowReader {
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
  /** Wᵀ Pq. */
  sharedWith(reader: RegionalReader, functional: Functional): SharedPart;
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
  // Shared modes overstate the Gram matrix a little, which is safe for affine estimates alone.
  const congruent =
    even === undefined || whole || regionalOf !== "line" ? undefined : congruentWindows(continuum, even);
  const windows = recent<string, Window>(WINDOWS_KEPT);
  const sharedModes = recent<string, DataModes>(MODES_KEPT);
  const response = new Float64Array(continuum.count);
  const floor = MODE_FLOOR / (loosest * bound) ** 2;
  const terms = whole || regionalOf === "window" ? 0 : basis.terms;

  const modesOn = (first: number, last: number, over: Continuum, projected: RegionalBasis | undefined): DataModes => {
    const nodes = nodesFor(over, first, last);
    const matrix = nodeMatrix(over, nodes, first, last);
    if (projected !== undefined) projectOutOfColumnsInPlace(matrix, nodes.count, projected);
    return dataModes(matrix, last - first, nodes.count, floor);
  };
  const windowOn = (first: number, last: number): Window => {
    const projected = whole ? basis : regionalOf === "window" ? basisWithin(basis, first, last) : undefined;
    const key = congruent?.key(first, last);
    const modes =
      key === undefined
        ? modesOn(first, last, continuum, projected)
        : sharedModes(key, () => modesOn(first, last, congruent!.extended, undefined));
    const rows = last - first;
    const seen = matVecInto(new Float64Array(modes.count), modes.left, data.subarray(first, last), modes.count, rows);
    return {first, last, modes, data: seen, projected};
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
    remember(lines, "line", () => levelWholeLine(continuum) ?? wholeLine(continuum, cover()));
  const readers = new Map<number, RegionalReader>();
  const exactReaders = recent<number, RegionalReader>(READERS_KEPT);
  const readerFor = (a: number): RegionalReader => exactReaders(a, () => regionalReader(line(), basis, data, a));
  const far = even === undefined ? undefined : farStations(continuum, even);
  const blocksOf = new WeakMap<RegionalReader, Float64Array>();
  const nothing = new Float64Array(terms);
  const everywhere = new Float64Array(terms > 0 ? continuum.count : 0);
  let responded: Functional | undefined;
  const seenReaders = new WeakMap<Window, Map<RegionalReader, WindowReader>>();
  const onModes = ({first, last, modes}: Window, vectors: Float64Array): Float64Array => {
    const rows = last - first;
    const part = new Float64Array(terms * rows);
    for (let t = 0; t < terms; ++t)
      part.set(vectors.subarray(t * continuum.count + first, t * continuum.count + last), t * rows);
    return multiplyTransposedInto(new Float64Array(modes.count * terms), modes.left, part, modes.count, rows, terms);
  };
  const regionals = new WeakMap<Window, Float64Array>();

  const windowFor = (functional: Functional): Window => {
    if (whole) return remembered(0, continuum.count);
    const scale = functional.spread > height ? WIDEST_WINDOW * height : height;
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

  return {
    // A mean reaches over its own block and up to two more; a point is in one block, of either scale.
    possible: whole ? 1 : 3 * (blocks(height) + 2 * BLOCKS_BEYOND) + blocks(WIDEST_WINDOW * height) + 2 * BLOCKS_BEYOND,
    reach: whole ? Infinity : 2 * core(height),
    piece: core(height),
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
      return remember(readers, place, () =>
        regionalReader(line(), basis, data, READER_STEP ** place / (bound * bound)),
      );
    },
    readerFor,
    sharedWith(reader, functional) {
      if (far !== undefined) {
        const blocks = remember(blocksOf, reader, () => far.blocks(reader.weights, terms));
        const found = far.shared(reader.weights, blocks, terms, functional);
        if (found !== undefined) return found;
      }
      // All readers of one functional see the same response.
      if (responded !== functional) functional.respondInto(everywhere, continuum, 0, continuum.count);
      responded = functional;
      const near = matVecInto(new Float64Array(terms), reader.weights, everywhere, terms, continuum.count);
      return {near, beyond: nothing};
    },
    readerOn(window, reader) {
      const seen = remember(seenReaders, window, () => new Map<RegionalReader, WindowReader>());
      return remember(seen, reader, () => ({
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

interface Kept<Key, Value> {
  get(key: Key): Value | undefined;
  set(key: Key, value: Value): unknown;
}

/** What `kept` holds for `key`, made now if it was not asked for before. */
function remember<Key, Value>(kept: Kept<Key, Value>, key: Key, make: () => Value): Value {
  const found = kept.get(key);
  if (found !== undefined) return found;
  const made = make();
  kept.set(key, made);
  return made;
}
