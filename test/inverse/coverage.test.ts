/** Measured coverage of every kind of interval against what is stated, on truths made in the continuum. */
import {describe, expect, test} from "vitest";
import {absoluteClose} from "../harness/assert-close.ts";
import {binomialLimits} from "../harness/binomial-limits.ts";
import {cellsOf, faultOf, LEVELS} from "../harness/coverage.ts";
import {KINDS, SET_UPS} from "../harness/coverage-kinds.ts";
import {numericTable} from "../harness/reference-table.ts";

describe("limits of a share", () => {
  test.each(numericTable("binomial-limits"))(
    "agree with beta quantiles: $successes of $trials at $confidence",
    ({successes, trials, confidence, lower, upper}) => {
      const found = binomialLimits(successes, trials, confidence);
      // 2,000 terms by products of ratios: a rounding each, in a tail whose logarithm is of size 10.
      absoluteClose(found.lower, lower, 1e-9, "rounding of 2,000 steps");
      absoluteClose(found.upper, upper, 1e-9, "rounding of 2,000 steps");
    },
  );
});

/** A slice of what `npm run bench -- coverage` measures in full: every kind, every set-up and every level, twice or more. */
const SLICE = SET_UPS.flatMap((setUp, s) =>
  KINDS.map((kind, k) => ({setUp, kind, level: LEVELS[(s + k) % LEVELS.length], seed: 1000 * s + k})),
).filter((_, place) => place % 3 === 0);

describe("coverage over 2,000 draws", () => {
  test.each(SLICE)("of the $kind.name: $setUp.name, stated $level", ({setUp, kind, level, seed}) => {
    for (const cell of cellsOf(kind, setUp, level, seed)) {
      // Some hundred cells here, each with a chance of 1e-4 on either side.
      expect(faultOf(cell), `${cell.family.name}: ${cell.share}`).toBeUndefined();
      // ‖q‖² less what is explained cancels; modes left out count as bias.
      expect(cell.biasRatio).toBeLessThan(1 + 1e-4);
      // Windows of a level line share the modes of an endless support, which states up to 4e-4 more than there is.
      expect(cell.biasRatio).toBeGreaterThan(1 - (setUp.name.includes("windows") ? 1e-3 : 1e-4));
    }
  });

  test("falls short where the truth is stronger than the bound: that is what the bound buys", () => {
    const cells = cellsOf(KINDS[0], SET_UPS[1], 0.95, 5);
    const share = (name: string) => cells.find(({family}) => family.name === name)!.share;
    expect(share("worst, +")).toBeGreaterThan(0.92);
    expect(share("worst at 2 M")).toBeLessThan(0.5);
    expect(share("worst at 4 M")).toBeLessThan(0.5);
  });
});
