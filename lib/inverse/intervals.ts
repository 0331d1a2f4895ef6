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
 * stations around the functional (`windows.ts`): the sources outside still count in b, through G over the whole
 * support, and the interval is longer than the best one by what the far stations could have told.
 *
 * The regional is unbounded, so c must not react to it. Where the window is the whole line this is a projection
 * before the modes are formed. In a window, c ← c − W (Rᵀc): R spans the regional over the whole line, W reads it off
 * the line, RᵀW = 1, and s and b follow exactly; see `regional-reader.ts`.
 */
import {matVecInto} from "../numeric/matmul.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import type {SharedPart} from "./far-stations.ts";
import {A_RANGE, halfWidthOf, shortest} from "./half-width.ts";
import type {IntervalStore} from "./interval-store.ts";
import {type LineReaders, lineReaders} from "./line-readers.ts";
import {estimatesAlike} from "./number-estimates.ts";
import type {RegionalReader} from "./regional-reader.ts";
import {remember} from "./remember.ts";
import {freed, shortestFree} from "./shortest-free.ts";
import {addOnModes, type Layout, windowsOf} from "./windows.ts";

/** How well ln a is found: a width feels 1e-5 of the first, and 1e-3 of the second, where each trial is a solution over the whole line. */
const PRECISION = 5e-3;
const LONG_STEP = 0.2;
/** Readers of longer lines, tens of megabytes, are not kept for the next. */
const MOST_SHARED = 20_000;
const NOTHING = new Float64Array();

export interface Interval {
  readonly value: number;
  readonly halfWidth: number;
}

/** The affine estimate cᵀd behind an interval: fixed before any reading is seen. */
export interface AffineEstimate {
  /** c, for the whitened readings in the order of the continuum. */
  readonly weights: Float64Array;
  /** s, and b over ‖f‖ ≤ M. */
  readonly deviation: number;
  readonly bias: number;
  readonly halfWidth: number;
}

export interface IntervalSolver {
  /**
   * An interval for `functional`; value from the readings that the solver was given.
   * @param loosened the bound is this many times M; at most `loosest`
   */
  interval(functional: Functional, loosened?: number): Interval;
  /** R(x, x) of the averaging kernel at multiplier α, 1/m, at the place of a point functional. */
  resolvingPower(point: Functional, multiplier: number): number;
  /**
   * w of the averaging kernel R(x, ·) = Σ w_i p_i at multiplier α, x the place of a point functional: its common part
   * with any functional is Σ w_i times what reading i has in common with that. For readings in the order of the continuum.
   */
  kernelWeights(point: Functional, multiplier: number): Float64Array;
}

/** Intervals that each cover by themselves, the shortest of fixed length, of estimates fixed before any reading is seen. */
export interface AffineIntervalSolver extends IntervalSolver {
  /** What `interval` applies to the readings. */
  affine(functional: Functional, loosened?: number): AffineEstimate;
}

export interface IntervalTerms {
  /** M, SI·√m. */
  readonly bound: number;
  /** Coverage, in (0, 1). */
  readonly confidence: number;
  /** How many times M will be asked for; default 1. */
  readonly loosest?: number;
  readonly layout?: Layout;
  /** What was worked out for lines read alike; default: nothing. */
  readonly store?: IntervalStore | undefined;
}

/** An estimate found, whose weights are spelt out only where they are asked for. */
interface Found extends Omit<AffineEstimate, "weights"> {
  value(): number;
  weights(): Float64Array;
}

/**
 * @param basis regional at the stations in the order of `continuum`
 * @param data Q d/σ in that order
 */
