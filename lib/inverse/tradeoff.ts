/** The trade-off curve: how misfit and norm answer to the multiplier. */

import {fewMultipliers} from "../solvers/few-multipliers.ts";
import type {Solver} from "../solvers/solver.ts";
import type {TradeoffCurve} from "./nouns.ts";

/** Points on the curve: six a decade over at most fourteen decades draw it smoothly; fewer where each costs a solution. */
const POINTS_PER_DECADE = 6;

/** From the least multiplier that the modes can serve to ten times the largest eigenvalue. */
export function tradeoffCurve(solver: Solver): TradeoffCurve {
  if (!(solver.largest > 0))
    return {
      multiplier: new Float64Array(),
      misfit: new Float64Array(),
      norm: new Float64Array(),
      degreesOfFreedom: new Float64Array(),
    };
  if (solver.modes === undefined) return curveAt(solver, Float64Array.from(fewMultipliers(solver).reverse()));
  const low = Math.log10(solver.least);
  const high = Math.log10(10 * solver.largest);
  const points = Math.max(2, Math.ceil((high - low) * POINTS_PER_DECADE) + 1);
  const multiplier = Float64Array.from({length: points}, (_, k) => 10 ** (low + ((high - low) * k) / (points - 1)));
  return curveAt(solver, multiplier);
}

function curveAt(solver: Solver, multiplier: Float64Array): TradeoffCurve {
  return {
    multiplier,
    misfit: multiplier.map((alpha) => solver.misfit(alpha)),
    norm: multiplier.map((alpha) => solver.norm(alpha)),
    degreesOfFreedom: multiplier.map((alpha) => solver.degreesOfFreedom(alpha)),
  };
}
