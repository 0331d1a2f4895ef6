import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {symmetricEigen} from "../../lib/numeric/symmetric-eigen.ts";
import {dataModesOfGramInPlace, singularSystem, USABLE} from "../../lib/spectral/singular-system.ts";
import {absoluteClose} from "../harness/assert-close.ts";

describe("the singular system", () => {
  test.each([
    {rows: 40, columns: 15},
    {rows: 15, columns: 40},
    // More rows than the product of a wide matrix forms at a time.
    {rows: 70, columns: 90},
  ])("rebuilds a $rows × $columns matrix from unit modes", ({rows, columns}) => {
    const matrix = normalDeviates(seededRandom(6), rows * columns);
    const modes = singularSystem(matrix, rows, columns);
    expect(modes.count).toBe(Math.min(rows, columns));
    const rebuilt = new Float64Array(rows * columns);
    for (let k = 0; k < modes.count; ++k) {
      if (k > 0) expect(modes.eigenvalues[k]).toBeLessThanOrEqual(modes.eigenvalues[k - 1]);
      for (let i = 0; i < rows; ++i)
        for (let j = 0; j < columns; ++j)
          rebuilt[i * columns + j] +=
            Math.sqrt(modes.eigenvalues[k]) * modes.left[k * rows + i] * modes.right[k * columns + j];
      for (let l = 0; l <= k; ++l) {
        let left = 0;
        let right = 0;
        for (let i = 0; i < rows; ++i) left += modes.left[k * rows + i] * modes.left[l * rows + i];
        for (let j = 0; j < columns; ++j) right += modes.right[k * columns + j] * modes.right[l * columns + j];
        // λ of these matrices spread over less than three decades.
        absoluteClose(left, k === l ? 1 : 0, 1e-12, "squaring costs the spread of λ");
        absoluteClose(right, k === l ? 1 : 0, 1e-12, "squaring costs the spread of λ");
      }
    }
    rebuilt.forEach((entry, i) => {
      absoluteClose(entry, matrix[i], 1e-12, "squaring costs the spread of λ");
    });
  });

  test("leaves out what is rounding, and what lies below a floor", () => {
    // Rank two of five columns.
    const left = normalDeviates(seededRandom(7), 20);
    const matrix = new Float64Array(100);
    for (let i = 0; i < 20; ++i)
      for (let j = 0; j < 5; ++j) matrix[5 * i + j] = left[i] * (j + 1) + 1e-3 * left[(i + 7) % 20] * (j - 2);
    const all = singularSystem(matrix, 20, 5);
    expect(all.count).toBe(2);
    expect(all.eigenvalues[1] / all.eigenvalues[0]).toBeGreaterThan(USABLE);
    expect(singularSystem(matrix, 20, 5, 2 * all.eigenvalues[1]).count).toBe(1);
    expect(singularSystem(new Float64Array(100), 20, 5).count).toBe(0);
  });
});

test("modes of a thin Gram matrix are those of all of it", () => {
  // As fields see each other that are read a sixth of their height apart: λ falls by some e^(−π/20) a mode.
  const n = 240;
  const gram = new Float64Array(n * n);
  for (let i = 0; i < n; ++i)
    for (let j = 0; j < n; ++j) gram[i * n + j] = 1 / (1 + ((i - j + 0.2 * Math.sin(i) - 0.2 * Math.sin(j)) / 12) ** 2);
  const all = symmetricEigen(gram, n);
  const floor = 1e-8 * all.values[0];
  const {count, eigenvalues, left} = dataModesOfGramInPlace(gram.slice(), n, floor);
  expect(count).toBeLessThan(0.6 * n);
  expect(all.values[count]).toBeLessThan(1.1 * floor);
  for (let k = 0; k < count; ++k) {
    // A hundredth of the floor is left out of the trace.
    absoluteClose(eigenvalues[k], all.values[k], 0.01 * floor, "what the factor leaves out");
    for (let l = 0; l <= k; ++l) {
      let product = 0;
      for (let i = 0; i < n; ++i) product += left[k * n + i] * left[l * n + i];
      // n ε λ_0/√(λ_k λ_l), the least being the floor.
      const allowed = (n * 2 ** -52 * eigenvalues[0]) / Math.sqrt(eigenvalues[k] * eigenvalues[l]);
      absoluteClose(product, k === l ? 1 : 0, 1e-13 + allowed, "λ from a squared factor");
    }
  }
});