export function intervalSolver(
  continuum: Continuum,
  basis: RegionalBasis,
  data: Float64Array,
  {bound, confidence, loosest = 1, layout = "by size", store}: IntervalTerms,
): AffineIntervalSolver {
  const windows = windowsOf(continuum, basis, data, bound, loosest, layout, "line", store);
  const {terms, number} = windows;
  const madeReaders = (): LineReaders =>
    lineReaders(continuum, basis, bound, windows.line, windows.even, windows.height);
  const readers =
    terms === 0
      ? undefined
      : number === undefined || continuum.count > MOST_SHARED
        ? madeReaders()
        : windows.store.readers(`${number} ${terms} ${bound}`, madeReaders);
  /** Wᵀd. */
  const read = new Map<RegionalReader, Float64Array>();
  const readBy = (reader: RegionalReader): Float64Array =>
    remember(read, reader, () => matVecInto(new Float64Array(terms), reader.weights, data, terms, continuum.count));

  /** Readings that say nothing worth their noise are left alone: a = ∞. */
  const blind = (functional: Functional, most: number): Found => {
    const bias = most * Math.sqrt(functional.normSquared);
    const weights = (): Float64Array => new Float64Array(continuum.count);
    return {deviation: 0, bias, halfWidth: bias, value: () => 0, weights};
  };

  /** By the modes of a window of its own. */
  const byModes = (functional: Functional, most: number): Found => {
    const window = windows.for(functional);
    const eta = windows.seenBy(window, functional);
    const lambda = window.modes.eigenvalues;
    const regional = readers?.regionalOn(window) ?? NOTHING;
    /** Wᵀ Pq, by reader. */
    const parts = new Map<RegionalReader, SharedPart>();
    const gamma = new Float64Array(terms);
    const taken = new Float64Array(terms);
    const crossed = new Float64Array(terms);
    const measure = (logA: number): readonly [deviation: number, bias: number] => {
      const a = Math.exp(logA);
      let variance = 0;
      let explained = 0;
      for (let k = 0; k < eta.length; ++k) {
        const g = eta[k] / (lambda[k] + a);
        variance += g * g;
        explained += g * g * (lambda[k] + 2 * a);
      }
      let left = functional.normSquared - explained;
      if (readers !== undefined) {
        const reader = readers.of(readers.place(a));
        const {weights, weightsGram} = readers.on(window, reader);
        const {near, beyond} = remember(parts, reader, () => readers.sharedWith(reader, functional));
        gamma.fill(0);
        taken.fill(0);
        crossed.fill(0);
        for (let k = 0; k < eta.length; ++k) {
          const g = eta[k] / (lambda[k] + a);
          for (let t = 0; t < terms; ++t) {
            gamma[t] += g * regional[k * terms + t];
            taken[t] += g * weights[k * terms + t];
            crossed[t] += g * weightsGram[k * terms + t];
          }
        }
        for (let t = 0; t < terms; ++t) {
          variance -= 2 * gamma[t] * taken[t];
          left += 2 * gamma[t] * (near[t] - crossed[t]) + 2 * Math.abs(gamma[t]) * beyond[t];
          for (let u = 0; u < terms; ++u) {
            variance += gamma[t] * gamma[u] * reader.products[t * terms + u];
            left += gamma[t] * gamma[u] * reader.gram[t * terms + u];
          }
        }
      }
      return [Math.sqrt(Math.max(variance, 0)), most * Math.sqrt(Math.max(left, 0))];
    };
    const logA = shortest((log) => halfWidthOf(...measure(log), confidence), most, PRECISION);
    const a = Math.exp(logA);
    const [deviation, bias] = measure(logA);
    const halfWidth = halfWidthOf(deviation, bias, confidence);
    if (!(halfWidth < most * Math.sqrt(functional.normSquared))) return blind(functional, most);
    const value = (): number => {
      let sum = 0;
      for (let k = 0; k < eta.length; ++k) sum += (eta[k] / (lambda[k] + a)) * window.data[k];
      const reader = readers?.of(readers.place(a));
      if (reader !== undefined) for (let t = 0; t < terms; ++t) sum -= gamma[t] * readBy(reader)[t];
      return sum;
    };
    const weights = (): Float64Array => {
      const c = new Float64Array(continuum.count);
      addOnModes(c, window, eta, a);
      if (readers !== undefined) freeOfRegionalInPlace(c, basis, readers.of(readers.place(a)));
      return c;
    };
    return {deviation, bias, halfWidth, value, weights};
  };

  const short = (functional: Functional, most: number): Found => {
    const alike = windows.alike(functional);
    if (alike === undefined) return byModes(functional, most);
    const {at, value, weights} = estimatesAlike(windows, alike, basis, terms, data, most, confidence);
    const {variance, left} = at(0);
    const plain = {deviation: Math.sqrt(variance), bias: most * Math.sqrt(left)};
    if (readers === undefined) {
      const halfWidth = halfWidthOf(plain.deviation, plain.bias, confidence);
      if (!(halfWidth < most * Math.sqrt(functional.normSquared))) return blind(functional, most);
      return {...plain, halfWidth, value: () => value(0), weights: () => weights(0)};
    }
    /** Wᵀ Pq, by reader. */
    const parts = new Map<RegionalReader, SharedPart>();
    const measured = (step: number, place: number): ReturnType<typeof freed> => {
      const reader = readers.of(place);
      const part = remember(parts, reader, () => readers.sharedWith(reader, functional));
      return freed(at(step), reader, part, most);
    };
    const best = shortestFree(measured, readers.place(at(0).a), plain, confidence);
    const {step, place, deviation, bias, halfWidth} = best;
    if (!(halfWidth < most * Math.sqrt(functional.normSquared))) return blind(functional, most);
    const reader = readers.of(place);
    return {
      deviation,
      bias,
      halfWidth,
      value: () => at(step).gamma.reduce((sum, share, t) => sum - share * readBy(reader)[t], value(step)),
      weights() {
        const c = weights(step);
        freeOfRegionalInPlace(c, basis, reader);
        return c;
      },
    };
  };

  /** A mean longer than a window: from the whole line, at its best `a` among a few. */
  const long = (functional: Functional, most: number): Found => {
    const line = windows.line();
    const all = functional.respondInto(new Float64Array(continuum.count), continuum, 0, continuum.count);
    const at = (logA: number): Found => {
      const a = Math.exp(logA);
      const c = line.solve(a, all);
      if (readers !== undefined) freeOfRegionalInPlace(c, basis, readers.for(a));
      const gram = line.gram(c);
      let variance = 0;
      let left = functional.normSquared;
      let value = 0;
      for (let i = 0; i < c.length; ++i) {
        variance += c[i] * c[i];
        left += c[i] * (gram[i] - 2 * all[i]);
        value += c[i] * data[i];
      }
      const deviation = Math.sqrt(variance);
      const bias = most * Math.sqrt(Math.max(left, 0));
      const halfWidth = halfWidthOf(deviation, bias, confidence);
      return {deviation, bias, halfWidth, value: () => value, weights: () => c};
    };
    // Whole steps, so that one mean finds the inverses and readers of another.
    const unit = -2 * Math.log(most);
    const tried = new Map<number, Found>();
    const width = (step: number): number => {
      const answer = tried.get(step) ?? at(unit + step * LONG_STEP);
      tried.set(step, answer);
      return answer.halfWidth;
    };
    leastOfSteps(width, Math.floor(Math.log(A_RANGE[0]) / LONG_STEP), Math.ceil(Math.log(A_RANGE[1]) / LONG_STEP));
    return [...tried.values()].reduce(
      (best, next) => (next.halfWidth < best.halfWidth ? next : best),
      blind(functional, most),
    );
  };

  const found = (functional: Functional, loosened: number): Found => {
    if (!(loosened <= loosest)) throw new RangeError(`the bound was to be loosened ${loosest} times at most`);
    const most = loosened * bound;
    if (!(functional.normSquared > 0)) return blind(functional, most);
    return functional.spread === 0 && functional.to - functional.from > windows.reach
      ? long(functional, most)
      : short(functional, most);
  };

  return {
    interval(functional, loosened = 1) {
      const {halfWidth, value} = found(functional, loosened);
      return {value: value(), halfWidth};
    },
    affine(functional, loosened = 1) {
      const {deviation, bias, halfWidth, weights} = found(functional, loosened);
      return {deviation, bias, halfWidth, weights: weights()};
    },
    resolvingPower: windows.resolvingPower,
    kernelWeights: windows.kernelWeights,
  };
}

/** c ← c − W (Rᵀc), for c over the whole line. */
function freeOfRegionalInPlace(c: Float64Array, basis: RegionalBasis, reader: RegionalReader): void {
  const gamma = matVecInto(new Float64Array(basis.terms), basis.rows, c, basis.terms, c.length);
  for (let t = 0; t < basis.terms; ++t)
    for (let i = 0; i < c.length; ++i) c[i] -= gamma[t] * reader.weights[t * c.length + i];
}

/** Halves a range of whole steps around the least of a function with one minimum, asking at two neighbours each time. */
function leastOfSteps(width: (step: number) => number, low: number, high: number): void {
  let [from, to] = [low, high];
  while (from < to) {
    const middle = Math.floor((from + to) / 2);
    if (width(middle) <= width(middle + 1)) to = middle;
    else from = middle + 1;
  }
}
