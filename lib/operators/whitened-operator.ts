/** The whitened operator as a pair of products: B acts on f √w and gives readings over their noise, as `whitened.ts` has it. */
import {whitenAdjointInto, whitenInto} from "./correlated-noise.ts";
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
  const {count} = readings;
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
      return whitenInto(target, raw, readings);
    },
    adjointInto(target, data) {
      operator.adjointInto(target, whitenAdjointInto(raw, data, readings));
      for (let j = 0; j < target.length; ++j) target[j] /= rootWidth[j];
      return target;
    },
  };
}
