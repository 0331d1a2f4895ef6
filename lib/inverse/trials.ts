/**
 * Affine estimates of one number at several a, the regional not yet seen to: from the one whose interval would be
 * shortest without it, by whole steps in ln a.
 */
import {transposedMatVecInto} from "../numeric/matmul.ts";
import type {DataModes} from "../spectral/singular-system.ts";
import {halfWidthOf, shortest} from "./half-width.ts";

/** Of ln a for the first: a width feels 1e-5 of it. */
const PRECISION = 5e-3;
/** Between trials, in ln a: half of it off the best, a half-width is longer by some 1e-4. */
const STEP = 0.15;

export interface Trial {
  readonly a: number;
  /** g_k = η_k/(λ_k + a). */
  readonly shares: Float64Array;
  /** ‖c‖². */
  readonly variance: number;
  /** ‖q − Σ c_i p_i‖². */
  readonly left: number;
}

/**
 * @param eta η_k = u_kᵀ Pq
 * @param bound M, SI·√m
 */
export function trialsOf(
  {count, eigenvalues}: DataModes,
  eta: Float64Array,
  normSquared: number,
  bound: number,
  confidence: number,
): (step: number) => Trial {
  const width = (logA: number): number => {
    const a = Math.exp(logA);
    let variance = 0;
    let explained = 0;
    for (let k = 0; k < count; ++k) {
      const over = eigenvalues[k] + a;
      const g = eta[k] / over;
      variance += g * g;
      explained += g * g * (over + a);
    }
    return halfWidthOf(Math.sqrt(variance), bound * Math.sqrt(Math.max(normSquared - explained, 0)), confidence);
  };
  const best = shortest(width, bound, PRECISION);
  const made = new Map<number, Trial>();
  return (step) => {
    const found = made.get(step);
    if (found !== undefined) return found;
    const a = Math.exp(best + step * STEP);
    const shares = new Float64Array(count);
    let variance = 0;
    let explained = 0;
    for (let k = 0; k < count; ++k) {
      const over = eigenvalues[k] + a;
      const g = eta[k] / over;
      shares[k] = g;
      variance += g * g;
      explained += g * g * (over + a);
    }
    const trial = {a, shares, variance, left: Math.max(normSquared - explained, 0)};
    made.set(step, trial);
    return trial;
  };
}

/** A trial with its weights spelt out, for all that lie alike. */
interface SpeltTrial extends Trial {
  /** c, one a station of the window. */
  readonly weights: Float64Array;
}

/** Arguments as `trialsOf`. */
export function speltTrials(modes: DataModes, ...given: DropFirst<Parameters<typeof trialsOf>>): SpeltTrials {
  const trial = trialsOf(modes, ...given);
  const made = new Map<number, SpeltTrial>();
  return (step) => {
    const found = made.get(step);
    if (found !== undefined) return found;
    const own = trial(step);
    const weights = new Float64Array(modes.rows);
    transposedMatVecInto(weights, modes.left, own.shares, modes.count, modes.rows);
    const spelt = {...own, weights};
    made.set(step, spelt);
    return spelt;
  };
}

export type SpeltTrials = (step: number) => SpeltTrial;
type DropFirst<List> = List extends readonly [unknown, ...infer Rest] ? Rest : never;
