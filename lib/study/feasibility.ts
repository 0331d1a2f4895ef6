/**
 * Can any source on this support, within this bound, explain the readings? If not: how far the noise, the bound or
 * the support must move, and which is cheapest.
 */
import {ModelError} from "../errors.ts";
import {enough} from "../inverse/enough.ts";
import {misfitLimit, misfitTarget} from "../inverse/misfit-range.ts";
import {multiplierForMisfit} from "../inverse/multiplier-for.ts";
import type {BoundChoice} from "../inverse/nouns.ts";
import {doubt, type Notice} from "../notice.ts";
import type {Solver} from "../solvers/solver.ts";

/** A noise more than this many times too small is no slip of the surveyor's; the advice would only hide the fault. */
const MOST_NOISE = 5;

interface Relief {
  readonly words: string;
  /** By how much it moves, relative. */
  readonly cost: number;
}

/**
 * @param wider misfit within the same bound on a support wider by so many metres either side
 * @param noiseCauseOf why the noise given is the likelier cause of a misfit within a bound, in whole sentences; of no
 *   bound where that is undefined, and undefined where it is not
 * @returns a doubt while the misfit is above the target; nothing when it is not
 * @throws {ModelError} `bound/infeasible`, `support/misses-sources` beyond six standard deviations
 */
export function feasibility(
  solver: Solver,
  choice: BoundChoice,
  wider: () => {readonly metres: number; readonly share: number; readonly misfit: number},
  noiseCauseOf: (misfit: number, bound: number | undefined) => string | undefined,
): Notice[] {
  // A rule may leave more than it must; a given bound leaves what it leaves.
  const bounded = choice.basis === "given-bound";
  const misfit = solver.misfit(bounded ? choice.multiplier : 0);
  const target = misfitTarget(solver.data);
  if (misfit <= target * (1 + 1e-9)) return [];
  const beyond = misfit > misfitLimit(solver.data);
  const cause = noiseCauseOf(misfit, bounded ? choice.bound : undefined);
  const reliefs: Relief[] = [];
  const factor = Math.sqrt(misfit / target);
  if (cause === undefined && factor <= MOST_NOISE)
    reliefs.push({words: `the noise ${enough(factor)} times larger`, cost: factor - 1});
  const best = solver.misfit(0);
  const freed = multiplierForMisfit(solver, target);
  if (bounded && freed !== undefined && freed !== Infinity) {
    const growth = solver.norm(freed) / choice.bound;
    reliefs.push({words: `the bound ${enough(growth)} times larger`, cost: growth - 1});
  }
  if (beyond) {
    const attempt = wider();
    if (attempt.misfit <= target)
      reliefs.push({words: `the support ${enough(attempt.metres)} m wider on either side`, cost: attempt.share});
  }
  reliefs.sort((a, b) => a.cost - b.cost);
  const found = `The misfit is ${misfit.toPrecision(4)} for ${solver.data} readings; noise alone gives at most ${target.toPrecision(4)}.`;
  const cure = cureText(reliefs, cause);
  const lead = cause === undefined ? "" : `${cause} `;
  if (bounded && best <= misfitLimit(solver.data)) {
    const message = `${lead}No source within the bound explains the readings${cause === undefined ? "" : " with the noise given"}. ${found} ${cure}`;
    if (beyond) throw new ModelError("bound/infeasible", message);
    return [doubt("bound/tight", message)];
  }
  const message =
    cause === undefined
      ? `No source on this support explains the readings, however strong: the support misses sources, the noise is given too small, or the ground is not two-dimensional. ${found} ${cure}`
      : `${lead}No source on this support explains the readings with the noise given, however strong. ${found} ${cure}`;
  if (beyond) throw new ModelError("support/misses-sources", message);
  return [doubt("support/fits-poorly", message)];
}

function cureText(reliefs: readonly Relief[], cause: string | undefined): string {
  const [first, ...others] = reliefs.map(({words}) => words);
  if (cause !== undefined)
    return `If the noise is right as given, ${
      first === undefined
        ? "the support misses sources or the ground is not two-dimensional: give a wider --support, to where sources may be"
        : `the cheapest cure is ${[first, ...others].join("; else ")}`
    }.`;
  if (first === undefined)
    return "No noise that would explain it is plausible: give a wider --support, to where sources may be.";
  return `Cheapest cure: ${first}${others.length > 0 ? `; else ${others.join(", or ")}` : ""}.`;
}
