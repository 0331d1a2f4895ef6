import {expect, test} from "vitest";
import {secondKindImaginaryInto, secondKindWorkspace} from "../../lib/numeric/legendre-second-kind.ts";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {absoluteClose} from "../harness/assert-close.ts";

/** Im ½ ∫ P_k(t) / (z − t) dt by a rule fine enough for the pole at height y. */
function byQuadrature(x: number, y: number, count: number): Float64Array {
  const {nodes, weights} = gaussLegendre(Math.ceil(40 + 20 / y + count));
  const result = new Float64Array(count);
  nodes.forEach((t, q) => {
    const share = (-0.5 * weights[q] * y) / ((x - t) ** 2 + y * y);
    let before = 0;
    let value = 1;
    for (let k = 0; k < count; ++k) {
      result[k] += share * value;
      const next = ((2 * k + 1) * t * value - k * before) / (k + 1);
      before = value;
      value = next;
    }
  });
  return result;
}

test("Im Q_k is Neumann's integral, inside the segment, at its end, low and high", () => {
  for (const y of [0.02, 0.3, 1, 10]) {
    for (const x of [0, 0.31, -0.8, 0.999, 1, -1]) {
      const count = 30;
      const got = secondKindImaginaryInto(new Float64Array(count + 3), 3, x, y, count, secondKindWorkspace(count));
      const want = byQuadrature(x, y, count);
      expect([...got.subarray(0, 3)]).toEqual([0, 0, 0]);
      for (let k = 0; k < count; ++k)
        absoluteClose(
          got[3 + k],
          want[k],
          2e-14,
          "weights of the 1000-point rule are good to 2√n ε, on a scale of π/2",
        );
    }
  }
});
