/** The kernel of a reading, at a point and over straight pieces of boundary. */
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {observableNamed} from "../../lib/potential/catalogue.ts";
import {downwardGradient} from "../../lib/potential/downward-gradient.ts";
import {fieldAlong} from "../../lib/potential/field-along.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {
  amplitudeIm,
  amplitudeRe,
  kernelAt,
  kernelOverPiece,
  type Response,
  requireAbove,
} from "../../lib/potential/kernel.ts";
import {harmonicMeasure, poissonKernel} from "../../lib/potential/poisson.ts";
import {totalFieldAnomaly} from "../../lib/potential/total-field-anomaly.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {numericTable, referenceTable} from "../harness/reference-table.ts";
import {metres} from "../harness/supports.ts";

const SEED = 22;
const over = (r: Response, a: number, da: number, b: number, db: number): number =>
  kernelOverPiece(amplitudeRe(r), amplitudeIm(r), r.order, a, da, b, db);
const at = (r: Response, s: number, drop: number): number => kernelAt(amplitudeRe(r), amplitudeIm(r), r.order, s, drop);
const order = (value: number): 0 | 1 => (value === 0 ? 0 : 1);

describe("the kernel over a straight piece", () => {
  test("agrees with 60-digit logarithms: thin to wide, above to far, level, rising and falling", () => {
    const rows = numericTable("kernel");
    expect(rows.length).toBeGreaterThan(250);
    for (const row of rows)
      assertClose(over({re: row.re, im: row.im, order: order(row.order)}, row.a, row.da, row.b, row.db), row.value, {
        factor: 8,
        scale: row.size * Math.hypot(row.re, row.im),
        because: "b − a rounded, a dozen products, atan2 and log1p; relative to ∫|ζ − w|^−m dt, where no sign cancels",
      });
  });

  test("adds up: two halves are the whole", () => {
    const direction = fc.tuple(metres(-1, 1), metres(-1, 1), fc.constantFrom<0 | 1>(0, 1));
    fc.assert(
      fc.property(
        direction,
        metres(-200, 200),
        metres(5, 60),
        metres(1, 90),
        metres(-0.5, 0.5),
        ([re, im, n], a, da, w, slope) => {
          const r = {re, im, order: n};
          const b = a + w;
          // Under the sensor the piece must stay below it.
          fc.pre(da + slope * Math.max(0, Math.min(-a, w)) > 2);
          const [middle, half] = [a + 0.5 * w, da + 0.5 * slope * w];
          const whole = over(r, a, da, b, da + slope * w);
          const sum = over(r, a, da, middle, half) + over(r, middle, half, b, da + slope * w);
          absoluteClose(sum, whole, 1e-12, "entries below 60, rounding of the middle over a least distance of 2 m");
        },
      ),
      {seed: SEED},
    );
  });

  test("is the harmonic measure for the downward component over a level piece", () => {
    fc.assert(
      fc.property(metres(-300, 300), metres(1, 60), metres(0.1, 90), (a, z, width) => {
        const want = harmonicMeasure(0, z, a, a + width);
        absoluteClose(
          over({re: 1, im: 0, order: 0}, a, z, a + width, z),
          want,
          1e-14,
          "the same angle, other products",
        );
      }),
      {seed: SEED},
    );
  });

  test("tends to the kernel at a point times the width, also on a slope", () => {
    for (const r of [
      {re: 1, im: 0, order: 0},
      {re: -0.3, im: 0.8, order: 0},
      {re: 0.4, im: 0.9, order: 1},
    ] as const)
      for (const slope of [0, 0.5, -2]) {
        const [s, drop, width] = [14, 9, 1e-3];
        const mean =
          over(r, s - width / 2, drop + (slope * width) / 2, s + width / 2, drop - (slope * width) / 2) / width;
        absoluteClose(mean, at(r, s, drop), 1e-10, "width²/24 of a second derivative below 1e-3");
      }
  });

  test("at a point is the Poisson kernel for the downward component", () => {
    for (const [s, z] of [
      [0, 3],
      [-17, 20],
      [400, 5],
    ] as const)
      assertClose(at({re: 1, im: 0, order: 0}, s, z), poissonKernel(s, z), {
        factor: 4,
        scale: poissonKernel(s, z),
        because: "four roundings",
      });
  });

  test.each([0, -2, Number.NaN])("a sensor %d m above the boundary is refused by its place", (drop) => {
    expect(() => requireAbove(31.5, drop)).toThrowError(
      expect.objectContaining({
        code: "potential/station-below-boundary",
        exitStatus: 3,
        message: expect.stringContaining("31.5"),
      }),
    );
    expect(requireAbove(31.5, 1e-9)).toBeUndefined();
  });
});

describe("downward gradients", () => {
  test("agree with finite differences of the field in 60 digits, over level and sloping pieces", () => {
    const direction = {beta: 0.75, inclination: 41};
    const observables = {
      vertical: downwardGradient(fieldVertical),
      along: downwardGradient(fieldAlong),
      total: downwardGradient(totalFieldAnomaly),
    };
    const rows = referenceTable("gradient");
    expect(rows.length).toBeGreaterThan(75);
    for (const row of rows) {
      const [ax, ay, bx, by, x, z] = [row.ax, row.ay, row.bx, row.by, row.x, row.z].map(Number);
      const {response} = observables[row.alpha as keyof typeof observables];
      assertClose(over(response(direction), ax - x, z - ay, bx - x, z - by), Number(row.value), {
        // a, b and the drops are differences of numbers up to 8e3 here, 20 or more times the least distance.
        factor: 400,
        scale: Number(row.size),
        because: "differences of chainages and heights rounded before, a few hundred ε of the distance",
      });
    }
  });

  test("are found by name, each in the unit of its field", () => {
    for (const [name, dimension] of [
      ["gravity-gradient", "gravity-gradient"],
      ["field-vertical-gradient", "field-gradient"],
      ["field-along-gradient", "field-gradient"],
      ["total-field-anomaly-gradient", "field-gradient"],
    ])
      expect(observableNamed(name)).toMatchObject({name, dimension});
    // Of gravity as of the magnetic field: the same kernel.
    expect(observableNamed("gravity-gradient").response(undefined)).toEqual(
      observableNamed("field-vertical-gradient").response(undefined),
    );
  });
});
