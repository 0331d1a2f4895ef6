/** Answers by one rule and has others set beside it; what these come to is worked out where the line is studied. */
import {InputError} from "../../errors.ts";
import type {BoundRule} from "./rule.ts";

/** @param rules the first gives the answer */
export const compareRules = (rules: readonly BoundRule[]): BoundRule => ({
  name: "compare",
  text: "compare",
  modes: true,
  compared: rules,
  choose(question) {
    if (question.places === undefined)
      throw new InputError(
        "bound/compare-grid",
        "--bound compare sets rules side by side for one line at a time, and the survey is a grid with one multiplier for all rows. Give --bound discrepancy, corner or balance, or take lines with --profiles FILE.geojson.",
      );
    return rules[0].choose(question);
  },
});
