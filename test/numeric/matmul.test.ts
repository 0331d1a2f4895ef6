import {describe, expect, test} from "vitest";
import {
  crossProductInto,
  matVecInto,
  matVecsInto,
  multiplyInto,
  multiplyTransposedInto,
  outerProductInto,
  transposedMatVecInto,
  transposedMatVecsInto,
} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {assertClose} from "../harness/assert-close.ts";

const deviates = (count: number, seed: number) => normalDeviates(seededRandom(seed), count);
/** Every remainder of the 2 × 4 tile, and sizes past one block of 256 and one strip of 64. */
const sizes = [
  [1, 1, 1],
  [2, 3, 4],
  [3, 5, 7],
  [5, 300, 6],
  [17, 9, 70],
  [64, 257, 65],
  [0, 4, 3],
  [3, 0, 4],
] as const;

describe("dense products", () => {
  test("agree with the definition", () => {
    for (const [m, k, n] of sizes) {
      const a = deviates(m * k, 1);
      const b = deviates(k * n, 2);
      const bt = new Float64Array(n * k);
      for (let l = 0; l < k; ++l) for (let j = 0; j < n; ++j) bt[j * k + l] = b[l * n + j];
      const c = multiplyInto(new Float64Array(m * n).fill(7), a, b, m, k, n);
      const d = multiplyTransposedInto(new Float64Array(m * n).fill(7), a, bt, m, k, n);
      for (let i = 0; i < m; ++i) {
        for (let j = 0; j < n; ++j) {
          let want = 0;
          let scale = 0;
          for (let l = 0; l < k; ++l) {
            want += a[i * k + l] * b[l * n + j];
            scale += Math.abs(a[i * k + l] * b[l * n + j]);
          }
          assertClose(c[i * n + j], want, {factor: k + 2, scale, because: "k products and sums, either way"});
          expect(d[i * n + j]).toBe(c[i * n + j]);
        }
      }
    }
  });

  test("AᵀA is the product and exactly symmetric", () => {
    for (const [m, n] of [
      [1, 1],
      [9, 70],
      [300, 13],
      [5, 130],
    ] as const) {
      const a = deviates(m * n, 3);
      const c = crossProductInto(new Float64Array(n * n), a, m, n);
      for (let i = 0; i < n; ++i) {
        for (let j = 0; j < n; ++j) {
          let want = 0;
          for (let l = 0; l < m; ++l) want += a[l * n + i] * a[l * n + j];
          assertClose(c[i * n + j], want, {factor: m + 2, scale: 10 * m, because: "m products below 10"});
          expect(c[i * n + j]).toBe(c[j * n + i]);
        }
      }
      const transposed = new Float64Array(m * n);
      for (let l = 0; l < m; ++l) for (let j = 0; j < n; ++j) transposed[j * m + l] = a[l * n + j];
      expect(outerProductInto(new Float64Array(n * n).fill(7), transposed, n, m)).toEqual(c);
    }
  });

  test("several vectors at once have the bits that each has alone", () => {
    for (const count of [1, 2, 3, 4])
      for (const [m, n] of [
        [1, 1],
        [6, 5],
        [7, 4],
        [9, 11],
      ] as const) {
        const a = deviates(m * n, 7);
        const x = deviates(count * n, 8);
        const y = deviates(count * m, 9);
        const ax = matVecsInto(new Float64Array(count * m).fill(9), a, x, m, n, count);
        const aty = transposedMatVecsInto(new Float64Array(count * n).fill(9), a, y, m, n, count);
        for (let k = 0; k < count; ++k) {
          const right = x.subarray(k * n, (k + 1) * n);
          const left = y.subarray(k * m, (k + 1) * m);
          expect(ax.subarray(k * m, (k + 1) * m)).toEqual(matVecInto(new Float64Array(m), a, right, m, n));
          expect(aty.subarray(k * n, (k + 1) * n)).toEqual(transposedMatVecInto(new Float64Array(n), a, left, m, n));
        }
      }
  });

  test("the two matrix-vector products are adjoint", () => {
    for (const [m, n] of [
      [1, 1],
      [2, 5],
      [7, 4],
      [33, 50],
      [0, 3],
    ] as const) {
      const a = deviates(m * n, 4);
      const x = deviates(n, 5);
      const y = deviates(m, 6);
      const ax = matVecInto(new Float64Array(m).fill(9), a, x, m, n);
      const aty = transposedMatVecInto(new Float64Array(n).fill(9), a, y, m, n);
      const left = ax.reduce((sum, value, i) => sum + value * y[i], 0);
      const right = aty.reduce((sum, value, j) => sum + value * x[j], 0);
      assertClose(left, right, {factor: m + n, scale: 10 * (m * n + 1), because: "mn terms below 10 each"});
      for (let i = 0; i < m; ++i) {
        let want = 0;
        for (let j = 0; j < n; ++j) want += a[i * n + j] * x[j];
        assertClose(ax[i], want, {factor: n + 2, scale: 10 * n, because: "n products below 10"});
      }
      for (let j = 0; j < n; ++j) {
        let want = 0;
        for (let i = 0; i < m; ++i) want += a[i * n + j] * y[i];
        assertClose(aty[j], want, {factor: m + 2, scale: 10 * m + 1, because: "m products below 10"});
      }
    }
  });
});
