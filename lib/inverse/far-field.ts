/**
 * What the reader of the regional has in common with a number, Σ W_i ⟨p_i, q⟩ over a whole line above a flat boundary:
 * the stations near it one by one, the far ones by polynomials.
 *
 * For a point at v the sum of the far ones is ½ Re[c F(v) + c̄ F(v̄)] with F(v) = S_1(v) − L(v) S_0(v), and for a mean it
 * is that of −Re S_0 (see `potential/pair.ts` for L and the kernels, p_i = Re a_i (t − w_i)^−m):
 *
 *   S_0 = Σ W_i a_i/(w_i − v),         S_1 = Σ W_i a_i L(w_i)/(w_i − v)                              for m = 1,
 *   S_0 = −Σ W_i a_i/(w_i − v)²,       S_1 = Σ W_i a_i [L′(w_i)/(w_i − v) − L(w_i)/(w_i − v)²]       for m = 2.
 *
 * The singularities of both are the far stations. In a cell they are two of its half lengths beyond its ends, so that
 * polynomials through 16 Chebyshev points are right to ρ^−15 = 3e-12 with ρ = 3 + √8, and half as far above the cell as
 * it is long to 5e-9 (Trefethen, Approximation Theory and Approximation Practice (2013), ch. 8, from memory).
 */
import {gaussLegendre} from "../numeric/quadrature.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import {remember} from "./remember.ts";

/** Points of a cell. */
const POINTS = 16;
/** Length of a cell in heights on a line of so many; on longer ones longer ones, so that cells and stations near them balance. */
const CELL = 9;
const SPAN = 200;
/** Of a cell, how much two neighbours share: a mean that long lies in one of them. */
const SHARED = 1 / 3;
/** The highest point above a cell, in half lengths. */
const HIGHEST = 0.5;

const CHEBYSHEV = Float64Array.from({length: POINTS}, (_, k) => Math.cos((Math.PI * k) / (POINTS - 1)));
const WEIGHTS = Float64Array.from(
  {length: POINTS},
  (_, k) => (k % 2 === 0 ? 1 : -1) * (k % (POINTS - 1) === 0 ? 0.5 : 1),
);

interface Cell {
  readonly middle: number;
  readonly half: number;
  readonly first: number;
  readonly last: number;
}

/** S_0 and S_1 at the points of a cell: four numbers a point and term, re and im of each. */
type FarSums = Float64Array;

export interface FarField {
  /** @returns one a term; undefined for a number that no cell holds */
  shared(weights: Float64Array, functional: Functional): Float64Array | undefined;
}

