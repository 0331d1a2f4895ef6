/** A cubic is found again from four of its points, and between more of a smooth function. */
import {test} from "vitest";
import {polynomialThrough} from "../../lib/numeric/polynomial-through.ts";
import {absoluteClose} from "../harness/assert-close.ts";

test("four points give their cubic", () => {
  const cubic = (t: number): number => 2 - t + 0.5 * t ** 3;
  const x = [-1, 0.3, 2, 5];
  const through = polynomialThrough(x, x.map(cubic));
  for (const t of [-2, 0, 1.7, 6, ...x])
    absoluteClose(through(t), cubic(t), 1e-13 * 100, "rounding of values up to 100");
});
