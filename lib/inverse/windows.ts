/**
 * Windows of stations for functionals: the whole line where it is short, else the stations within a margin around the
 * functional. Sources outside a window still count, through the inner products over the whole support.
 */
import {boundaryAt} from "../geometry/boundary-line.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {type Continuum, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import {projectOutInPlace, projectOutOfColumnsInPlace, type RegionalBasis} from "../operators/regional.ts";
import {type DataModes, dataModes} from "../spectral/singular-system.ts";
import {type RegionalReader, regionalReader} from "./regional-reader.ts";

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
/** Modes with λ below this share of 1/M² are counted as bias: a relative change of the half-width below 1e-4. */
const MODE_FLOOR = 1e-5;

/** One window or many; by size of the line unless a test asks. */
export type Layout = "by size" | "whole" | "windows";

export interface Window {
  readonly first: number;
  readonly last: number;
  readonly modes: DataModes;
  /** u_kᵀ d. */
  readonly data: Float64Array;
  /** u_kᵀ R, u_kᵀ W and u_kᵀ G W, modes × terms; zero terms where the regional was projected out before. */
  readonly terms: number;
  readonly regional: Float64Array;
  readonly weights: Float64Array;
  readonly weightsGram: Float64Array;
}

export interface Windows {
  /** Whether the whole line is the one window; its regional is then projected out of modes, data and responses. */
  readonly whole: boolean;
  /** Undefined where no window needs it. */
  readonly reader: RegionalReader | undefined;
  /** The longest mean that one window can serve, m. */
  readonly reach: number;
  /** The pieces that a longer mean is cut into. */
  readonly piece: number;
  for(functional: Functional): Window;
  /** The functional seen by a window's modes: η_k = u_kᵀ Pq. */
  seenBy(window: Window, functional: Functional): Float64Array;
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
): Windows {
  const heights = continuum.z.map((_, i) => heightOf(continuum, i)).sort();
  const height = heights[heights.length >> 1];
  const whole =
    layout === "whole" ||
    (layout === "by size" &&
      (continuum.count <= WHOLE_STATIONS || nodesFor(continuum, 0, continuum.count).count <= WHOLE_NODES));
  const windows = new Map<string, Window>();
  const reader = whole || basis.terms === 0 ? undefined : regionalReader(continuum, basis, data, bound);
  const response = new Float64Array(continuum.count);
  const floor = MODE_FLOOR / (loosest * bound) ** 2;

  const windowOn = (first: number, last: number): Window => {
    const nodes = nodesFor(continuum, first, last);
    const matrix = nodeMatrix(continuum, nodes, first, last);
    const rows = last - first;
    if (whole) projectOutOfColumnsInPlace(matrix, nodes.count, basis);
    const modes = dataModes(matrix, rows, nodes.count, floor);
    const terms = reader === undefined ? 0 : basis.terms;
    const onModes = (vectors: Float64Array): Float64Array => {
      const part = new Float64Array(terms * rows);
      for (let t = 0; t < terms; ++t)
        part.set(vectors.subarray(t * continuum.count + first, t * continuum.count + last), t * rows);
      return multiplyTransposedInto(new Float64Array(modes.count * terms), modes.left, part, modes.count, rows, terms);
    };
    return {
      first,
      last,
      modes,
      data: matVecInto(new Float64Array(modes.count), modes.left, data.subarray(first, last), modes.count, rows),
      terms,
      regional: reader === undefined ? new Float64Array() : onModes(basis.rows),
      weights: reader === undefined ? new Float64Array() : onModes(reader.weights),
      weightsGram: reader === undefined ? new Float64Array() : onModes(reader.gramWeights),
    };
  };
  const remembered = (first: number, last: number): Window => {
    const key = `${first}-${last}`;
    const found = windows.get(key) ?? windowOn(first, last);
    windows.set(key, found);
    return found;
  };
  return {
    whole,
    reader,
    reach: whole ? Infinity : 2 * WINDOW_CORE * height,
    piece: WINDOW_CORE * height,
    for(functional) {
      if (whole) return remembered(0, continuum.count);
      const scale = functional.spread > height ? WIDEST_WINDOW * height : height;
      const core = WINDOW_CORE * scale;
      // Whole blocks, so that neighbouring functionals share a window.
      const blockOf = (x: number): number => Math.floor((x - continuum.x[0]) / core);
      const middle = blockOf(0.5 * (functional.from + functional.to));
      const spans = functional.to - functional.from > core;
      const left = continuum.x[0] + core * (spans ? blockOf(functional.from) : middle);
      const right = continuum.x[0] + core * (1 + (spans ? blockOf(functional.to) : middle));
      return remembered(...stationsAround(continuum, left, right, scale));
    },
    seenBy(window, functional) {
      functional.respondInto(response, continuum, window.first, window.last);
      // Rounding mixes the regional into modes of small λ, and a response to it is large: both sides must be free of it.
      if (whole) projectOutInPlace(response, basis);
      return matVecInto(
        new Float64Array(window.modes.count),
        window.modes.left,
        response,
        window.modes.count,
        window.last - window.first,
      );
    },
  };
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
