import {describe, expect, test} from "vitest";
import {barycentricWeights, gaussLegendre, interpolateAt} from "../../lib/numeric/quadrature.ts";
import {assertClose} from "../harness/assert-close.ts";
import {numericTable} from "../harness/reference-table.ts";

describe("Gauss–Legendre", () => {
  test("agrees with 40-digit nodes and weights up to n = 4000", () => {
    const rules = new Map<number, ReturnType<typeof gaussLegendre>>();
    for (const {n, k, node, weight} of numericTable("gauss-legendre")) {
      const rule = rules.get(n) ?? gaussLegendre(n);
      rules.set(n, rule);
      assertClose(rule.nodes[n - 1 - k], node, {factor: 2, scale: 1, because: "Newton in the angle, then one cosine"});
      assertClose(rule.weights[n - 1 - k], weight, {
        factor: 4 + 2 * Math.sqrt(n),
        scale: weight,
        because: "n rounded steps of the recurrence, adding up like a random walk",
      });
    }
  });

  test("is symmetric, ascending, positive, and its weights add up to 2", () => {
    for (const n of [1, 2, 7, 64, 333]) {
      const {nodes, weights} = gaussLegendre(n);
      let sum = 0;
      for (let k = 0; k < n; ++k) {
        sum += weights[k];
        expect(nodes[k] + nodes[n - 1 - k]).toBe(0);
        expect(weights[k]).toBe(weights[n - 1 - k]);
        expect(weights[k]).toBeGreaterThan(0);
        if (k > 0) expect(nodes[k]).toBeGreaterThan(nodes[k - 1]);
      }
      assertClose(sum, 2, {factor: 4 + Math.sqrt(n), scale: 2, because: "n weights, each as above"});
    }
  });

  test("integrates even powers up to 2n − 2 exactly, and not 2n", () => {
    for (const n of [1, 4, 9, 20]) {
      const {nodes, weights} = gaussLegendre(n);
      const moment = (power: number) => weights.reduce((sum, w, k) => sum + w * nodes[k] ** power, 0);
      for (let power = 0; power < 2 * n; power += 2)
        assertClose(moment(power), 2 / (power + 1), {
          factor: 4 * n,
          scale: 2 / (power + 1),
          because: "n positive terms",
        });
      expect(Math.abs(moment(2 * n) - 2 / (2 * n + 1))).toBeGreaterThan(1e-13);
    }
  });

  test("an order that is no whole number above zero is refused", () => {
    for (const n of [0, -1, 2.5, Number.NaN]) expect(() => gaussLegendre(n)).toThrow(/whole number/);
  });
});

test("barycentric interpolation reproduces a smooth function and its own nodes", () => {
  const rule = gaussLegendre(30);
  const values = rule.nodes.map(Math.exp);
  const barycentric = barycentricWeights(rule);
  for (const x of [-1, -0.973, -0.2, 0, 0.5, 0.999, 1, rule.nodes[3]])
    assertClose(interpolateAt(x, rule.nodes, values, barycentric), Math.exp(x), {
      factor: 60,
      scale: Math.E,
      because: "exp is resolved to 1e-30 by 30 nodes; rounding of 60 terms",
    });
});
