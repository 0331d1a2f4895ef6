/**
 * What total-field and component sensors read of a line of dipoles, against figures printed to ten digits: worked from the
 * closed form W = Bx + iBz = (μ0/2π) m/(x + id)², m = m_x − i m_z, and checked there against brute-force sums over
 * dipoles along strike. 1,000 A·m per metre of strike, 50 m down, magnetised along the Earth's field; nT.
 *
 * W is analytic above the dipoles, so with Re F positive down F = −iW: what is tested is each observable's α and order.
 */
import {describe, expect, test} from "vitest";
import {OBSERVABLES} from "../../lib/potential/catalogue.ts";
import {downwardGradient} from "../../lib/potential/downward-gradient.ts";
import {type EffectiveDirection, effectiveDirection} from "../../lib/potential/effective-direction.ts";
import {fieldAlong} from "../../lib/potential/field-along.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {amplitudeIm, amplitudeRe, kernelAt, type Response} from "../../lib/potential/kernel.ts";
import {LEVEL_QUANTITIES, levelQuantityNamed} from "../../lib/potential/level-quantity.ts";
import {MAGNETIC_LAYER} from "../../lib/potential/source-law.ts";
import {totalFieldAnomaly} from "../../lib/potential/total-field-anomaly.ts";
import {absoluteClose} from "../harness/assert-close.ts";

const DEPTH = 50;
const MOMENT = 1000;
/** 1e9 μ0/2π with the constant of the program, nT·m/A. */
const UNIT = (1e9 * 1) / (Math.PI * MAGNETIC_LAYER.densityPerField);
const RADIAN = Math.PI / 180;

interface Complex {
  readonly re: number;
  readonly im: number;
}
const times = (p: Complex, q: Complex): Complex => ({re: p.re * q.re - p.im * q.im, im: p.re * q.im + p.im * q.re});
const over = (p: Complex, q: Complex): Complex => {
  const size = q.re * q.re + q.im * q.im;
  return {re: (p.re * q.re + p.im * q.im) / size, im: (p.im * q.re - p.re * q.im) / size};
};

/** F and F′ of the dipoles at x, `up` above the level that the figures belong to. */
function dipoles({beta, inclination}: EffectiveDirection, x: number, up = 0): {f: Complex; slope: Complex} {
  const angle = inclination * RADIAN;
  const moment = {re: MOMENT * beta * Math.cos(angle), im: -MOMENT * beta * Math.sin(angle)};
  const way = {re: x, im: DEPTH + up};
  const square = times(way, way);
  const f = over(times({re: 0, im: -UNIT}, moment), square);
  return {f, slope: over(times({re: -2, im: 0}, f), way)};
}

const read = ({re, im, order}: Response, {f, slope}: {f: Complex; slope: Complex}): number =>
  times({re, im}, order === 0 ? f : slope).re;

const PRINTED = [
  {i: 90, d: 0, a: 0, at: [-60, 0, 35], nT: [-5.912389142, 79.999999989, 18.377550558]},
  {i: 60, d: 0, a: 0, at: [-60, 0, 35], nT: [24.972601032, 39.999999995, -34.500628446]},
  {i: 60, d: 10, a: 55, at: [-60, 0, 35], nT: [16.053397548, 49.999999993, -19.407104541]},
  {i: -30, d: -5, a: 100, at: [-60, 0, 35], nT: [6.047448154, 15.980762111, -7.636558957]},
] as const;

