/** The field of a density on panels at any height: exact over panels, continuous down to the boundary. */
import {describe, expect, test} from "vitest";
import {levelRowInto} from "../../lib/continuation/field-on-level.ts";
import {boundaryAt} from "../../lib/geometry/boundary-line.ts";
import type {Support} from "../../lib/geometry/interval.ts";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {type Panels, panelsOn} from "../../lib/operators/panels.ts";
import {amplitudeIm, amplitudeRe, kernelAt} from "../../lib/potential/kernel.ts";
import {harmonicMeasure, poissonKernel} from "../../lib/potential/poisson.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {VERTICAL} from "../harness/interval-case.ts";
import {evenly} from "../harness/synthetic-line.ts";

const parts: Support = [
  {from: -20, to: 40},
  {from: 50, to: 71},
];
const panels = panelsOn(parts, 3);
const density = panels.centre.map((x) => Math.cos(x / 13) + 0.02 * x);

function field(at: Panels, f: Float64Array, x: number, z: number): number {
  const row = levelRowInto(new Float64Array(at.count), 0, at, x, 0, z, VERTICAL);
  return row.reduce((sum, entry, j) => sum + entry * f[j], 0);
}

/** The broken line through the panel centres, level beyond the outermost, zero off the support. */
function brokenLine(at: Panels, f: Float64Array, t: number): number {
  for (const {interval, first, count} of at.components) {
    if (t < interval.from || t > interval.to) continue;
    const place = Math.min(Math.max((t - at.centre[first]) / at.width[first], 0), count - 1);
    const left = Math.min(Math.floor(place), count - 2);
    return f[first + left] * (1 - place + left) + f[first + left + 1] * (place - left);
  }
  return 0;
}

describe("the field on a level", () => {
  test("above half a panel's width is that of constant densities, panel by panel", () => {
    for (const [x, z] of [
      [5, 1.5],
      [44, 10],
      [-300, 40],
    ] as const) {
      const want = density.reduce((sum, f, j) => sum + f * harmonicMeasure(x, z, panels.from[j], panels.to[j]), 0);
      absoluteClose(field(panels, density, x, z), want, 1e-14, "the same sum");
    }
  });

  test("below it is that of the broken line, by quadrature", () => {
    const rule = gaussLegendre(16);
    for (const z of [1.4, 0.3, 0.02])
      for (const x of [-21, -20, -18.5, 3.2, 39.9, 45, 50, 60.5, 100]) {
        let want = 0;
        for (let j = 0; j < panels.count; ++j)
          for (const [a, b] of [
            [panels.from[j], panels.centre[j]],
            [panels.centre[j], panels.to[j]],
          ]) {
            // Elements of a sixtieth of a panel and the nearest pole 0.02 off: ρ > 2, sixteen nodes.
            const half = (b - a) / 120;
            for (let e = 0; e < 60; ++e)
              for (let k = 0; k < 16; ++k) {
                const t = a + half * (2 * e + 1 + rule.nodes[k]);
                want += half * rule.weights[k] * brokenLine(panels, density, t) * poissonKernel(t - x, z);
              }
          }
        absoluteClose(field(panels, density, x, z), want, 1e-9, "quadrature of the check");
      }
  });

  test("on the boundary is the broken line itself, and zero off the support", () => {
    for (const x of [-20, -19.2, -18.5, 0, 7.7, 40, 50.1, 71])
      absoluteClose(field(panels, density, x, 0), brokenLine(panels, density, x), 1e-14, "the same line");
    expect([-20.1, 45, 80].map((x) => field(panels, density, x, 0))).toEqual([0, 0, 0]);
  });

  test("tends to that as the level goes down, and jumps nowhere on the way", () => {
    for (const x of [-10, 3.2, 18.5, 60.5]) {
      const on = field(panels, density, x, 0);
      let apart = Infinity;
      for (const z of [1e-1, 1e-2, 1e-3, 1e-4]) {
        // The broken line bends by no more than f″w and its ends are 9 m off at least: linear in z.
        const now = Math.abs(field(panels, density, x, z) - on);
        expect(now).toBeLessThan(0.15 * z * (1 + Math.log(10 / z)));
        expect(now).toBeLessThan(apart);
        apart = now;
      }
      // Where broken line and panels change over, what differs has died to about e^−π of the steps between panels.
      const above = field(panels, density, x, 1.5);
      const below = field(panels, density, x, 1.5 - 1e-9);
      absoluteClose(above, below, 0.02, "a twentieth of a step of 0.3");
    }
  });

  test("of one panel is level to its ends", () => {
    const one = panelsOn([{from: 0, to: 2}], 5);
    const f = Float64Array.of(7);
    expect([0, 0.4, 1, 2].map((x) => field(one, f, x, 0))).toEqual([7, 7, 7, 7]);
    absoluteClose(field(one, f, 0.4, 0.3), 7 * harmonicMeasure(0.4, 0.3, 0, 2), 1e-14, "a constant is a constant");
  });

  test("of a constant is the angle that the support subtends, whatever the level", () => {
    const ones = new Float64Array(panels.count).fill(1);
    for (const z of [0.01, 0.7, 1.49, 1.51, 30])
      for (const x of [-25, 12.3, 47, 66]) {
        const want = parts.reduce((sum, {from, to}) => sum + harmonicMeasure(x, z, from, to), 0);
        absoluteClose(field(panels, ones, x, z), want, 1e-13, "rounding of some twenty panels");
      }
  });

  test("of a line mass widens by the height that it is carried up", () => {
    // Common practice: the half-width at half maximum of a horizontal cylinder is its depth. Depth 25 m below the
    // boundary; f = P_25 in panels of 0.5 m out to 5 km. Left out: some 25 h/5000², and averaging over panels, (0.5/25)²/24.
    const wide = panelsOn([{from: -5000, to: 5000}], 0.5);
    const mass = wide.centre.map((_, j) => harmonicMeasure(0, 25, wide.from[j], wide.to[j]) / wide.width[j]);
    for (const height of [1, 10, 60]) {
      const top = field(wide, mass, 0, height);
      absoluteClose(top * Math.PI * (25 + height), 1, 1e-4, "tails and panels");
      absoluteClose(field(wide, mass, 25 + height, height) / top, 0.5, 1e-4, "tails and panels");
    }
  });

  test("writes its own stretch of the target only", () => {
    const target = new Float64Array(panels.count + 2).fill(9);
    levelRowInto(target, 1, panels, 3, 0, 0, VERTICAL);
    expect([target[0], target.at(-1)]).toEqual([9, 9]);
    absoluteClose(
      target.slice(1, -1).reduce((sum, entry) => sum + entry, 0),
      1,
      1e-15,
      "shares of two neighbours",
    );
  });

  test.each([
    {re: 0, im: 1, order: 0},
    {re: 0.6, im: -0.8, order: 0},
    {re: 0, im: -1, order: 1},
    {re: 0.7, im: 0.4, order: 1},
  ] as const)(
    "is that of the broken line for any reading, on level ground and over a hill: $re + i $im, order $order",
    (response) => {
      const rule = gaussLegendre(16);
      const hill = {x: Float64Array.of(-25, 0, 22, 80), y: Float64Array.of(0, 3, 9, 2)};
      for (const boundary of [undefined, hill]) {
        const ground = panelsOn(parts, 3, boundary);
        for (const [x, above] of [
          [-21, 0.4],
          [3.2, 1.3],
          [23, 0.3],
          [45, 1],
          [60.5, 1.4],
        ] as const) {
          const z = boundaryAt(boundary, x) + above;
          let want = 0;
          let size = 0;
          for (let j = 0; j < ground.count; ++j)
            for (const [a, b] of [
              [ground.from[j], ground.centre[j]],
              [ground.centre[j], ground.to[j]],
            ]) {
              // Elements of a sixtieth of half a panel, the nearest pole 0.3 off.
              const half = (b - a) / 120;
              for (let e = 0; e < 60; ++e)
                for (let k = 0; k < 16; ++k) {
                  const t = a + half * (2 * e + 1 + rule.nodes[k]);
                  const y = ground.yFrom[j] + ((t - ground.from[j]) / 3) * (ground.yTo[j] - ground.yFrom[j]);
                  const term =
                    half *
                    rule.weights[k] *
                    brokenLine(ground, density, t) *
                    kernelAt(amplitudeRe(response), amplitudeIm(response), response.order, t - x, z - y);
                  want += term;
                  size += Math.abs(term);
                }
            }
          const row = levelRowInto(
            new Float64Array(ground.count),
            0,
            ground,
            x,
            boundaryAt(boundary, x),
            above,
            response,
          );
          const got = row.reduce((sum, entry, j) => sum + entry * density[j], 0);
          // The hill's corners lie inside panels; panels are straight, so a sensor may stand lower over them than over it.
          absoluteClose(got / size, want / size, 1e-11, "ε times the distance in half panels, 30");
        }
      }
    },
  );
});

