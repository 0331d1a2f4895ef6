import {describe, expect, test} from "vitest";
import {findRoot, minimise} from "../../lib/numeric/roots.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";

const close = {factor: 8, because: "stops at 4ε of x"};

describe("findRoot", () => {
  test("finds roots of rising, falling, flat and steep functions", () => {
    assertClose(
      findRoot((x) => [x * x - 2, 2 * x], 0, 2),
      Math.SQRT2,
      {...close, scale: 2},
    );
    assertClose(
      findRoot((x) => [2 - x * x, -2 * x], 0, 9),
      Math.SQRT2,
      {...close, scale: 2},
    );
    assertClose(
      findRoot((x) => [Math.cos(x), -Math.sin(x)], 0, 3),
      Math.PI / 2,
      {...close, scale: 2},
    );
    // Newton alone diverges here from most starts.
    assertClose(
      findRoot((x) => [Math.atan(x - 5), 1 / (1 + (x - 5) ** 2)], -100, 1000),
      5,
      {...close, scale: 5},
    );
    // A triple root: Newton alone gains a factor 1.5 a step.
    absoluteClose(
      findRoot((x) => [(x - 1) ** 3, 3 * (x - 1) ** 2], 0, 2.7),
      1,
      1e-14,
      "cube underflows to 0 only at 1",
    );
    expect(findRoot((x) => [x, 1], 0, 1)).toBe(0);
    expect(findRoot((x) => [x - 1, 1], 0, 1)).toBe(1);
  });

  test("works in the logarithm over many decades, from a start as well", () => {
    const f = (x: number): [number, number] => [1 / (1 + x) - 1e-9, -1 / (1 + x) ** 2];
    const root = 1e9 - 1;
    for (const start of [undefined, 3, 1e15])
      assertClose(findRoot(f, 1e-20, 1e20, {logarithmic: true, ...(start === undefined ? {} : {start})}), root, {
        factor: 100,
        scale: root,
        because: "ln x is 21: rounding of the logarithm counts 21 times",
      });
  });

  test("a wrong slope costs steps, not the answer", () => {
    assertClose(
      findRoot((x) => [x ** 3 - 2, -1], 0, 2),
      Math.cbrt(2),
      {...close, scale: 2},
    );
    assertClose(
      findRoot((x) => [x ** 3 - 2, Number.NaN], 0, 2),
      Math.cbrt(2),
      {...close, scale: 2},
    );
  });

  test("no sign change, NaN, too few steps and a bad logarithmic bracket are refused", () => {
    expect(() => findRoot((x) => [x * x + 1, 2 * x], -1, 1)).toThrow(/opposite signs/);
    expect(() => findRoot(() => [Number.NaN, 1], -1, 1)).toThrow(/opposite signs/);
    expect(() => findRoot((x) => [Math.abs(x) === 1 ? x : Number.NaN, 1], -1, 1)).toThrow(/not met/);
    expect(() => findRoot((x) => [x ** 3 - 2, 3 * x * x], 0, 2, {iterations: 2})).toThrow(/in 2 steps/);
    expect(() => findRoot((x) => [x - 1, 1], 0, 2, {logarithmic: true})).toThrow(/above 0/);
  });
});

describe("minimise", () => {
  test("finds smooth, kinked and end-point minima", () => {
    for (const [f, low, high, want] of [
      [(x: number) => (x - 0.3) ** 2, -1, 2, 0.3],
      [(x: number) => Math.abs(x - 0.7), 0, 1, 0.7],
      [(x: number) => -Math.sin(x), 0, 3, Math.PI / 2],
      [(x: number) => x, 2, 5, 2],
      [(x: number) => -x, 2, 5, 5],
      [(x: number) => x ** 4, -3, 2, 0],
    ] as const) {
      // x⁴ is flat to rounding within ε^{1/4} = 1.2e-4 of its minimum.
      const tolerance = f(1e-5) === 1e-20 ? 2e-4 : 1e-7;
      absoluteClose(minimise(f, low, high).x, want, tolerance, "1e-8 of the bracket, or √ε where smooth");
    }
    const {x, value} = minimise((t) => Math.cosh(t - 1), 0, 4);
    expect(value).toBe(Math.cosh(x - 1));
  });

  test("NaN is refused", () => {
    expect(() => minimise(() => Number.NaN, 0, 1)).toThrow(/not met/);
    expect(() => minimise((x) => (x > 0.5 ? Number.NaN : x), 0, 1)).toThrow(/not met/);
  });
});