describe.each(PRINTED)("inclination $i°, declination $d°, azimuth $a°", ({i, d, a, at, nT}) => {
  const direction = effectiveDirection(i, d, a);

  test("the total field reads the printed figures", () => {
    at.forEach((x, k) => {
      const got = read(totalFieldAnomaly.response(direction), dipoles(direction, x));
      absoluteClose(got, nT[k], 1e-9, "digits of the figure, and of its μ0");
    });
  });

  test("so do the components along the line and down, projected on the Earth's field", () => {
    at.forEach((x, k) => {
      const along = read(fieldAlong.response(), dipoles(direction, x));
      const down = read(fieldVertical.response(), dipoles(direction, x));
      const got = Math.cos(i * RADIAN) * Math.cos((a - d) * RADIAN) * along + Math.sin(i * RADIAN) * down;
      absoluteClose(got, nT[k], 1e-9, "digits of the figure");
    });
  });

  test("so does the kernel integrated over the boundary field that the dipoles make 30 m below the sensor", () => {
    // Trapezoid in s, t = 40 sinh s: exponential in the step, its tail at t = 40 sinh 16 below 1e-6 of 1e-9.
    at.forEach((x, k) => {
      const response = totalFieldAnomaly.response(direction);
      let sum = 0;
      for (let s = -16; s <= 16; s += 0.02) {
        const t = x + 40 * Math.sinh(s);
        const f = dipoles(direction, t, -30).f.re;
        sum +=
          0.02 *
          40 *
          Math.cosh(s) *
          f *
          kernelAt(amplitudeRe(response), amplitudeIm(response), response.order, t - x, 30);
      }
      absoluteClose(sum, nT[k], 2e-9, "digits of the figure, and rounding of 1,600 terms");
    });
  });

  test("gradients are lower less upper over their distance", () => {
    for (const of of [fieldVertical, fieldAlong, totalFieldAnomaly])
      for (const x of at) {
        const apart = 0.01;
        const lower = read(of.response(direction), dipoles(direction, x, -apart / 2));
        const upper = read(of.response(direction), dipoles(direction, x, apart / 2));
        const got = read(downwardGradient(of).response(direction), dipoles(direction, x));
        // Third derivative of m/d²: 24/d⁵ over 24 apart² is 1e-6 m⁻² of 80 nT/m³…; rounding 80 ε/0.01.
        absoluteClose(got, (lower - upper) / apart, 1e-7, "apart²/24 of a third derivative below 1e-3 nT/m³");
      }
  });

  test("reduced to the pole they read as dipoles under the pole do", () => {
    const [pole] = levelQuantityNamed("pole-reduced").responses(direction);
    at.forEach((x, k) => {
      absoluteClose(read(pole, dipoles(direction, x)), PRINTED[0].nT[k], 1e-9, "digits of the figure");
    });
  });

  test("the amplitudes do not depend on the direction beyond its strength", () => {
    const length = (name: string, x: number): number =>
      Math.hypot(
        ...levelQuantityNamed(name)
          .responses(undefined)
          .map((response) => read(response, dipoles(direction, x))),
      );
    for (const x of at) {
      const r2 = x * x + DEPTH * DEPTH;
      absoluteClose(length("amplitude", x), (UNIT * MOMENT * direction.beta) / r2, 1e-12, "closed form");
      absoluteClose(
        length("gradient-amplitude", x),
        (2 * UNIT * MOMENT * direction.beta) / r2 ** 1.5,
        1e-12,
        "closed form",
      );
    }
  });
});

