import {expect, test} from "vitest";
import {seededRandom} from "../../lib/numeric/random.ts";
import {secularRootInto} from "../../lib/numeric/secular-equation.ts";
import {assertClose} from "../harness/assert-close.ts";

/** Roots and differences d_i − λ_j of D + ρ z zᵀ. */
function roots(d: Float64Array, z2: Float64Array, rho: number): {values: Float64Array; gaps: Float64Array} {
  const k = d.length;
  const gaps = new Float64Array(k * k);
  const total = z2.reduce((sum, value) => sum + value, 0);
  const values = Float64Array.from({length: k}, (_, j) => secularRootInto(gaps, j * k, d, z2, k, j, rho, total));
  return {values, gaps};
}

test("one and two poles: closed forms", () => {
  expect(roots(Float64Array.of(3), Float64Array.of(0.25), 8).values[0]).toBe(5);
  // Eigenvalues of [[1, 0], [0, 2]] + [[1, 1], [1, 1]]: (5 ± √5)/2.
  const {values} = roots(Float64Array.of(1, 2), Float64Array.of(1, 1), 1);
  assertClose(values[0], (5 - Math.sqrt(5)) / 2, {factor: 2, scale: 2, because: "one addition to the pole"});
  assertClose(values[1], (5 + Math.sqrt(5)) / 2, {factor: 2, scale: 4, because: "one addition to the pole"});
});

test("roots interlace the poles, keep the trace, and give z back by Löwner's formula", () => {
  for (let seed = 1; seed <= 40; ++seed) {
    const {uniform} = seededRandom(seed);
    const k = 2 + Math.floor(60 * uniform());
    // Spacings and weights over fourteen decades: the hard cases are roots next to a pole.
    const d = Float64Array.from({length: k}, () => 10 ** (-13 * uniform()));
    for (let i = 1; i < k; ++i) d[i] += d[i - 1];
    const z2 = Float64Array.from({length: k}, () => 10 ** (-28 * uniform()));
    const rho = 10 ** (4 * uniform() - 2);
    const {values, gaps} = roots(d, z2, rho);
    const norm = values[k - 1];
    let trace = 0;
    for (let j = 0; j < k; ++j) {
      expect(gaps[j * k + j]).toBeLessThan(0);
      if (j < k - 1) expect(gaps[j * k + j + 1]).toBeGreaterThan(0);
      trace += values[j] - d[j] - rho * z2[j];
      let product = -gaps[j * k + j] / rho;
      for (let l = 0; l < k; ++l) if (l !== j) product *= gaps[l * k + j] / (d[j] - d[l]);
      // The rule promises z to ε of its norm, not entry by entry: hence the absolute part of the scale.
      assertClose(product, z2[j], {
        factor: 40 * k * k,
        scale: z2[j] + 2 ** -52,
        because: "Gu & Eisenstat's stopping rule: k ε, k factors",
      });
    }
    assertClose(trace, 0, {factor: 8 * k, scale: norm, because: "k roots, each ε of the norm"});
  }
});
