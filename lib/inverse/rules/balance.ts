/**
 * The balancing rule: the largest multiplier whose estimate differs from every less smooth one by no more than noise
 * explains. It needs the noise alone, neither bound nor misfit.
 *
 *   ‖f_α − f_β‖ ≤ κ ψ(β)  for every β < α of a geometric grid,   ψ(β)² = Σ λ_k/(λ_k + β)²
 *
 * ψ² being the mean square of what the noise makes of f_β. It spreads: a few modes carry most of it, so that κ = 1 would
 * be exceeded by noise alone in half of all draws, and the 4 of the theory smooths away what the readings tell. κ² is
 * taken two standard deviations above 1, as the misfit target is: κ²ψ² = ψ² + 2√(2 Σ λ²/(λ + β)⁴).
 *
 * Source: O. Lepskii, Theory Probab. Appl. 35 (1991) 454; Mathé & Pereverzev, Inverse Problems 19 (2003) 789 (from memory).
 */
import {InputError} from "../../errors.ts";
import type {ModalEnergies} from "../../solvers/solver.ts";
import {apparentNoise} from "../apparent-noise.ts";
import type {BoundChoice} from "../nouns.ts";
import {assumedChoice, nothingButNoise, unlessChasingNoise} from "./own-choice.ts";
import type {BoundRule, RuleQuestion} from "./rule.ts";

/**
 * Standard deviations above the mean. Measured (`npm run bench -- rules`): on a line of twenty heights with noise of
 * 0.01 % two leave a tenth of the draws more than 3.6 times the least error, one more than 6; three smooth more.
 */
const SPREADS = 2;
/** Multipliers a decade; a heuristic: on this scale neither estimate nor noise changes by much. */
const STEPS_PER_DECADE = 8;

/** Mean and standard deviation of ‖noise in f_α‖² for white noise of one standard deviation. */
export function propagatedNoise(
  {eigenvalues, repeats}: ModalEnergies,
  multiplier: number,
): {readonly mean: number; readonly deviation: number} {
  let mean = 0;
  let squares = 0;
  for (let k = eigenvalues.length - 1; k >= 0; --k) {
    const share = eigenvalues[k] / (eigenvalues[k] + multiplier) ** 2;
    const lines = repeats?.[k] ?? 1;
    mean += lines * share;
    squares += lines * share * share;
  }
  return {mean, deviation: Math.sqrt(2 * squares)};
}

/** ‖f_α − f_β‖. */
export function distanceBetween({eigenvalues, energies}: ModalEnergies, alpha: number, beta: number): number {
  let sum = 0;
  for (let k = eigenvalues.length - 1; k >= 0; --k) {
    const lambda = eigenvalues[k];
    // 1/(λ + α) − 1/(λ + β), without cancellation.
    const apart = (beta - alpha) / ((lambda + alpha) * (lambda + beta));
    sum += lambda * energies[k] * apart * apart;
  }
  return Math.sqrt(sum);
}

/** @returns the balanced multiplier of the geometric grid from `most` down to `least`, which ends it */
export function balanced(modal: ModalEnergies, most: number, least: number): number {
  const grid: number[] = [];
  for (let k = 0; ; ++k) {
    const alpha = most * 10 ** (-k / STEPS_PER_DECADE);
    if (!(alpha > least)) break;
    grid.push(alpha);
  }
  grid.push(least);
  const allowed = grid.map((beta) => {
    const {mean, deviation} = propagatedNoise(modal, beta);
    return Math.sqrt(mean + SPREADS * deviation);
  });
  const holds = (alpha: number, k: number): boolean => {
    // From the next one on: the first to break it is met soonest.
    for (let j = k + 1; j < grid.length; ++j) if (!(distanceBetween(modal, alpha, grid[j]) <= allowed[j])) return false;
    return true;
  };
  return grid.find(holds) ?? least;
}

export const balance: BoundRule = {
  name: "balance",
  text: "balance",
  modes: true,
  choose(question: RuleQuestion): BoundChoice {
    const {solver} = question;
    const nothing = nothingButNoise(solver);
    if (nothing !== undefined) return assumedChoice("balance", question, nothing);
    if (solver.modal === undefined)
      throw new InputError(
        "bound/no-modes",
        "--bound balance weighs the modes one by one, and this line is solved without them. Give --bound discrepancy.",
      );
    // Estimates below the most likely multiplier follow noise, and would be no test of a smoother one.
    const least = Math.max(solver.least, apparentNoise(solver)?.multiplier ?? 0);
    const multiplier = balanced(solver.modal, 10 * solver.largest, least);
    const found = {
      multiplier,
      reason:
        "largest multiplier whose estimate differs from every less smooth one by no more than the noise makes of that one",
    };
    return assumedChoice("balance", question, unlessChasingNoise(solver, found));
  },
};
