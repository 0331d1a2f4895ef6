/** The bound that the user gave: α ≥ 0 with ‖f‖ = M, or α = 0 where the bound does not hold the estimate back. */
import {remark} from "../../notice.ts";
import {multiplierForNorm} from "../multiplier-for.ts";
import type {BoundChoice} from "../nouns.ts";
import type {BoundRule, RuleQuestion} from "./rule.ts";

/**
 * @param text as the user wrote it
 * @param norm the bound M from the length of the support, SI·√m
 */
export function givenBound(text: string, norm: (supportLength: number) => number): BoundRule {
  return {
    name: "given",
    text,
    norm,
    choose({solver, supportLength, lines}: RuleQuestion): BoundChoice {
      const bound = norm(supportLength);
      // Pooled lines share the multiplier, and M holds for the root-mean-square of their norms.
      const multiplier = multiplierForNorm(solver, bound * Math.sqrt(lines));
      const active = multiplier > 0;
      return {
        rule: "given",
        multiplier,
        bound,
        basis: "given-bound",
        active,
        reason: active
          ? `the given bound ${text} holds: ‖f‖ = M`
          : `the given bound ${text} does not hold the estimate back: the best fit has ‖f‖ = ${(solver.norm(0) / (bound * Math.sqrt(lines))).toPrecision(3)} M`,
        notices: active
          ? []
          : [
              remark(
                "bound/not-active",
                `The bound ${text} is wider than the best-fitting source needs, so it steadies nothing and the estimate follows the noise. Give a tighter bound, or --bound discrepancy.`,
              ),
            ],
      };
    },
  };
}
