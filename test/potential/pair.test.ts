import fc from "fast-check";
import {describe, expect, test} from "vitest";
import type {Support} from "../../lib/geometry/interval.ts";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {amplitudeIm, amplitudeRe, kernelAt, type Response} from "../../lib/potential/kernel.ts";
import {logarithmOver, type Pole, pairOver} from "../../lib/potential/pair.ts";
import {harmonicMeasure, poissonKernel} from "../../lib/potential/poisson.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {referenceTable} from "../harness/reference-table.ts";
import {metres, unions} from "../harness/supports.ts";

const SEED = 21;
const VERTICAL: Response = {re: 1, im: 0, order: 0};

function poleAt(support: Support, x: number, z: number, response: Response): Pole {
  const [logRe, logIm, slopeRe, slopeIm] = logarithmOver(support, x, z);
  const {order} = response;
  return {x, z, aRe: amplitudeRe(response), aIm: amplitudeIm(response), order, logRe, logIm, slopeRe, slopeIm};
}

/** Two downward components. */
const entry = (support: Support, x: number, z: number, y: number, v: number): number =>
  pairOver(support, poleAt(support, x, z, VERTICAL), poleAt(support, y, v, VERTICAL));
const partsOf = (words: string): Support =>
  words.split(" ").map((part) => {
    const [from, to] = part.split(":").map(Number);
    return {from, to};
  });
/** The entry of the endless line at one chainage: the scale that rounding is relative to. */
const whole = (z: number, v: number): number => 1 / (Math.PI * (z + v));

describe("inner products of kernels", () => {
  test("agree with 60-digit quadrature: every pair of orders and directions, one place to far off, unions", () => {
    const rows = referenceTable("pair");
    expect(rows.length).toBeGreaterThan(600);
    for (const row of rows) {
      const support = partsOf(row.support);
      const poles = ["1", "2"].map((k) =>
        poleAt(support, Number(row[`x${k}`]), Number(row[`z${k}`]), {
          re: Number(row[`re${k}`]),
          im: Number(row[`im${k}`]),
          order: row[`order${k}`] === "0" ? 0 : 1,
        }),
      );
      absoluteClose(
        pairOver(support, poles[0], poles[1]),
        Number(row.value),
        1e-13 * Number(row.size),
        "promised in pair.ts; 2e-14 measured",
      );
    }
  });

  test("of any two readings agree with Gauss–Legendre quadrature over random unions", () => {
    const rule = gaussLegendre(24);
    const response = fc
      .tuple(metres(-3.2, 3.2), fc.constantFrom<0 | 1>(0, 1))
      .map(([turn, order]): Response => ({re: Math.cos(turn), im: Math.sin(turn), order}));
    const place = fc.tuple(metres(-400, 600), metres(8, 60), response);
    fc.assert(
      fc.property(unions, place, place, (support, [x, z, one], [y, v, other]) => {
        let want = 0;
        for (const {from, to} of support) {
          const elements = Math.ceil((to - from) / 8);
          const half = (to - from) / elements / 2;
          for (let e = 0; e < elements; ++e)
            for (let k = 0; k < rule.nodes.length; ++k) {
              const t = from + half * (2 * e + 1 + rule.nodes[k]);
              want +=
                half *
                rule.weights[k] *
                kernelAt(amplitudeRe(one), amplitudeIm(one), one.order, t - x, z) *
                kernelAt(amplitudeRe(other), amplitudeIm(other), other.order, t - y, v);
            }
        }
        const got = pairOver(support, poleAt(support, x, z, one), poleAt(support, y, v, other));
        const scale = z ** (-one.order - 0.5) * v ** (-other.order - 0.5);
        absoluteClose(got, want, 4e-13 * scale, "promised in pair.ts, the quadrature of the check beside it");
      }),
      {seed: SEED, numRuns: 200},
    );
  });

  test("agree with 50-digit quadrature: one place, nearly one place, apart, over ends, far off, unions", () => {
    const rows = referenceTable("gram");
    expect(rows.length).toBeGreaterThan(300);
    for (const row of rows) {
      const support = partsOf(row.support);
      const [x, z, y, v] = [row.x1, row.z1, row.x2, row.z2].map(Number);
      absoluteClose(
        entry(support, x, z, y, v),
        Number(row.value),
        1e-13 * whole(z, v),
        "promised in pair.ts on either side of the switch at a fifth of the height",
      );
    }
  });

  test("agree with Gauss–Legendre quadrature over random unions", () => {
    const rule = gaussLegendre(24);
    fc.assert(
      fc.property(unions, metres(-400, 600), metres(8, 60), metres(-400, 600), metres(8, 60), (support, x, z, y, v) => {
        let want = 0;
        for (const {from, to} of support) {
          // Elements no longer than 8 m, the least height: poles at ρ > 4, so 24 nodes leave ρ^−48 < 1e-29.
          const elements = Math.ceil((to - from) / 8);
          const half = (to - from) / elements / 2;
          for (let e = 0; e < elements; ++e)
            for (let k = 0; k < rule.nodes.length; ++k) {
              const t = from + half * (2 * e + 1 + rule.nodes[k]);
              want += half * rule.weights[k] * poissonKernel(t - x, z) * poissonKernel(t - y, v);
            }
        }
        absoluteClose(entry(support, x, z, y, v), want, 1e-13 * whole(z, v), "rounding of both");
      }),
      {seed: SEED, numRuns: 60},
    );
  });

  test("are symmetric, and mirrored with the line, to the bit", () => {
    fc.assert(
      fc.property(unions, metres(-400, 600), metres(1, 60), metres(-400, 600), metres(1, 60), (support, x, z, y, v) => {
        const mirrored = support.map(({from, to}) => ({from: -to, to: -from}));
        // Parts add up in the other order, so more than one part may differ by rounding.
        const one = support.slice(0, 1);
        const oneMirrored = mirrored.slice(0, 1);
        expect(entry(support, x, z, y, v)).toBe(entry(support, y, v, x, z));
        expect(entry(oneMirrored, -x, z, -y, v)).toBe(entry(one, x, z, y, v));
        absoluteClose(entry(mirrored, -x, z, -y, v), entry(support, x, z, y, v), 1e-14 * whole(z, v), "rounding");
      }),
      {seed: SEED},
    );
  });

  test("tend to the kernel at the sum of the heights as the support grows", () => {
    // ⟨P_z(x − ·), P_v(y − ·)⟩ over the whole boundary is P_{z+v}(x − y).
    const support = [{from: -1e7, to: 1e7}];
    for (const [x, z, y, v] of [
      [0, 20, 0, 20],
      [5, 3, -40, 60],
      [100, 1, 100.001, 1],
    ] as const)
      absoluteClose(entry(support, x, z, y, v) / poissonKernel(x - y, z + v), 1, 1e-12, "tails z v/1e21, rounding");
  });

  test("the imaginary part of L is the angle that the support subtends", () => {
    fc.assert(
      fc.property(unions, metres(-400, 600), metres(1, 60), (support, x, z) => {
        const seen = support.reduce((sum, {from, to}) => sum + harmonicMeasure(x, z, from, to), 0);
        absoluteClose(logarithmOver(support, x, z)[1] / Math.PI, seen, 1e-15, "the same angles");
      }),
      {seed: SEED},
    );
  });
});
