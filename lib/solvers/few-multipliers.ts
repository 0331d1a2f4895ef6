/**
 * Multipliers for searches and curves where each costs a solution: two a decade, the same for all who ask, and fixed by
 * the largest eigenvalue alone, so that lines of one geometry ask for the same ones.
 */
import type {Solver} from "./solver.ts";

const PER_DECADE = 2;
/** What rounding makes of one, in its logarithm. */
const SAME = 1e-11;

const fewMultiplier = (largest: number, k: number): number => 10 * largest * 10 ** (-k / PER_DECADE);

/** From ten times the largest eigenvalue down to the least multiplier. */
export function fewMultipliers({largest, least}: Pick<Solver, "largest" | "least">): number[] {
  const multipliers: number[] = [];
  for (let k = 0; ; ++k) {
    const alpha = fewMultiplier(largest, k);
    if (!(alpha > least * (1 + SAME))) break;
    multipliers.push(alpha);
  }
  multipliers.push(least);
  return multipliers;
}

/** The one of the few that a multiplier is but for rounding, or itself. */
export function asFewMultiplier(alpha: number, largest: number): number {
  if (!(alpha > 0)) return alpha;
  const one = fewMultiplier(largest, Math.round(PER_DECADE * Math.log10((10 * largest) / alpha)));
  return Math.abs(alpha / one - 1) < SAME ? one : alpha;
}

/** Whether a multiplier is one of the few, none of them far beyond either end. */
export const isFewMultiplier = (alpha: number, largest: number): boolean =>
  alpha <= 10 * largest &&
  alpha === fewMultiplier(largest, Math.round(PER_DECADE * Math.log10((10 * largest) / alpha)));
