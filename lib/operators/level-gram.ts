/**
 * The Gram matrix of readings that are level and even, in the continuum: G = T − VVᵀ, T what an endless support would
 * give, V what this one does not hold. Products cost transforms, and nothing of readings × readings is kept.
 */
import {toeplitzProduct} from "../numeric/fft.ts";
import {type LowRank, lowRank, type ShiftedInverse, shiftedInverse} from "../numeric/toeplitz-less.ts";
import {logarithmOver, type Pole, pairOver} from "../potential/pair.ts";
import type {Continuum} from "./continuum.ts";
import {levelLine} from "./level-cells.ts";

export interface LevelGram {
  /** G v. */
  timesInto(target: Float64Array, vector: Float64Array): Float64Array;
  /** (G + a)⁻¹. */
  shifted(a: number): ShiftedInverse;
}

/** Of the diagonal: closed forms are good to 1e-13 of it. */
const LEFT_OVER = 1e-12;
/** Endless, in heights. */
const ENDLESS = 1e9;

/** @returns undefined where the readings are not of one kind, level and even, with white noise over a flat boundary */
export function levelGram(continuum: Continuum): LevelGram | undefined {
  const line = continuum.boundary === undefined && continuum.known === undefined ? levelLine(continuum) : undefined;
  if (line === undefined) return undefined;
  const {count: n, support, poles, noise} = continuum;
  const scale = 1 / noise[0] ** 2;
  const half = ENDLESS * line.height;
  const endless = [{from: -half, to: half}];
  const {aRe, aIm, order, z} = poles[0]!;
  const pole = (x: number): Pole => {
    const [logRe, logIm, slopeRe, slopeIm] = logarithmOver(endless, x, z);
    return {x, z, aRe, aIm, order, logRe, logIm, slopeRe, slopeIm};
  };
  const origin = pole(0);
  const diagonals = Float64Array.from({length: n}, (_, d) => scale * pairOver(endless, origin, pole(d * line.spacing)));
  const missing: LowRank = lowRank(
    Float64Array.from(poles, (own) => diagonals[0] - scale * pairOver(support, own, own)),
    (target, j) => {
      for (let i = 0; i < n; ++i)
        target[i] = diagonals[Math.abs(i - j)] - scale * pairOver(support, poles[i]!, poles[j]!);
      return target;
    },
    LEFT_OVER * diagonals[0],
  );
  const whole = toeplitzProduct(diagonals, diagonals);
  return {
    timesInto(target, vector) {
      const shares = missing.columns.map((v) => {
        let sum = 0;
        for (let i = 0; i < n; ++i) sum += v[i] * vector[i];
        return sum;
      });
      whole.applyInto(target, vector);
      missing.columns.forEach((v, k) => {
        const share = shares[k]!;
        for (let i = 0; i < n; ++i) target[i] -= share * v[i];
      });
      return target;
    },
    shifted: (a) => shiftedInverse(diagonals, missing, a),
  };
}
