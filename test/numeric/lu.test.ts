/** Small systems that are not symmetric: what is multiplied is found again. */
import {expect, test} from "vitest";
import {luInPlace, luSolveInPlace} from "../../lib/numeric/lu.ts";
import {matVecInto} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";

test.each([1, 2, 5, 8])("%d unknowns", (n) => {
  const random = seededRandom(n);
  const matrix = normalDeviates(random, n * n);
  const wanted = normalDeviates(random, n);
  const right = matVecInto(new Float64Array(n), matrix, wanted, n, n);
  const factors = matrix.slice();
  const found = luSolveInPlace(right, factors, luInPlace(factors, n));
  // ε times conditions of a few hundred.
  for (let i = 0; i < n; ++i) expect(Math.abs(found[i]! - wanted[i]!)).toBeLessThan(1e-12);
});

test("a zero where the first pivot would be", () => {
  const factors = Float64Array.of(0, 2, 4, 1);
  const pivots = luInPlace(factors, 2);
  expect([...luSolveInPlace(Float64Array.of(6, 7), factors, pivots)]).toEqual([1, 3]);
});
