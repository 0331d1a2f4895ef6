/** The whitened operator as a pair of products: B acts on f √w and gives readings over their noise, as `whitened.ts` has it. */
import type {MultipoleOperator} from "./multipole.ts";
import type {Readings} from "./readings.ts";

export interface WhitenedOperator {
  readonly readings: number;
  readonly unknowns: number;
  /** √w, √m. */
  readonly rootWidth: Float64Array;
  /** B u; `target` (readings) must not alias `source` (panels). */
  applyInto(target: Float64Array, source: Float64Array): Float64Array;
  /** Bᵀ c; `target` (panels) must not alias `data` (readings). */
  adjointInto(target: Float64Array, data: Float64Array): Float64Array;
}

/** @param readings whose noise whitens; the regional is not projected out */
export function whitenedOperator(operator: MultipoleOperator, readings: Readings): WhitenedOperator {
  const {count, noise, before, rho, correlated} = readings;
  const {panels} = operator;
  const rootWidth = panels.width.map(Math.sqrt);
  const density = new Float64Array(panels.count);
  const raw = new Float64Array(count);
  return {
    readings: count,
    unknowns: panels.count,
    rootWidth,
    applyInto(target, source) {
      for (let j = 0; j < density.length; ++j) density[j] = source[j] / rootWidth[j];
      operator.applyInto(raw, density);
      for (let i = 0; i < count; ++i) target[i] = raw[i] / noise[i];
      for (let i = 0; correlated && i < count; ++i)
        if (before[i] >= 0) target[i] -= (rho[i] * raw[before[i]]) / noise[i];
      return target;
    },
    adjointInto(target, data) {
      for (let i = 0; i < count; ++i) raw[i] = data[i] / noise[i];
      for (let i = 0; correlated && i < count; ++i) if (before[i] >= 0) raw[before[i]] -= (rho[i] * data[i]) / noise[i];
      operator.adjointInto(target, raw);
      for (let j = 0; j < target.length; ++j) target[j] /= rootWidth[j];
      return target;
    },
  };
}
