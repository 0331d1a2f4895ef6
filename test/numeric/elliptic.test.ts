import {describe, expect, test} from "vitest";
import {completeEllipticK, ellipticKOfComplement} from "../../lib/numeric/elliptic.ts";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {assertClose} from "../harness/assert-close.ts";

describe("complete elliptic integral of the first kind", () => {
  test("has its classical values", () => {
    expect(completeEllipticK(0)).toBe(Math.PI / 2);
    // DLMF 19.6.2 and 23.5: K(1/√2) = Γ(1/4)² / (4√π) = 1.85407467730137191843…
    assertClose(completeEllipticK(Math.SQRT1_2), 1.8540746773013719, {factor: 4, scale: 2, because: "a few roundings"});
  });

  test("is the integral", () => {
    const {nodes, weights} = gaussLegendre(60);
    for (const k of [0.1, 0.5, 0.8]) {
      const want = nodes.reduce((sum, x, i) => {
        const sine = k * Math.sin((Math.PI / 4) * (x + 1));
        return sum + ((Math.PI / 4) * weights[i]) / Math.sqrt((1 - sine) * (1 + sine));
      }, 0);
      assertClose(completeEllipticK(k), want, {factor: 40, scale: want, because: "60 positive terms"});
    }
  });

  test("near one it follows ln(4/k′)", () => {
    for (const complement of [1e-10, 1e-150])
      assertClose(ellipticKOfComplement(complement), Math.log(4 / complement), {
        factor: 8,
        scale: Math.log(4 / complement),
        because: "the next term is of order k′² ln k′",
      });
  });
});
