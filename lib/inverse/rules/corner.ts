/**
 * The corner of the trade-off curve: the multiplier at which ln √E against ln N turns most sharply, where fitting
 * closer begins to cost norm. It asks nothing of the noise.
 *
 * With E misfit, η = N², ′ = d/dα and E′ = −αη′ (Miller 1970) only first derivatives are left in the curvature:
 *
 *   κ = 2 E η [E η − α|η′|(αη + E)] / (|η′| (α²η² + E²)^{3/2}).
 *
 * Source: P. C. Hansen, SIAM Review 34 (1992) 561 (from memory); this form by elimination.
 */
import {ModelError} from "../../errors.ts";
import {minimise} from "../../numeric/roots.ts";
import type {Solver} from "../../solvers/solver.ts";
import type {BoundChoice} from "../nouns.ts";
import {assumedChoice, nothingButNoise, unlessChasingNoise} from "./own-choice.ts";
import type {BoundRule, RuleQuestion} from "./rule.ts";

/** Step in ln α of the search for turns; a heuristic, well below the width of one. */
const STEP = 0.1;
/** And where each step costs a solution. */
const FEW_STEP = 0.5;

/** Curvature of (ln √E, ln N) at a multiplier, above 0 where the curve is convex; NaN where there is nothing to draw. */
export function curvatureAt(solver: Solver, multiplier: number): number {
  const misfit = solver.misfit(multiplier);
  const norm = solver.norm(multiplier);
  const square = norm * norm;
  const fall = -2 * norm * solver.normSlope(multiplier);
  const along = multiplier * square;
  return (
    (2 * misfit * square * (misfit * square - multiplier * fall * (along + misfit))) /
    (fall * Math.hypot(along, misfit) ** 3)
  );
}

/**
 * The sharpest turn inside the curve: not where less than one degree of freedom is used, nor where more than half of
 * those of the readings or nine tenths of those of the modes are. There every curve bends, whatever it tells of.
 * @returns undefined where there is none
 */
export function cornerOf(solver: Solver): number | undefined {
  if (!(solver.largest > 0)) return undefined;
  const most = Math.min(0.5 * solver.data, 0.9 * solver.degreesOfFreedom(solver.least));
  const places: number[] = [];
  const step = solver.modes === undefined ? FEW_STEP : STEP;
  for (let t = Math.log(10 * solver.largest); t >= Math.log(solver.least); t -= step) {
    const degrees = solver.degreesOfFreedom(Math.exp(t));
    if (degrees > most) break;
    if (degrees >= 1) places.push(t);
  }
  const curvature = places.map((t) => curvatureAt(solver, Math.exp(t)));
  let best: number | undefined;
  for (let k = 1; k < places.length - 1; ++k) {
    const here = curvature[k];
    if (!(here > 0 && here >= curvature[k - 1] && here >= curvature[k + 1])) continue;
    if (best === undefined || here > curvature[best]) best = k;
  }
  if (best === undefined) return undefined;
  const {x} = minimise((t) => -curvatureAt(solver, Math.exp(t)), places[best + 1], places[best - 1], 1e-6);
  return Math.exp(x);
}

export const corner: BoundRule = {
  name: "corner",
  text: "corner",
  choose(question: RuleQuestion): BoundChoice {
    const {solver} = question;
    const nothing = nothingButNoise(solver);
    if (nothing !== undefined) return assumedChoice("corner", question, nothing);
    const multiplier = cornerOf(solver);
    if (multiplier === undefined)
      throw new ModelError(
        "bound/no-corner",
        "The trade-off curve of misfit against norm has no corner: it turns nowhere between its ends. Give --bound discrepancy, or a bound.",
      );
    const found = {multiplier, reason: "corner of the trade-off curve, where fitting closer begins to cost norm"};
    return assumedChoice("corner", question, unlessChasingNoise(solver, found));
  },
};
