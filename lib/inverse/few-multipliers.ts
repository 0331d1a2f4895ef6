/** Multipliers for searches and curves where each costs a solution: two a decade, the same for all who ask. */
import type {Solver} from "../solvers/solver.ts";

const PER_DECADE = 2;

/** From ten times the largest eigenvalue down to the least multiplier. */
export function fewMultipliers({largest, least}: Pick<Solver, "largest" | "least">): number[] {
  const multipliers: number[] = [];
  for (let k = 0; ; ++k) {
    const alpha = 10 * largest * 10 ** (-k / PER_DECADE);
    if (!(alpha > least)) break;
    multipliers.push(alpha);
  }
  multipliers.push(least);
  return multipliers;
}
