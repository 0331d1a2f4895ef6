import {describe, expect, test} from "vitest";
import {choleskyInPlace, choleskySolveInto, pivotedCholesky} from "../../lib/numeric/cholesky.ts";
import {crossProductInto, matVecInto, multiplyTransposedInto} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {assertClose} from "../harness/assert-close.ts";

const gram = (n: number, rows: number): Float64Array =>
  crossProductInto(new Float64Array(n * n), normalDeviates(seededRandom(n), rows * n), rows, n);

describe("Cholesky", () => {
  test("L Lᵀ = A, L lower triangular, below, at and past one panel", () => {
    for (const n of [0, 1, 2, 47, 48, 49, 150]) {
      const a = gram(n, 2 * n + 1);
      const l = choleskyInPlace(a.slice(), n);
      const back = multiplyTransposedInto(new Float64Array(n * n), l, l, n, n, n);
      const scale = a.reduce((size, value) => Math.max(size, Math.abs(value)), 1);
      for (let i = 0; i < n; ++i) {
        for (let j = 0; j < n; ++j) {
          assertClose(back[i * n + j], a[i * n + j], {factor: n + 2, scale, because: "Higham, theorem 10.3"});
          if (j > i) expect(l[i * n + j]).toBe(0);
        }
      }
    }
  });

  test("solves in place of the right-hand side", () => {
    const n = 90;
    const a = gram(n, 4 * n);
    const want = normalDeviates(seededRandom(8), n);
    const x = matVecInto(new Float64Array(n), a, want, n, n);
    choleskySolveInto(x, choleskyInPlace(a.slice(), n), x, n);
    // Condition number about (3/1)² = 9 for four times as many rows as columns.
    for (let i = 0; i < n; ++i) assertClose(x[i], want[i], {factor: 20 * n, scale: 1, because: "n ε cond"});
  });

  test("a matrix that is not positive definite is refused by its pivot", () => {
    const a = Float64Array.of(4, 2, 2, 2, 1, 1, 2, 1, 3);
    expect(() => choleskyInPlace(a, 3)).toThrow(/Pivot 2 .* is 0/);
    expect(() => choleskyInPlace(Float64Array.of(Number.NaN), 1)).toThrow(/NaN/);
  });
});

describe("pivoted Cholesky", () => {
  test("finds the rank and the matrix", () => {
    const n = 60;
    const rank = 7;
    const a = gram(n, rank);
    const found = pivotedCholesky(a, n, 1e-12);
    expect(found.rank).toBe(rank);
    expect(new Set(found.pivots).size).toBe(rank);
    const back = multiplyTransposedInto(new Float64Array(n * n), found.factor, found.factor, n, rank, n);
    for (let k = 0; k < n * n; ++k)
      assertClose(back[k], a[k], {factor: 100, scale: 30, because: "nε of entries up to 30"});
  });

  test("the remainder bounds what is missing", () => {
    const n = 40;
    const a = new Float64Array(n * n);
    for (let i = 0; i < n; ++i) for (let j = 0; j < n; ++j) a[i * n + j] = Math.exp(-((i - j) ** 2) / 50);
    const {factor, rank, remainder} = pivotedCholesky(a, n, 1e-3);
    expect(rank).toBeGreaterThan(5);
    expect(rank).toBeLessThan(n);
    const back = multiplyTransposedInto(new Float64Array(n * n), factor, factor, n, rank, n);
    let trace = 0;
    for (let i = 0; i < n; ++i) {
      trace += a[i * n + i] - back[i * n + i];
      for (let j = 0; j < n; ++j) expect(Math.abs(a[i * n + j] - back[i * n + j])).toBeLessThanOrEqual(remainder);
    }
    assertClose(remainder, trace, {factor: 10 * n, scale: n, because: "sum of n diagonal entries of one"});
  });

  test("zero has rank zero; a negative diagonal is refused", () => {
    expect(pivotedCholesky(new Float64Array(9), 3, 1e-10).rank).toBe(0);
    expect(pivotedCholesky(new Float64Array(0), 0, 1e-10).rank).toBe(0);
    expect(() => pivotedCholesky(Float64Array.of(1, 0, 0, -1), 2, 1e-10)).toThrow(/Pivot 2/);
    expect(() => pivotedCholesky(Float64Array.of(1, 0, 0, Number.NaN), 2, 1e-10)).toThrow(/NaN/);
  });
});
