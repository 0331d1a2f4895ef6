/**
 * The discrepancy rule with the one-sided target: the largest multiplier whose misfit the noise explains.
 * Source: Morozov, Soviet Math. Dokl. 7 (1966) 414 (from memory); the target is discussed in `misfit-range.ts`.
 */
import {doubt} from "../../notice.ts";
import {apparentNoise} from "../apparent-noise.ts";
import {misfitLimit, misfitTarget} from "../misfit-range.ts";
import {multiplierForMisfit} from "../multiplier-for.ts";
import type {BoundChoice} from "../nouns.ts";
import {assumedChoice, type Found, noiseContradicted, nothingButNoise} from "./own-choice.ts";
import type {BoundRule, RuleQuestion} from "./rule.ts";

export const discrepancy: BoundRule = {
  name: "discrepancy",
  text: "discrepancy",
  choose(question: RuleQuestion): BoundChoice {
    return assumedChoice("discrepancy", question, nothingButNoise(question.solver) ?? smoothest(question));
  },
};

function smoothest({solver}: RuleQuestion): Found {
  const target = misfitTarget(solver.data);
  const found = multiplierForMisfit(solver, target);
  const apparent = apparentNoise(solver);
  if (found === undefined)
    return {
      multiplier: apparent?.multiplier ?? solver.least,
      reason: `${apparent === undefined ? "the least multiplier that double precision serves" : "the most likely multiplier"}: no source on this support reaches the misfit target ${target.toPrecision(4)}`,
      notices: [
        doubt(
          "bound/target-out-of-reach",
          `The best misfit on this support is ${solver.misfit(0).toPrecision(4)}, above the target ${target.toPrecision(4)}${solver.misfit(0) > misfitLimit(solver.data) ? " by far" : ""}: the noise is given too small, the support misses sources, or the ground is not two-dimensional. Give a larger --noise or a wider --support.`,
        ),
      ],
    };
  // Closer than this the estimate would follow noise: a noise given 10 % too small already asks for that.
  if (apparent !== undefined && apparent.multiplier > found)
    return {
      multiplier: apparent.multiplier,
      reason: `the most likely multiplier: to reach the misfit ${target.toPrecision(4)} that the noise asks for, the estimate would follow noise (the readings look ${apparent.ratio.toPrecision(3)} times as noisy)`,
      notices: noiseContradicted(solver, apparent, apparent.multiplier),
    };
  return {
    multiplier: found,
    reason: `largest multiplier whose misfit the noise explains: ${target.toPrecision(4)} = N + 2√(2N) for N = ${solver.data}`,
  };
}
