/** The estimates of one number at several a by weights that all numbers share that lie alike. */
import type {RegionalBasis} from "../operators/regional.ts";
import type {Blinded} from "./shortest-free.ts";
import {speltTrials} from "./trials.ts";
import type {WindowAlike, Windows} from "./windows.ts";

export interface NumberEstimates {
  /** By steps from the a that is best without the regional. */
  at(step: number): Blinded & {readonly a: number};
  /** cᵀd. */
  value(step: number): number;
  /** c, for readings in the order of the continuum. */
  weights(step: number): Float64Array;
}

/** @param terms of the regional that a window must be freed of */
export function estimatesAlike(
  windows: Windows,
  {key, functional, first, seen}: WindowAlike,
  basis: RegionalBasis,
  terms: number,
  data: Float64Array,
  bound: number,
  confidence: number,
): NumberEstimates {
  const {count} = basis;
  const trial = windows.store.trials(`${bound} ${confidence} ${key}`, () => {
    const {eta, modes} = seen();
    return speltTrials(modes, eta, functional.normSquared, bound, confidence);
  });
  /** Vᵀc, for vectors over the whole line. */
  const onTerms = (c: Float64Array, vectors: Float64Array): Float64Array => {
    const sums = new Float64Array(terms);
    for (let t = 0; t < terms; ++t) sums[t] = along(c, vectors, t * count + first);
    return sums;
  };
  return {
    at(step) {
      const {a, weights: c, variance, left} = trial(step);
      return {
        a,
        variance,
        left,
        gamma: onTerms(c, basis.rows),
        on: (reader) => ({taken: onTerms(c, reader.weights), crossed: onTerms(c, reader.gramWeights)}),
      };
    },
    value: (step) => along(trial(step).weights, data, first),
    weights(step) {
      const c = new Float64Array(data.length);
      c.set(trial(step).weights, first);
      return c;
    },
  };
}

/** Σ c_j v_(at + j): four sums run at once. */
function along(c: Float64Array, vector: Float64Array, at: number): number {
  const {length} = c;
  let [zero, one, two, three] = [0, 0, 0, 0];
  let j = 0;
  for (; j + 3 < length; j += 4) {
    zero += c[j] * vector[at + j];
    one += c[j + 1] * vector[at + j + 1];
    two += c[j + 2] * vector[at + j + 2];
    three += c[j + 3] * vector[at + j + 3];
  }
  for (; j < length; ++j) zero += c[j] * vector[at + j];
  return zero + one + (two + three);
}
