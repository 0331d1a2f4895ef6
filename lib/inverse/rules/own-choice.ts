/** What all rules share that choose for themselves: where they stop, what bound is then assumed, which doubts go with it. */
import {doubt, type Notice} from "../../notice.ts";
import type {Solver} from "../../solvers/solver.ts";
import {type ApparentNoise, apparentNoise, chanceRatio} from "../apparent-noise.ts";
import {assumedBound} from "../assumed-bound.ts";
import {misfitTarget} from "../misfit-range.ts";
import type {BoundChoice} from "../nouns.ts";
import type {RuleQuestion} from "./rule.ts";

/** What a rule came to, before any bound is assumed. */
export interface Found {
  readonly multiplier: number;
  readonly reason: string;
  readonly notices?: readonly Notice[];
}

export function assumedChoice(rule: string, question: RuleQuestion, found: Found): BoundChoice {
  const {multiplier, reason, notices = []} = found;
  const bound = assumedBound(question, multiplier);
  return {rule, multiplier, bound, basis: "assumed-bound", active: false, reason, notices};
}

/** No source at all where the noise alone explains the readings; undefined where it does not. */
export function nothingButNoise(solver: Solver): Found | undefined {
  const target = misfitTarget(solver.data);
  if (!(solver.misfit(Infinity) <= target)) return undefined;
  return {
    multiplier: Infinity,
    reason: `the readings lie within the noise of no source at all (misfit ${solver.misfit(Infinity).toPrecision(4)}, target ${target.toPrecision(4)})`,
    notices: [
      doubt(
        "bound/nothing-but-noise",
        "The noise alone explains the readings, so the estimate is zero. Its intervals say how strong a source could hide. If an anomaly is plain to see, --noise is too large.",
      ),
    ],
  };
}

/** A doubt where the readings contradict the noise given, by more than chance. */
export function noiseContradicted(solver: Solver, apparent: ApparentNoise | undefined, multiplier: number): Notice[] {
  if (apparent === undefined || !(apparent.ratio > chanceRatio(solver.data))) return [];
  return [
    doubt(
      "noise/contradicted",
      `The noise seems to be ${apparent.ratio.toPrecision(3)} times what was given: no source on this support explains the readings so closely without following their noise, so they were left with a misfit of ${solver.misfit(multiplier).toPrecision(4)} for ${solver.data} readings. The intervals rest on the noise given, and are too narrow if it is larger. Give a larger --noise.`,
    ),
  ];
}

/** What a rule took, held at the most likely multiplier where it would go there or below: closer, the estimate follows noise. */
export function unlessChasingNoise(solver: Solver, found: Found): Found {
  const apparent = apparentNoise(solver);
  const held = apparent !== undefined && apparent.multiplier >= found.multiplier;
  const multiplier = held ? apparent.multiplier : found.multiplier;
  const notices = [...(found.notices ?? []), ...noiseContradicted(solver, apparent, multiplier)];
  if (!held) return {...found, notices};
  return {
    multiplier,
    reason: "the most likely multiplier: where this rule leads, below it, the estimate would follow noise",
    notices,
  };
}
