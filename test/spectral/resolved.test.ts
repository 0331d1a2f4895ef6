import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {poissonRowInto} from "../../lib/potential/poisson.ts";
import {resolved} from "../../lib/spectral/resolved.ts";
import {dataCoefficients, singularSystem, USABLE} from "../../lib/spectral/singular-system.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";

/** Stations a tenth of their height apart, so that much of what they read is alike, and panels as wide or wider. */
function line(rows: number, columns: number): Float64Array {
  const edges = Float64Array.from({length: columns + 1}, (_, j) => (j * rows) / columns);
  const matrix = new Float64Array(rows * columns);
  for (let i = 0; i < rows; ++i)
    poissonRowInto(matrix, i * columns, edges, i + 0.2 * Math.sin(7 * i), 10 + Math.sin(i / 40));
  return matrix;
}

describe.each([
  {kind: "more rows than columns", rows: 90, columns: 40},
  {kind: "more columns than rows", rows: 40, columns: 90},
  {kind: "many alike", rows: 400, columns: 400},
])("the normal equation without modes: $kind", ({rows, columns}) => {
  const matrix = line(rows, columns);
  const random = seededRandom(11);
  const data = normalDeviates(random, rows).map((value, i) => 0.01 * value + Math.sin(i / 25));
  const found = resolved(matrix, rows, columns, data);
  const modes = singularSystem(matrix, rows, columns);
  const coefficients = dataCoefficients(modes, data);
  const largest = modes.eigenvalues[0];
  const sum = (
    of: (lambda: number, energy: number) => number,
    {eigenvalues}: {eigenvalues: Float64Array},
    energies: Float64Array,
  ) => eigenvalues.reduce((total, lambda, k) => total + of(lambda, energies[k]), 0);

  test("has the eigenvalues", () => {
    expect(Math.abs(found.count - modes.count)).toBeLessThanOrEqual(1);
    for (let k = 0; k < Math.min(found.count, modes.count); ++k)
      assertClose(found.eigenvalues[k], modes.eigenvalues[k], {
        ...{factor: 30 + rows, scale: largest, because: "two Gram matrices, each nε‖G‖"},
      });
  });

  test("has the energies that fit and norm are made of", () => {
    const squares = coefficients.map((c) => c * c);
    for (const share of [1e-8, 1e-5, 1e-2]) {
      const alpha = share * largest;
      const fitted = (lambda: number, energy: number): number => energy * (1 - (alpha / (lambda + alpha)) ** 2);
      const norm = (lambda: number, energy: number): number => (energy * lambda) / (lambda + alpha) ** 2;
      for (const of of [fitted, norm]) {
        const expected = sum(of, modes, squares);
        absoluteClose(sum(of, found, found.energies) / expected, 1, 1e-14 / share + 1e-10, "nε over the multiplier");
      }
    }
  });

  test("solves at every multiplier, without the modes and with them", () => {
    const floor = 10 * USABLE * largest;
    for (const share of [1e-9, 2e-7, 1e-4, 1]) {
      const alpha = share * largest;
      const expected = new Float64Array(columns);
      coefficients.forEach((c, k) => {
        const weight = (Math.sqrt(modes.eigenvalues[k]) * c) / (modes.eigenvalues[k] + alpha);
        for (let j = 0; j < columns; ++j) expected[j] += weight * modes.right[k * columns + j];
      });
      const size = Math.max(...expected.map(Math.abs));
      found.estimate(alpha, floor).forEach((value, j) => {
        // Of the modes kept nothing is left out; the others add at most a noise of 0.01 √USABLE over the multiplier.
        const others = (0.01 * Math.sqrt(USABLE * largest * rows)) / (alpha * size);
        absoluteClose(value / size, expected[j] / size, 1e-14 / share + 1e-10 + others, "nε over the multiplier");
      });
    }
  });

  test("works out the modes when asked", () => {
    const {left, count, eigenvalues} = found.modes();
    const energies = dataCoefficients(found.modes(), data).map((c) => c * c);
    for (let k = 0; k < count; ++k)
      if (eigenvalues[k] > 1e-6 * largest)
        absoluteClose(energies[k], found.energies[k], 1e-7 * (1 + found.energies[k]), "ελ₀/λ over the gaps");
    let square = 0;
    for (let i = 0; i < rows; ++i) square += left[i] * left[i];
    assertClose(square, 1, {factor: rows, scale: 1, because: "a unit vector"});
  });
});