/** @returns undefined where readings are not all kernels over a flat boundary with white noise */
export function farField(continuum: Continuum, terms: number, height: number): FarField | undefined {
  const {x, count, poles, noise, boundary, correlated, stretches, known} = continuum;
  if (boundary !== undefined || correlated || stretches !== undefined || known !== undefined) return undefined;
  const span = x[count - 1] - x[0];
  const length = CELL * height * Math.max(1, Math.sqrt(span / (SPAN * height)));
  const between = (1 - SHARED) * length;
  const half = 0.5 * length;
  const cells = new Map<number, Cell>();
  const sums = new WeakMap<Float64Array, Map<Cell, FarSums>>();
  const rule = gaussLegendre(POINTS / 2);
  const response = new Float64Array(count);
  const cellAt = (place: number): Cell => {
    const number = Math.round(place / between);
    const found = cells.get(number);
    if (found !== undefined) return found;
    const middle = x[0] + number * between;
    let first = 0;
    while (first < count && x[first] < middle - 3 * half) ++first;
    let last = first;
    while (last < count && x[last] <= middle + 3 * half) ++last;
    const made = {middle, half, first, last};
    cells.set(number, made);
    return made;
  };
  const farSums = (weights: Float64Array, {middle, first, last}: Cell): FarSums => {
    const result = new Float64Array(4 * POINTS * terms);
    for (let k = 0; k < POINTS; ++k) {
      const v = middle + half * CHEBYSHEV[k];
      for (let i = 0; i < count; ++i) {
        if (i === first) i = last;
        if (i === count) break;
        const {z, aRe, aIm, order, logRe, logIm, slopeRe, slopeIm} = poles[i]!;
        const d = x[i] - v;
        const inverse = 1 / (d * d + z * z);
        const [re, im] = [d * inverse, -z * inverse];
        // s_0 and s_1 of this station.
        let [zeroRe, zeroIm] = [re, im];
        if (order === 1) [zeroRe, zeroIm] = [im * im - re * re, -2 * re * im];
        let oneRe = logRe * zeroRe - logIm * zeroIm;
        let oneIm = logRe * zeroIm + logIm * zeroRe;
        if (order === 1) {
          oneRe += slopeRe * re - slopeIm * im;
          oneIm += slopeRe * im + slopeIm * re;
        }
        const [aZeroRe, aZeroIm] = [aRe * zeroRe - aIm * zeroIm, aRe * zeroIm + aIm * zeroRe];
        const [aOneRe, aOneIm] = [aRe * oneRe - aIm * oneIm, aRe * oneIm + aIm * oneRe];
        for (let t = 0; t < terms; ++t) {
          const share = weights[t * count + i] / noise[i];
          const at = 4 * (t * POINTS + k);
          result[at] += share * aZeroRe;
          result[at + 1] += share * aZeroIm;
          result[at + 2] += share * aOneRe;
          result[at + 3] += share * aOneIm;
        }
      }
    }
    return result;
  };
  /** Adds `scale` times the four numbers at middle + half (re + i im), by the barycentric formula. */
  const shares = new Float64Array(2 * POINTS);
  const addAt = (target: Float64Array, own: FarSums, re: number, im: number): Float64Array => {
    let sumRe = 0;
    let sumIm = 0;
    for (let k = 0; k < POINTS; ++k) {
      const d = re - CHEBYSHEV[k];
      const size = d * d + im * im;
      if (size === 0) {
        for (let t = 0; t < terms; ++t) for (let e = 0; e < 4; ++e) target[4 * t + e] = own[4 * (t * POINTS + k) + e];
        return target;
      }
      shares[2 * k] = (WEIGHTS[k] * d) / size;
      shares[2 * k + 1] = (-WEIGHTS[k] * im) / size;
      sumRe += shares[2 * k];
      sumIm += shares[2 * k + 1];
    }
    const inverse = 1 / (sumRe * sumRe + sumIm * sumIm);
    target.fill(0);
    for (let k = 0; k < POINTS; ++k) {
      const cRe = (shares[2 * k] * sumRe + shares[2 * k + 1] * sumIm) * inverse;
      const cIm = (shares[2 * k + 1] * sumRe - shares[2 * k] * sumIm) * inverse;
      for (let t = 0; t < terms; ++t) {
        const at = 4 * (t * POINTS + k);
        target[4 * t] += cRe * own[at] - cIm * own[at + 1];
        target[4 * t + 1] += cRe * own[at + 1] + cIm * own[at];
        target[4 * t + 2] += cRe * own[at + 2] - cIm * own[at + 3];
        target[4 * t + 3] += cRe * own[at + 3] + cIm * own[at + 2];
      }
    }
    return target;
  };
  const there = new Float64Array(4 * terms);
  let responded: Functional | undefined;
  return {
    shared(weights, functional) {
      const {from, to, over, pole} = functional;
      if (over === undefined && pole === undefined) return undefined;
      const cell = cellAt(0.5 * (from + to) - x[0]);
      const inside = (at: number): boolean => Math.abs(at - cell.middle) <= half;
      if (!(inside(from) && inside(to) && (pole === undefined || pole.z <= HIGHEST * half))) return undefined;
      const own = remember(sums, weights, () => new Map<Cell, FarSums>());
      const far = remember(own, cell, () => farSums(weights, cell));
      const {first, last, middle} = cell;
      if (responded !== functional) functional.respondInto(response, continuum, first, last);
      responded = functional;
      const result = new Float64Array(terms);
      for (let t = 0; t < terms; ++t)
        for (let i = first; i < last; ++i) result[t] += weights[t * count + i] * response[i - first];
      if (over !== undefined) {
        for (let k = 0; k < rule.nodes.length; ++k) {
          const at = 0.5 * (from + to) + 0.5 * (to - from) * rule.nodes[k];
          addAt(there, far, (at - middle) / half, 0);
          for (let t = 0; t < terms; ++t) result[t] -= 0.5 * rule.weights[k] * there[4 * t];
        }
        return result;
      }
      const {x: place, z, aRe, aIm, logRe, logIm} = pole!;
      for (const side of [1, -1]) {
        addAt(there, far, (place - middle) / half, (side * z) / half);
        for (let t = 0; t < terms; ++t) {
          const [zeroRe, zeroIm, oneRe, oneIm] = there.subarray(4 * t, 4 * t + 4);
          const re = oneRe - (logRe * zeroRe - side * logIm * zeroIm);
          const im = oneIm - (logRe * zeroIm + side * logIm * zeroRe);
          result[t] += 0.5 * (aRe * re - side * aIm * im);
        }
      }
      return result;
    },
  };
}
