/**
 * An interval for one number asked of f, honest about noise, null space and regional.
 *
 * With readings p_i, G_ij = ⟨p_i, p_j⟩ and q the functional, all whitened, the affine estimate
 *
 *   c = (G + a)⁻¹ Pq    has standard deviation s = ‖c‖ and worst bias b = M ‖q − Σ c_i p_i‖ over ‖f‖ ≤ M,
 *
 * and estimate ± cv(b/s)·s, cv(t) the quantile of |N(t, 1)|, covers every such f at the stated level. `a` is
 * chosen for each functional to make it shortest; it depends on geometry, noise and M, never on the readings.
 * Sources: Donoho, Ann. Stat. 22 (1994) 238; Armstrong & Kolesár, Econometrica 86 (2018) 655 (both from memory).
 *
 * Any c gives a valid interval as long as its own s and b are used. So on a long line c may look at a window of
 * stations around the functional: the sources outside still count in b, through G over the whole support, and the
 * interval is longer than the best one by what the far stations could have told, which `WINDOW_MARGIN` makes little.
 *
 * The regional is unbounded, so c must not react to it. Where the window is the whole line this is a projection
 * before the modes are formed. In a window, c ← c − W (Rᵀc): R spans the regional over the whole line, W reads it off
 * the line, RᵀW = 1, and s and b follow exactly; see `regional-reader.ts`.
 */

import {boundaryAt} from "../geometry/boundary-line.ts";
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {foldedNormalQuantile} from "../numeric/normal.ts";
import {minimise} from "../numeric/roots.ts";
import type {Continuum} from "../operators/continuum.ts";
import {nodeMatrix, nodesFor, responseNormSquared} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import {meanOver} from "../operators/functional.ts";
import {projectOutInPlace, projectOutOfColumnsInPlace, type RegionalBasis} from "../operators/regional.ts";
import {type DataModes, dataModes} from "../spectral/singular-system.ts";
import {regionalReader} from "./regional-reader.ts";

/** Lines with no more stations than this, or no more nodes than the next, are one window. Heuristics, for speed alone. */
const WHOLE_STATIONS = 480;
const WHOLE_NODES = 640;
/** Core and margin of a window in heights; what is lost is measured in the tests of this module. */
const WINDOW_CORE = 12;
const WINDOW_MARGIN = 12;
/** Windows of levels above the line are this much wider; a level far above would gain from more, at the cost of the cube. */
const WIDEST_WINDOW = 2;
/** A window reaches out until it holds this many stations. */
const LEAST_STATIONS = 48;
/**
 * Search range of a, in units of 1/M². The best a is (δ/M)² with δ between one and a few standard deviations of
 * noise (Donoho 1994); the range is wide of that on both sides.
 */
const A_RANGE = [0.02, 400] as const;
/** Modes with λ below this share of 1/M² are counted as bias: a relative change of the half-width below 1e-4. */
const MODE_FLOOR = 1e-5;

export interface Interval {
  readonly value: number;
  readonly halfWidth: number;
}

export interface IntervalSolver {
  /** The shortest fixed-length interval for `functional`; value from the readings that the solver was given. */
  interval(functional: Functional): Interval;
  /** R(x, x) of the averaging kernel at multiplier α, 1/m, at the place of a point functional. */
  resolvingPower(point: Functional, multiplier: number): number;
}

