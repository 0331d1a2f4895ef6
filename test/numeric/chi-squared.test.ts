import {expect, test} from "vitest";
import {chiSquaredQuantile} from "../../lib/numeric/chi-squared.ts";
import {normalQuantile} from "../../lib/numeric/normal.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {numericTable} from "../harness/reference-table.ts";

test("quantiles of chi-squared against 40-digit values", () => {
  for (const row of numericTable("chi-squared")) {
    const {tail, degrees, value} = row as {tail: number; degrees: number; value: number};
    // ln of the density's front is a ln x, rounded; its error moves x by about its root-degrees part.
    const tolerance = 1e-13 + 4 * Number.EPSILON * Math.sqrt(degrees) * Math.log(degrees + 2);
    absoluteClose(chiSquaredQuantile(tail, degrees) / value, 1, tolerance, "rounding of a ln x");
  }
});

test("one degree is a squared normal deviate, two an exponential law", () => {
  for (const tail of [0.9, 0.5, 0.2, 0.05, 1e-6]) {
    absoluteClose(chiSquaredQuantile(tail, 1) / normalQuantile(tail / 2) ** 2, 1, 1e-12, "both to a few ε");
    absoluteClose(chiSquaredQuantile(tail, 2) / (-2 * Math.log(tail)), 1, 1e-12, "a closed form");
  }
});

test("arguments out of range are refused", () => {
  for (const [tail, degrees] of [
    [0, 3],
    [1, 3],
    [0.5, 0],
    [Number.NaN, 3],
    [0.5, Infinity],
  ] as const)
    expect(() => chiSquaredQuantile(tail, degrees)).toThrow(/between 0 and 1/);
});
