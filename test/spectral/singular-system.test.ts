import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {singularSystem, USABLE} from "../../lib/spectral/singular-system.ts";
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
