/**
 * The noise that the readings themselves suggest on this support: what no source, strong or weak, explains well.
 *
 * The fourth differences of a record see only its shortest waves. Where the noise is stronger at longer ones, too
 * long for a source this far below and too short to be differences, a rule that trusts them chases noise: the estimate
 * grows a hundredfold for nothing. The estimate by likelihood stays calm there.
 */
import {minimise} from "../numeric/roots.ts";
import {fewMultipliers} from "../solvers/few-multipliers.ts";
import type {Solver} from "../solvers/solver.ts";

export interface ApparentNoise {
  /** Over the noise that whitened the readings. */
  readonly ratio: number;
  /** Multiplier that goes with it, for the readings as they were whitened. */
  readonly multiplier: number;
}

/** Steps of the search in ln α; the likelihood is flat on this scale. */
const STEP = 0.1;
/** Where each step costs a solution it ends when the likelihood a reading is by so much below the best: e^(−60) for 600. */
const HOPELESS = 0.1;

/** @returns undefined where the solver has no likelihood to judge by */
export function apparentNoise(solver: Solver): ApparentNoise | undefined {
  if (solver.evidence === undefined || !(solver.largest > 0)) return undefined;
  if (solver.modes === undefined) return fromFewMultipliers(solver, solver.evidence);
  let best = {against: Infinity, noise: 1};
  let multiplier = solver.largest;
  for (let t = Math.log(10 * solver.largest); t >= Math.log(solver.least); t -= STEP) {
    const found = solver.evidence(Math.exp(t));
    if (found.against < best.against) {
      best = found;
      multiplier = Math.exp(t);
    }
  }
  return {ratio: best.noise, multiplier};
}

/** The best of a few multipliers, then between its neighbours. */
function fromFewMultipliers(solver: Solver, evidence: NonNullable<Solver["evidence"]>): ApparentNoise {
  const multipliers = fewMultipliers(solver);
  let best = 0;
  let least = Infinity;
  for (let k = 0; k < multipliers.length; ++k) {
    const {against} = evidence(multipliers[k]!);
    if (against < least) {
      least = against;
      best = k;
    }
    if (against > least + HOPELESS) break;
  }
  const low = multipliers[Math.min(best + 1, multipliers.length - 1)]!;
  const high = multipliers[Math.max(best - 1, 0)]!;
  const {x} = minimise((t) => evidence(Math.exp(t)).against, Math.log(low), Math.log(high), STEP);
  const found = evidence(Math.exp(x));
  return found.against < least
    ? {ratio: found.noise, multiplier: Math.exp(x)}
    : {ratio: evidence(multipliers[best]!).noise, multiplier: multipliers[best]!};
}

/**
 * How far the apparent noise of n readings may exceed the true one by chance: three standard deviations of the
 * fourth-difference figure, 1.2/√n each (measured on white noise; the robust form of a correlated series).
 */
export const chanceRatio = (readings: number): number => 1 + 3.6 / Math.sqrt(readings);