describe("on a boundary that rises and falls, level 0", () => {
  const hillAt = (x: number): number => 8 * Math.exp(-((x / 20) ** 2));
  const hill = {x: evenly(-100, 100, 401), y: evenly(-100, 100, 401).map(hillAt)};
  const smooth = (x: number): number => Math.exp(-((x / 30) ** 2)) * (1 + 0.3 * Math.sin(x / 9));
  const read = (ground: Panels, x: number, above: number): number =>
    levelRowInto(new Float64Array(ground.count), 0, ground, x, boundaryAt(hill, x), above, VERTICAL).reduce(
      (sum, entry, j) => sum + entry * smooth(ground.centre[j]),
      0,
    );
  const [ground, half, fine] = [1, 0.5, 0.125].map((width) => panelsOn([{from: -90, to: 90}], width, hill));

  test("is the limit from above everywhere, at edges of panels too, and not the density", () => {
    let [off, offHalf, farthest] = [0, 0, 0];
    for (let x = -60; x <= 60; x += 0.5) {
      // Over eight times finer panels, from three heights well above their corners, by the parabola through them.
      const want = 3 * read(fine, x, 0.25) - 3 * read(fine, x, 0.5) + read(fine, x, 0.75);
      off = Math.max(off, Math.abs(read(ground, x, 0) - want));
      offHalf = Math.max(offHalf, Math.abs(read(half, x, 0) - want));
      farthest = Math.max(farthest, Math.abs(want - smooth(x)));
    }
    // Panels are straight: a bend κ of the ground adds some f κ w/2π = 0.008 over each, first order in the panel.
    // Measured: 0.0118, and 0.0058 with panels half as wide.
    expect(off).toBeLessThan(0.013);
    expect(offHalf / off).toBeLessThan(0.65);
    expect(farthest).toBeGreaterThan(0.1);
  });

  test("on flat ground is the density between panel centres, as without a broken line", () => {
    const level = panelsOn(parts, 3, {x: Float64Array.of(-30, 20, 90), y: Float64Array.of(0, 0, 0)});
    for (const x of [-20, -18.5, -17, 1, 39, 40, 52])
      absoluteClose(field(level, density, x, 0), field(panels, density, x, 0), 1e-12, "other panels add nothing");
  });
});
