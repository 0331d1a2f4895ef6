import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {byLine, misTieFigures, ofLine, outliersOf} from "../../lib/survey/mis-ties.ts";
import {absoluteClose} from "../harness/assert-close.ts";

describe("figures", () => {
  test("of five differences, by hand", () => {
    const figures = misTieFigures(Float64Array.of(1, -2, Number.NaN, 3, -4, 7));
    expect(figures.count).toBe(5);
    expect(figures.mean).toBe(1);
    // 1 + 4 + 9 + 16 + 49 = 79.
    absoluteClose(figures.rms, Math.sqrt(79 / 5), 1e-15, "one rounding");
    expect(figures.medianSize).toBe(3);
    expect(figures.median).toBe(1);
    // Distances from 1: 0, 3, 2, 5, 6.
    absoluteClose(figures.robustDeviation, 1.482602218505602 * 3, 1e-15, "one rounding");
    expect(figures.largest).toBe(7);
  });

  test("of none are not numbers", () => {
    const {count, ...others} = misTieFigures(Float64Array.of(Number.NaN));
    expect(count).toBe(0);
    for (const value of Object.values(others)) expect(value).toBeNaN();
  });

  test("of normal differences: rms and robust deviation are their standard deviation", () => {
    const {rms, robustDeviation} = misTieFigures(normalDeviates(seededRandom(4), 40_000).map((v) => 3 * v));
    absoluteClose(rms, 3, 0.04, "four times its standard error 3/√(2n)");
    absoluteClose(robustDeviation, 3, 0.07, "four times its standard error, 1.17/√n of it");
  });
});

describe("outliers", () => {
  test("lie far from the others, the farthest first; a common shift makes none", () => {
    const values = normalDeviates(seededRandom(5), 200).map((v) => 10 + v);
    values[17] = -5;
    values[150] = 40;
    expect(outliersOf(values, misTieFigures(values))).toEqual([150, 17]);
  });

  test("are not told of a handful", () => {
    const values = Float64Array.of(0, 0.1, -0.1, 0.2, 50);
    expect(outliersOf(values, misTieFigures(values))).toEqual([]);
  });
});

test("of a line are its readings less those of the others", () => {
  const lines = byLine(4, Uint32Array.of(0, 0, 1), Uint32Array.of(1, 2, 2));
  const differences = Float64Array.of(5, 7, Number.NaN);
  expect(lines.map((line) => [...ofLine(line, differences)])).toEqual([[5, 7], [-5, Number.NaN], [-7, Number.NaN], []]);
});