describe("other bodies", () => {
  test("a cylinder of radius 10 m, susceptibility 0.05 in 50,000 nT at the pole, 50 m down, peaks at 50 nT", () => {
    // Outside, a cylinder is a line of dipoles of 625 A·m per metre: susceptibility × field/μ0 × area.
    const moment = (0.05 * 50_000e-9 * Math.PI * 100) / (2 / MAGNETIC_LAYER.densityPerField);
    absoluteClose(moment, 625, 1e-4, "digits of the figure");
    const pole = effectiveDirection(90, 0, 0);
    const peak = read(totalFieldAnomaly.response(pole), dipoles(pole, 0)) * (moment / MOMENT);
    absoluteClose(peak, 50, 5e-6, "digits of the figure");
  });

  test("a dipole line at the pole falls to half its peak at 0.4858683 of its depth", () => {
    const pole = effectiveDirection(90, 0, 0);
    const response = totalFieldAnomaly.response(pole);
    const half = read(response, dipoles(pole, DEPTH * Math.sqrt(Math.sqrt(5) - 2)));
    absoluteClose(half / read(response, dipoles(pole, 0)), 0.5, 1e-14, "closed form");
  });

  test("a vertical dyke in any field: total field of the layer that its top is", () => {
    // Half-width 20 m, top 50 m down, magnetised vertically, 2 A/m: f is μ0 M/2 over the top. Down: printed for a vertical
    // field. Along: (μ0 M/4π) ln(r₂²/r₁²), derived. In a slanting field both, projected.
    const strength = 2 / MAGNETIC_LAYER.densityPerField / 1e-9;
    const down = new Map([
      [0, 304.4051016],
      [10, 295.126024],
      [20, 269.8963769],
      [50, 164.0509362],
    ]);
    const direction = effectiveDirection(60, 10, 55);
    const steps = 4000;
    for (const [x, printed] of down) {
      const along = (strength / (2 * Math.PI)) * Math.log(((20 - x) ** 2 + 2500) / ((20 + x) ** 2 + 2500));
      const want = printed * Math.sin(60 * RADIAN) + along * Math.cos(60 * RADIAN) * Math.cos(45 * RADIAN);
      const {re, im} = totalFieldAnomaly.response(direction);
      let sum = 0;
      for (let k = 0; k < steps; ++k)
        sum += kernelAt(
          amplitudeRe({re, im, order: 0}),
          amplitudeIm({re, im, order: 0}),
          0,
          -20 + (40 * (k + 0.5)) / steps - x,
          50,
        );
      absoluteClose((sum * strength * 40) / steps, want, 1e-6, "midpoint rule, (0.01/50)²/24 of the whole; digits");
    }
  });
});

describe("the effective direction", () => {
  test("is the inclination itself on a line along the declination, and vertical on one across it", () => {
    expect(effectiveDirection(60, 12, 12)).toMatchObject({beta: expect.closeTo(1, 15)});
    absoluteClose(effectiveDirection(60, 12, 12).inclination, 60, 1e-13, "rounding");
    const across = effectiveDirection(60, 0, 90);
    absoluteClose(across.beta, Math.sin(60 * RADIAN), 1e-15, "closed form");
    absoluteClose(across.inclination, 90, 1e-13, "closed form");
  });

  test("turns over with the line: the same anomaly read the other way", () => {
    for (const azimuth of [0, 37, 110]) {
      const one = effectiveDirection(-40, 5, azimuth);
      const other = effectiveDirection(-40, 5, azimuth + 180);
      absoluteClose(one.beta, other.beta, 1e-15, "closed form");
      const [a, b] = [totalFieldAnomaly.response(one), totalFieldAnomaly.response(other)];
      // Along changes its sign with the line, down does not.
      absoluteClose(a.re, b.re, 1e-15, "closed form");
      absoluteClose(a.im, -b.im, 1e-15, "closed form");
    }
  });

  test.each([
    [0, 0, 90],
    [0, 12, 102],
    [2, 0, 90],
    [-1, -5, 83],
    [Number.NaN, 0, 0],
  ])(
    "inclination %d°, declination %d° on azimuth %d° is refused: nothing of it lies in the line's plane",
    (i, d, a) => {
      expect(() => effectiveDirection(i, d, a)).toThrowError(
        expect.objectContaining({code: "direction/along-strike", exitStatus: 3}),
      );
    },
  );

  test("is let through from β = 0.05 on", () => {
    expect(effectiveDirection(3, 0, 90).beta).toBeGreaterThan(0.05);
    expect(() => effectiveDirection(2.8, 0, 90)).toThrow(/at least 0.05/);
  });

  test("is asked for by total field and pole only, and by its gradient", () => {
    const needy = [...OBSERVABLES, ...LEVEL_QUANTITIES].filter(({needsDirection}) => needsDirection);
    expect(new Set(needy.map(({name}) => name))).toEqual(
      new Set(["total-field-anomaly", "total-field-anomaly-gradient", "pole-reduced"]),
    );
    for (const observable of OBSERVABLES)
      if (!observable.needsDirection) expect(observable.response(undefined)).toBeDefined();
    expect(() => levelQuantityNamed("pole")).toThrowError(
      expect.objectContaining({code: "level/unknown-observable", exitStatus: 2}),
    );
  });
});
