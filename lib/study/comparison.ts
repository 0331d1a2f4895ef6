/** What each rule for the bound makes of one line. */
import {ReportableError} from "../errors.ts";
import type {RuleAnswer, StripMean} from "../inverse/nouns.ts";
import type {BoundRule, RuleQuestion} from "../inverse/rules/rule.ts";

/** Of the source at a multiplier: its resolution and the means of strips. */
export interface SourceAt {
  resolution(multiplier: number): number;
  stripMeans(density: Float64Array): readonly StripMean[];
}

export const comparisonOf = (rules: readonly BoundRule[], question: RuleQuestion, at: SourceAt): RuleAnswer[] =>
  rules.map((rule) => {
    const {solver} = question;
    try {
      const {multiplier, bound, reason} = rule.choose(question);
      return {
        rule: rule.name,
        reason,
        figures: {
          multiplier,
          bound,
          norm: solver.norm(multiplier),
          misfit: solver.misfit(multiplier),
          degreesOfFreedom: solver.degreesOfFreedom(multiplier),
          resolution: at.resolution(multiplier),
          strips: at.stripMeans(solver.estimate(multiplier)),
        },
      };
    } catch (error) {
      // A rule that this line gives no hold is told of; the line is answered by another.
      if (!(error instanceof ReportableError)) throw error;
      return {rule: rule.name, reason: error.message};
    }
  });
