/**
 * What the reader of the regional has in common with means, Σ W_i ⟨p_i, q⟩ over a whole level, even line: ∫ Σ W_i p_i
 * is worked out on a grid once, by transforms, and a mean is the difference of two of its values over its length.
 *
 * The integral has its singularities at the height of the stations. Through twelve points a sixteenth of that apart a
 * value between them is right to (1·3·…·11/2⁶)² 16⁻¹² /(12π) = 3e-12 (the remainder of Lagrange's polynomial, for
 * the arctangent that each station adds).
 */
import type {Interval} from "../geometry/interval.ts";
import {toeplitzProduct} from "../numeric/fft.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {LevelLine} from "../operators/level-cells.ts";
import {kernelOverPiece} from "../potential/kernel.ts";

/** Grid points a height. */
const FINE = 16;
const POINTS = 12;
/** Barycentric weights of that many points at equal distances, ± binomial coefficients. */
const WEIGHTS = Float64Array.from({length: POINTS}, (_, k) => {
  let chosen = k % 2 === 0 ? 1 : -1;
  for (let j = 0; j < k; ++j) chosen *= (POINTS - 1 - j) / (j + 1);
  return chosen;
});

/**
 * @param weights W, terms × stations
 * @returns one a term; undefined for a mean that reaches more than the length of the line beyond it
 */
export function regionalMeans(
  {x, count, support, aRe, aIm, order, noise}: Continuum,
  {spacing, height}: LevelLine,
  weights: Float64Array,
  terms: number,
): (over: Interval) => Float64Array | undefined {
  const split = Math.ceil((spacing * FINE) / height);
  const step = spacing / split;
  const lowest = Math.max(Math.floor((support[0]!.from - x[0]) / spacing), -count) - POINTS;
  const highest = Math.min(Math.ceil((support[support.length - 1]!.to - x[0]) / spacing), 2 * count) + POINTS;
  const rows = highest - lowest + 1;
  const size = rows * split;
  const grid = new Float64Array(terms * size);
  const own = new Float64Array(rows);
  for (let phase = 0; phase < split; ++phase) {
    const integral = (k: number): number =>
      kernelOverPiece(aRe[0], aIm[0], order[0], 0, height, k * spacing + phase * step, height) / noise[0];
    const product = toeplitzProduct(
      Float64Array.from({length: rows}, (_, k) => integral(lowest + k)),
      Float64Array.from({length: count}, (_, i) => integral(lowest - i)),
    );
    for (let t = 0; t < terms; ++t) {
      product.applyInto(own, weights.subarray(t * count, (t + 1) * count));
      for (let k = 0; k < rows; ++k) grid[t * size + k * split + phase] = own[k];
    }
  }
  /** Adds `scale` times the integrals up to a place. */
  const addAt = (target: Float64Array, at: number, scale: number): boolean => {
    const place = (at - x[0]) / step - lowest * split;
    const first = Math.floor(place) - POINTS / 2 + 1;
    if (!(first >= 0 && first + POINTS <= size)) return false;
    const rest = place - first;
    if (Number.isInteger(rest)) {
      for (let t = 0; t < terms; ++t) target[t] += scale * grid[t * size + first + rest];
      return true;
    }
    let sum = 0;
    for (let k = 0; k < POINTS; ++k) sum += WEIGHTS[k] / (rest - k);
    for (let t = 0; t < terms; ++t)
      for (let k = 0; k < POINTS; ++k)
        target[t] += ((scale * WEIGHTS[k]) / ((rest - k) * sum)) * grid[t * size + first + k];
    return true;
  };
  return ({from, to}) => {
    const target = new Float64Array(terms);
    return addAt(target, to, 1 / (to - from)) && addAt(target, from, -1 / (to - from)) ? target : undefined;
  };
}
