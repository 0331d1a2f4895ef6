import {describe, expect, test} from "vitest";
import {toeplitzProduct} from "../../lib/numeric/fft.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {assertClose} from "../harness/assert-close.ts";

describe("toeplitzProduct", () => {
  test("agrees with the dense product, square and not, and its transpose", () => {
    for (const [rows, columns] of [
      [1, 1],
      [1, 4],
      [5, 1],
      [8, 8],
      [9, 8],
      [33, 70],
      [100, 3],
    ] as const) {
      const random = seededRandom(rows * 1000 + columns);
      const column = normalDeviates(random, rows);
      const row = normalDeviates(random, columns);
      row[0] = column[0];
      const t = (i: number, j: number) => (i >= j ? column[i - j] : row[j - i]);
      const product = toeplitzProduct(column, row);
      const x = normalDeviates(random, columns);
      const u = normalDeviates(random, rows);
      const y = product.applyInto(new Float64Array(rows), x);
      const v = product.applyTransposeInto(new Float64Array(columns), u);
      const scale = 4 * (rows + columns);
      const how = {factor: 20, scale, because: "a few ε log₂ n of the sum of |x|, entries below 4"};
      for (let i = 0; i < rows; ++i)
        assertClose(
          y[i],
          x.reduce((sum, value, j) => sum + t(i, j) * value, 0),
          how,
        );
      for (let j = 0; j < columns; ++j)
        assertClose(
          v[j],
          u.reduce((sum, value, i) => sum + t(i, j) * value, 0),
          how,
        );
    }
  });

  test("⟨Tx, u⟩ = ⟨x, Tᵀu⟩, in place as well", () => {
    const random = seededRandom(11);
    const n = 200;
    const kernel = Float64Array.from({length: n}, (_, k) => 1 / (1 + k * k));
    const {applyInto, applyTransposeInto} = toeplitzProduct(
      kernel,
      kernel.map((value, k) => value * (k > 3 ? 0.5 : 1)),
    );
    const x = normalDeviates(random, n);
    const u = normalDeviates(random, n);
    const y = applyInto(new Float64Array(n), x);
    const v = applyTransposeInto(new Float64Array(n), u);
    const dot = (a: Float64Array, b: Float64Array) => a.reduce((sum, value, i) => sum + value * b[i], 0);
    assertClose(dot(y, u), dot(x, v), {factor: 50, scale: n, because: "n products of order one"});
    const inPlace = x.slice();
    expect(applyInto(inPlace, inPlace)).toEqual(y);
  });
});
