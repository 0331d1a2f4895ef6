import {describe, expect, test} from "vitest";
import {multiplyTransposedInto} from "../../lib/numeric/matmul.ts";
import {
  factorGram,
  factorTimes,
  factorTimesRows,
  factorTransposedTimes,
  lowRankFactorInPlace,
  pivotedFactorInPlace,
} from "../../lib/numeric/pivoted-factor.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {symmetricEigenvalues} from "../../lib/numeric/symmetric-eigen.ts";
import {assertClose} from "../harness/assert-close.ts";

/** Places h apart see each other by the Poisson kernel at height 2: eigenvalues fall as e^(−2πk/(nh)·2). */
function smooth(n: number, spacing: number): Float64Array {
  const g = new Float64Array(n * n);
  for (let i = 0; i < n; ++i)
    for (let j = 0; j < n; ++j) g[i * n + j] = 4 / (4 + (spacing * (i - j) * (1 + 1e-4 * (i + j))) ** 2);
  return g;
}

const N = 400;

describe("G ≈ F Fᵀ", () => {
  const g = smooth(N, 0.1);
  const factor = lowRankFactorInPlace(g.slice(), N)!;

  test("is found where much of G is rounding, and is G to that", () => {
    expect(factor.rank).toBeLessThan(0.8 * N);
    const rows = new Float64Array(N * factor.rank);
    for (let k = 0; k < factor.rank; ++k)
      for (let i = 0; i < N; ++i) rows[factor.order[i] * factor.rank + k] = factor.transposed[k * N + i];
    const rebuilt = multiplyTransposedInto(new Float64Array(N * N), rows, rows, N, factor.rank, N);
    const norm = symmetricEigenvalues(g, N)[0];
    // The diagonal of what is left adds up to √N ε‖G‖, and no entry is larger; the factor rounds as often as it has columns.
    rebuilt.forEach((entry, at) => {
      assertClose(entry, g[at], {factor: 2 * Math.sqrt(N), scale: norm, because: "Higham, §10.3"});
    });
  });

  test("FᵀF has the eigenvalues of G", () => {
    const gram = factorGram(factor);
    const own = symmetricEigenvalues(gram, factor.rank);
    const all = symmetricEigenvalues(g, N);
    for (let k = 0; k < N; ++k)
      assertClose(own[k] ?? 0, all[k], {factor: 30 + N, scale: all[0], because: "two matrices, each nε‖G‖"});
  });

  test("its products are those with its rows", () => {
    const random = seededRandom(3);
    const x = normalDeviates(random, N);
    const y = normalDeviates(random, 2 * factor.rank);
    const both = factorTimesRows(factor, y, 2);
    const one = factorTimes(factor, y.subarray(0, factor.rank));
    const across = factorTransposedTimes(factor, x);
    let left = 0;
    let right = 0;
    for (let i = 0; i < N; ++i) {
      left += x[i] * one[i];
      assertClose(both[i], one[i], {factor: N, scale: 20, because: "two orders of a sum of N terms below 20"});
    }
    for (let k = 0; k < factor.rank; ++k) right += across[k] * y[k];
    assertClose(left, right, {factor: N * N, scale: 20, because: "xᵀ(F y) = (Fᵀx)ᵀ y, N² terms below 20"});
    expect(Math.abs(left)).toBeGreaterThan(1);
  });

  test("is not sought where places hardly see each other, nor of a small matrix", () => {
    expect(lowRankFactorInPlace(smooth(N, 3), N)).toBeUndefined();
    expect(lowRankFactorInPlace(smooth(150, 0.1), 150)).toBeUndefined();
    expect(lowRankFactorInPlace(new Float64Array(N * N), N)?.rank).toBe(0);
  });
});

test("stops where the trace that is left may be left out", () => {
  const g = smooth(N, 0.1);
  const negligible = 1e-6 * g[0];
  const {rank, transposed} = lowRankFactorInPlace(g.slice(), N, negligible)!;
  const traceOf = (columns: number): number => {
    let sum = 0;
    for (let at = 0; at < columns * N; ++at) sum += transposed[at] ** 2;
    return sum;
  };
  expect(N - traceOf(rank)).toBeLessThan(negligible);
  // One column fewer would not do.
  expect(N - traceOf(rank - 1)).toBeGreaterThan(negligible);
});

test("the largest remaining diagonal entry is the next pivot", () => {
  // diag(1, 9, 4): no two rows see each other.
  const {rank, order, transposed} = pivotedFactorInPlace(Float64Array.of(1, 0, 0, 0, 9, 0, 0, 0, 4), 3, 0);
  expect([rank, ...order]).toEqual([3, 1, 2, 0]);
  expect([...transposed]).toEqual([3, 0, 0, 0, 2, 0, 0, 0, 1]);
  const rankOne = pivotedFactorInPlace(Float64Array.of(1, 0, 0, 2, 4, 0, 3, 6, 9), 3, 1e-12);
  expect([rankOne.rank, ...rankOne.transposed]).toEqual([1, 3, 2, 1]);
});
