import {expect, test} from "vitest";
import {toeplitzEigen} from "../../lib/numeric/even-odd-eigen.ts";

test("eigenvectors of a symmetric Toeplitz matrix are orthonormal and meet T u = λ u", () => {
  const n = 24;
  const diagonals = Float64Array.from({length: n}, (_, d) => 1 / (1 + 0.1 * d * d));
  const {count, values, vectors} = toeplitzEigen(diagonals, 1e-9);
  expect(count).toBeGreaterThan(5);
  const at = (k: number, i: number): number => vectors[k * n + i]!;
  const ones = [...diagonals.keys()];
  for (let k = 0; k < count; ++k) {
    if (k > 0) expect(values[k]!).toBeLessThanOrEqual(values[k - 1]!);
    for (let i = 0; i < n; ++i) {
      const image = ones.reduce((sum, j) => sum + diagonals[Math.abs(i - j)]! * at(k, j), 0);
      // Rounding of sums of 24 terms of size one.
      expect(Math.abs(image - values[k]! * at(k, i))).toBeLessThan(1e-13);
    }
    for (let l = 0; l <= k; ++l)
      expect(ones.reduce((sum, j) => sum + at(k, j) * at(l, j), 0)).toBeCloseTo(k === l ? 1 : 0, 12);
  }
});
