/**
 * The discrepancy rule with the one-sided target: the largest multiplier whose misfit the noise explains.
 * Source: Morozov, Soviet Math. Dokl. 7 (1966) 414 (from memory); the target is discussed in `misfit-range.ts`.
 */
import {doubt, type Notice} from "../../notice.ts";
import {apparentNoise, chanceRatio} from "../apparent-noise.ts";
import {misfitLimit, misfitTarget} from "../misfit-range.ts";
import {multiplierForMisfit} from "../multiplier-for.ts";
import type {BoundChoice} from "../nouns.ts";
import type {BoundRule, RuleQuestion} from "./rule.ts";

/** The intervals of a rule take twice the norm of its estimate; an assumption, said wherever they are printed. */
export const ASSUMED_FACTOR = 2;

export const discrepancy: BoundRule = {
  name: "discrepancy",
  text: "discrepancy",
  choose({solver, largestNorm}: RuleQuestion): BoundChoice {
    const target = misfitTarget(solver.data);
    const found = multiplierForMisfit(solver, target);
    const apparent = apparentNoise(solver);
    const notices: Notice[] = [];
    let multiplier: number;
    let reason: string;
    if (found === undefined) {
      multiplier = solver.least;
      reason = `no source on this support reaches the misfit target ${target.toPrecision(4)}; the least multiplier that double precision serves was taken`;
      notices.push(
        doubt(
          "bound/target-out-of-reach",
          `The best misfit on this support is ${solver.misfit(0).toPrecision(4)}, above the target ${target.toPrecision(4)}${solver.misfit(0) > misfitLimit(solver.data) ? " by far" : ""}: the noise is given too small, the support misses sources, or the ground is not two-dimensional. Give a larger --noise or a wider --support.`,
        ),
      );
    } else if (found === Infinity) {
      multiplier = Infinity;
      reason = `the readings lie within the noise of no source at all (misfit ${solver.misfit(Infinity).toPrecision(4)}, target ${target.toPrecision(4)})`;
      notices.push(
        doubt(
          "bound/nothing-but-noise",
          "The noise alone explains the readings, so the estimate is zero. Its intervals say how strong a source could hide. If an anomaly is plain to see, --noise is too large.",
        ),
      );
    } else if (apparent !== undefined && apparent.multiplier > found) {
      // Closer than this the estimate would follow noise: a noise given 10 % too small already asks for that.
      multiplier = apparent.multiplier;
      reason = `the most likely multiplier: to reach the misfit ${target.toPrecision(4)} that the noise asks for, the estimate would follow noise (the readings look ${apparent.ratio.toPrecision(3)} times as noisy)`;
      if (apparent.ratio > chanceRatio(solver.data))
        notices.push(
          doubt(
            "noise/contradicted",
            `The noise seems to be ${apparent.ratio.toPrecision(3)} times what was given: no source on this support explains the readings so closely without following their noise, so they were left with a misfit of ${solver.misfit(multiplier).toPrecision(4)} for ${solver.data} readings. The intervals rest on the noise given, and are too narrow if it is larger. Give a larger --noise.`,
          ),
        );
    } else {
      multiplier = found;
      reason = `largest multiplier whose misfit the noise explains: ${target.toPrecision(4)} = N + 2√(2N) for N = ${solver.data}`;
    }
    // A source of whitened response √(2√(2N)) could hide in the noise: no smaller bound is assumed.
    const hidden = solver.largest > 0 ? Math.sqrt((2 * Math.sqrt(2 * solver.data)) / solver.largest) : 0;
    const bound = ASSUMED_FACTOR * Math.max(largestNorm(multiplier), hidden);
    return {rule: "discrepancy", multiplier, bound, basis: "assumed-bound", active: false, reason, notices};
  },
};
