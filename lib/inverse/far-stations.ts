/**
 * What the reader of the regional has in common with a functional, Σ W_i ⟨p_i, q⟩ over a whole long line: the stations
 * around the functional one by one, those farther off by a bound on what they can add.
 *
 * A reading of the vertical component at height h, d away from a mean, is at most |a| h/d²; q that is itself a field at
 * height z, at most π|a_q| |a| (h + z)/d², for convolving two such kernels adds their heights. A gradient is at most
 * |a|/d² whatever its direction.
 */
import type {Continuum} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import type {LevelLine} from "../operators/level-cells.ts";

/** Stations within so many heights are near. */
const NEAR = 60;
/** Farther ones are bounded by the block. */
const BLOCK = 64;
/** Shorter lines are summed station by station. */
const LONG = 4096;

export interface SharedPart {
  /** By the near stations, one a term. */
  readonly near: Float64Array;
  /** What all others may change it by, either way. */
  readonly beyond: Float64Array;
}

export interface FarStations {
  /** Σ |W_i| over blocks of stations, terms × blocks. */
  blocks(weights: Float64Array, terms: number): Float64Array;
  /** @returns undefined where the functional's kernel has no such bound */
  shared(weights: Float64Array, blocks: Float64Array, terms: number, functional: Functional): SharedPart | undefined;
}

/** @returns undefined where the line is short, or its kernels fade too slowly */
export function farStations(continuum: Continuum, line: LevelLine): FarStations | undefined {
  const {count, x, aRe, aIm, order, noise} = continuum;
  const vertical = order[0] === 0 && aRe[0] === 0;
  if (count < LONG || !(vertical || order[0] === 1)) return undefined;
  const size = Math.hypot(aRe[0], aIm[0]) / noise[0];
  const perTerm = Math.ceil(count / BLOCK);
  const response = new Float64Array(count);
  return {
    blocks(weights, terms) {
      const sums = new Float64Array(terms * perTerm);
      for (let t = 0; t < terms; ++t)
        for (let i = 0; i < count; ++i) sums[t * perTerm + Math.floor(i / BLOCK)] += Math.abs(weights[t * count + i]);
      return sums;
    },
    shared(weights, blocks, terms, functional) {
      const {mass, from, to} = functional;
      if (mass === undefined) return undefined;
      const reach = NEAR * (line.height + functional.spread);
      // Whole blocks, so that every station is counted once.
      const blockOf = (at: number): number => Math.floor((at - x[0]) / (line.spacing * BLOCK));
      const first = Math.min(Math.max(blockOf(from - reach), 0), perTerm - 1);
      const last = Math.min(Math.max(blockOf(to + reach), 0), perTerm - 1);
      const start = first * BLOCK;
      const end = Math.min(count, (last + 1) * BLOCK);
      functional.respondInto(response, continuum, start, end);
      const near = new Float64Array(terms);
      const beyond = new Float64Array(terms);
      const most = size * mass * (vertical ? line.height + functional.spread : 1);
      for (let t = 0; t < terms; ++t) {
        let sum = 0;
        for (let i = start; i < end; ++i) sum += weights[t * count + i] * response[i - start];
        near[t] = sum;
        let far = 0;
        for (let b = 0; b < perTerm; ++b) {
          if (b >= first && b <= last) continue;
          const d = b < first ? from - x[(b + 1) * BLOCK - 1] : x[b * BLOCK] - to;
          far += blocks[t * perTerm + b] / (d * d);
        }
        beyond[t] = most * far;
      }
      return {near, beyond};
    },
  };
}
