/** Inverses of symmetric Toeplitz matrices, against Cholesky, closed forms and their own definition. */
import {describe, expect, test} from "vitest";
import {choleskyInPlace, choleskySolveInto} from "../../lib/numeric/cholesky.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {toeplitzInverse} from "../../lib/numeric/toeplitz-inverse.ts";
import {absoluteClose} from "../harness/assert-close.ts";

/** Inner products of readings one spacing apart at a height of so many spacings, and a ridge. */
const smoothing = (height: number, ridge: number, length: number): Float64Array =>
  Float64Array.from(
    {length},
    (_, k) => (2 * height) / (Math.PI * (k * k + 4 * height * height)) + (k === 0 ? ridge : 0),
  );

const dense = (column: Float64Array, n: number): Float64Array =>
  Float64Array.from({length: n * n}, (_, e) => column[Math.abs(Math.floor(e / n) - (e % n))]);

const norm = (a: Float64Array): number => Math.sqrt(a.reduce((sum, value) => sum + value * value, 0));

describe("solutions", () => {
  test.each([
    [1, 5, 1e-2],
    [2, 5, 1e-2],
    [37, 5, 1e-4],
    [300, 5, 1e-8],
    [300, 20, 1e-8],
  ])("are as near as those of Cholesky: order %d, height %d, ridge %d", (n, height, ridge) => {
    const column = smoothing(height, ridge, n);
    const factor = choleskyInPlace(dense(column, n), n);
    const right = normalDeviates(seededRandom(n), 2 * n);
    const [a, b] = [right.subarray(0, n), right.subarray(n)];
    const [u, v] = [new Float64Array(n), new Float64Array(n)];
    toeplitzInverse(column).solvePairInto(u, v, a, b);
    for (const [found, given] of [
      [u, a],
      [v, b],
    ]) {
      const expected = choleskySolveInto(new Float64Array(n), factor, given, n);
      const error = norm(found.map((value, i) => value - expected[i])) / norm(expected);
      // Condition (1 + ridge)/ridge times rounding: what both lose; measured 20 ε/ridge at most.
      expect(error).toBeLessThan((100 * Number.EPSILON * (1 + ridge)) / ridge);
    }
  });

  test.each([1e-4, 1e-9])(
    "by gradients beyond the recursion: residuals are rounding of the product, ridge %d",
    (ridge) => {
      const n = 5000;
      const column = smoothing(10, ridge, n);
      const a = normalDeviates(seededRandom(5), n);
      const u = new Float64Array(n);
      const v = new Float64Array(n);
      toeplitzInverse(column).solvePairInto(
        u,
        v,
        a,
        a.map((value) => -2 * value),
      );
      const size = norm(u);
      for (const row of [0, 1, 777, 2500, n - 1]) {
        let sum = a[row];
        for (let j = 0; j < n; ++j) sum -= column[Math.abs(row - j)] * u[j];
        absoluteClose(sum, 0, 100 * Number.EPSILON * size, "‖T‖ ≤ 1 times the solution, rounded");
      }
      absoluteClose(norm(v) / size, 2, 1e-9, "twice the right-hand side");
    },
  );

  test("may be written over the right-hand sides", () => {
    const n = 40;
    const inverse = toeplitzInverse(smoothing(3, 1e-3, n));
    const right = normalDeviates(seededRandom(1), 2 * n);
    const [a, b] = [right.slice(0, n), right.slice(n)];
    const [u, v] = [new Float64Array(n), new Float64Array(n)];
    inverse.solvePairInto(u, v, a, b);
    inverse.solvePairInto(a, b, a, b);
    expect([a, b]).toEqual([u, v]);
  });
});

describe("diagonals of the inverse", () => {
  test("are those of solutions for unit vectors", () => {
    const n = 60;
    const inverse = toeplitzInverse(smoothing(4, 1e-3, n));
    for (const offset of [0, 1, 7, 59]) {
      const diagonal = inverse.diagonal(offset);
      expect(diagonal.length).toBe(n - offset);
      for (let i = 0; i + offset < n; i += 13) {
        const unit = new Float64Array(n);
        unit[i] = 1;
        const [u, v] = [new Float64Array(n), new Float64Array(n)];
        inverse.solvePairInto(u, v, unit, unit);
        absoluteClose(diagonal[i], u[i + offset], 1e-9 * u[i], "condition 1e3 times rounding, 1e6 to spare");
      }
    }
  });

  test("are the tridiagonal ones of an autoregression, whose inverse is known", () => {
    // T_ij = ρ^|i−j|: its inverse has 1, 1 + ρ², …, 1 and −ρ beside, over 1 − ρ².
    const rho = 0.6;
    const n = 25;
    const inverse = toeplitzInverse(Float64Array.from({length: n}, (_, k) => rho ** k));
    const over = 1 - rho * rho;
    inverse.diagonal(0).forEach((value, i) => {
      absoluteClose(value, (i === 0 || i === n - 1 ? 1 : 1 + rho * rho) / over, 1e-13, "rounding of sums of 25 terms");
    });
    inverse.diagonal(1).forEach((value) => {
      absoluteClose(value, -rho / over, 1e-13, "as above");
    });
    inverse.diagonal(2).forEach((value) => {
      absoluteClose(value, 0, 1e-13, "as above");
    });
  });
});

test("a matrix that is not positive definite is refused", () => {
  expect(() => toeplitzInverse(Float64Array.of(1, 2, 1))).toThrow(
    expect.objectContaining({code: "numeric/not-positive-definite"}),
  );
});
