/**
 * The bound M that intervals take where nobody gave one: an assumption, said wherever they are printed.
 *
 * A rule that stops at what the noise explains smooths more the stronger the noise is, so the norm of its estimate
 * shrinks with the noise while the true one does not: twice that norm is less than the truth for a narrow source under
 * noise of a tenth of its anomaly. The source at the most likely multiplier keeps its size. Beside what it shows, a
 * source that the noise hides may lie; squares of norms add.
 */
import {apparentNoise} from "./apparent-noise.ts";
import type {RuleQuestion} from "./rules/rule.ts";

/** Measured by `npm run bench -- assumed`: 1.5 covers too seldom under strong noise, 3 costs half as much width again. */
export const ASSUMED_FACTOR = 2;

/** @param multiplier the rule's choice: the bound is never below twice the norm of what is printed */
export function assumedBound(
  {solver, largestNorm}: Pick<RuleQuestion, "solver" | "largestNorm">,
  multiplier: number,
): number {
  const likely = apparentNoise(solver)?.multiplier ?? multiplier;
  return ASSUMED_FACTOR * Math.hypot(largestNorm(Math.min(likely, multiplier)), hiddenNorm(solver));
}

/** The least norm of a source whose whitened response is √(2√(2N)), within which the misfit of N readings varies by chance. */
const hiddenNorm = ({data, largest}: RuleQuestion["solver"]): number =>
  largest > 0 ? Math.sqrt((2 * Math.sqrt(2 * data)) / largest) : 0;