interface Window {
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

/**
 * @param basis regional at the stations in the order of `continuum`
 * @param data Q d/σ in that order
 * @param bound M, SI·√m
 * @param confidence coverage, in (0, 1)
 * @param layout one window or many; by size of the line unless a test asks
 */
export function intervalSolver(
  continuum: Continuum,
  basis: RegionalBasis,
  data: Float64Array,
  bound: number,
  confidence: number,
  layout: "by size" | "whole" | "windows" = "by size",
): IntervalSolver {
  const heights = continuum.z.map((_, i) => heightOf(continuum, i)).sort();
  const height = heights[heights.length >> 1];
  const whole =
    layout === "whole" ||
    (layout === "by size" &&
      (continuum.count <= WHOLE_STATIONS || nodesFor(continuum, 0, continuum.count).count <= WHOLE_NODES));
  const windows = new Map<string, Window>();
  const reader = whole || basis.terms === 0 ? undefined : regionalReader(continuum, basis, data, bound);
  const response = new Float64Array(continuum.count);
  const floor = MODE_FLOOR / (bound * bound);

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

  const windowFor = (functional: Functional): Window => {
    const remembered = (key: string, first: number, last: number): Window => {
      const found = windows.get(key);
      if (found !== undefined) return found;
      const made = windowOn(first, last);
      windows.set(key, made);
      return made;
    };
    if (whole) return remembered("whole", 0, continuum.count);
    const scale = functional.spread > height ? WIDEST_WINDOW * height : height;
    const core = WINDOW_CORE * scale;
    // Whole blocks, so that neighbouring functionals share a window.
    const blockOf = (x: number): number => Math.floor((x - continuum.x[0]) / core);
    const middle = blockOf(0.5 * (functional.from + functional.to));
    const spans = functional.to - functional.from > core;
    const left = continuum.x[0] + core * (spans ? blockOf(functional.from) : middle);
    const right = continuum.x[0] + core * (1 + (spans ? blockOf(functional.to) : middle));
    const [first, last] = stationsAround(continuum, left, right, scale);
    return remembered(`${first}-${last}`, first, last);
  };

  /** The functional seen by a window's modes: η_k = u_kᵀ Pq. */
  const seenBy = (window: Window, functional: Functional): Float64Array => {
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
  };

  const short = (functional: Functional): Interval => {
    const window = windowFor(functional);
    const eta = seenBy(window, functional);
    const lambda = window.modes.eigenvalues;
    const {terms} = window;
    const shared = new Float64Array(terms);
    if (reader !== undefined) {
      functional.respondInto(response, continuum, 0, continuum.count);
      matVecInto(shared, reader.weights, response, terms, continuum.count);
    }
    const gamma = new Float64Array(terms);
    const taken = new Float64Array(terms);
    const crossed = new Float64Array(terms);
    const measure = (logA: number): readonly [deviation: number, bias: number] => {
      const a = Math.exp(logA);
      let variance = 0;
      let explained = 0;
      gamma.fill(0);
      taken.fill(0);
      crossed.fill(0);
      for (let k = 0; k < eta.length; ++k) {
        const g = eta[k] / (lambda[k] + a);
        variance += g * g;
        explained += g * g * (lambda[k] + 2 * a);
        for (let t = 0; t < terms; ++t) {
          gamma[t] += g * window.regional[k * terms + t];
          taken[t] += g * window.weights[k * terms + t];
          crossed[t] += g * window.weightsGram[k * terms + t];
        }
      }
      let left = functional.normSquared - explained;
      for (let t = 0; t < terms; ++t) {
        variance -= 2 * gamma[t] * taken[t];
        left += 2 * gamma[t] * (shared[t] - crossed[t]);
        for (let u = 0; u < terms; ++u) {
          variance += gamma[t] * gamma[u] * reader!.products[t * terms + u];
          left += gamma[t] * gamma[u] * reader!.gram[t * terms + u];
        }
      }
      return [Math.sqrt(Math.max(variance, 0)), bound * Math.sqrt(Math.max(left, 0))];
    };
    const logA = shortest((log) => halfWidth(...measure(log), confidence), bound);
    const a = Math.exp(logA);
    const width = halfWidth(...measure(logA), confidence);
    // a = ∞: readings that say nothing worth their noise are left alone.
    const blind = bound * Math.sqrt(functional.normSquared);
    if (!(width < blind)) return {value: 0, halfWidth: blind};
    let value = 0;
    for (let k = 0; k < eta.length; ++k) value += (eta[k] / (lambda[k] + a)) * window.data[k];
    for (let t = 0; t < terms; ++t) value -= gamma[t] * reader!.data[t];
    return {value, halfWidth: width};
  };

  /** A mean longer than a window: the weighted sum of the estimates of its pieces, with the exact s and b of the sum. */
  const long = (functional: Functional): Interval => {
    const length = functional.to - functional.from;
    const pieces = Math.ceil(length / (WINDOW_CORE * height));
    const parts = Array.from({length: pieces}, (_, k) => {
      const piece = {
        from: functional.from + (length * k) / pieces,
        to: functional.from + (length * (k + 1)) / pieces,
      };
      const part = meanOver(piece, continuum.support, continuum.boundary);
      const window = windowFor(part);
      return {window, eta: seenBy(window, part)};
    });
    const all = functional.respondInto(new Float64Array(continuum.count), continuum, 0, continuum.count);
    const weightsAt = (logA: number): Float64Array => {
      const a = Math.exp(logA);
      const c = new Float64Array(continuum.count);
      for (const {window, eta} of parts) {
        const {modes, first, last} = window;
        for (let k = 0; k < modes.count; ++k) {
          const g = eta[k] / (modes.eigenvalues[k] + a) / pieces;
          const row = k * (last - first);
          for (let i = first; i < last; ++i) c[i] += g * modes.left[row + i - first];
        }
      }
      if (reader !== undefined) {
        const gamma = matVecInto(new Float64Array(basis.terms), basis.rows, c, basis.terms, c.length);
        for (let t = 0; t < basis.terms; ++t)
          for (let i = 0; i < c.length; ++i) c[i] -= gamma[t] * reader.weights[t * c.length + i];
      }
      return c;
    };
    const widthOf = (c: Float64Array): number => {
      let variance = 0;
      let cross = 0;
      for (let i = 0; i < c.length; ++i) {
        variance += c[i] * c[i];
        cross += c[i] * all[i];
      }
      const left = functional.normSquared - 2 * cross + responseNormSquared(continuum, c);
      return halfWidth(Math.sqrt(variance), bound * Math.sqrt(Math.max(left, 0)), confidence);
    };
    let best = {halfWidth: Infinity, value: 0};
    for (const factor of [0.1, 1, 10, 100]) {
      const c = weightsAt(Math.log(factor / (bound * bound)));
      const width = widthOf(c);
      if (width < best.halfWidth) {
        let value = 0;
        for (let i = 0; i < c.length; ++i) value += c[i] * data[i];
        best = {halfWidth: width, value};
      }
    }
    return best;
  };

  return {
    interval(functional) {
      if (!(functional.normSquared > 0)) return {value: 0, halfWidth: 0};
      const wide = functional.spread === 0 && functional.to - functional.from > 2 * WINDOW_CORE * height;
      return wide && !whole ? long(functional) : short(functional);
    },
    resolvingPower(point, multiplier) {
      const window = windowFor(point);
      const eta = seenBy(window, point);
      let power = 0;
      for (let k = 0; k < eta.length; ++k) power += (eta[k] * eta[k]) / (window.modes.eigenvalues[k] + multiplier);
      return power;
    },
  };
}

/** cv(b/s)·s; all bias where nothing is read. */
function halfWidth(deviation: number, bias: number, confidence: number): number {
  if (!(deviation > 1e-12 * bias)) return bias;
  return foldedNormalQuantile(bias / deviation, confidence) * deviation;
}

/** ln a with the shortest interval, to half a per cent in a: the width is flat there, its own error second order in that. */
function shortest(width: (logA: number) => number, bound: number): number {
  const unit = -2 * Math.log(bound);
  return minimise(width, unit + Math.log(A_RANGE[0]), unit + Math.log(A_RANGE[1]), 5e-3).x;
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
