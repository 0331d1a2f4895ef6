import {describe, expect, test} from "vitest";
import {erfc, foldedNormalQuantile, normalCdf, normalDensity, normalQuantile} from "../../lib/numeric/normal.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {referenceTable} from "../harness/reference-table.ts";

const rows = (kind: string) => {
  const found = referenceTable("normal").filter((row) => row["kind"] === kind);
  expect(found.length).toBeGreaterThan(9);
  return found.map((row) => ({x: Number(row["x"]), level: Number(row["level"]), value: Number(row["value"])}));
};

describe("normal distribution against 40-digit values", () => {
  test("erfc", () => {
    for (const {x, value} of rows("erfc"))
      assertClose(erfc(x), value, {factor: 8, scale: value, because: "4ε scaled erfc, 2 exponentials, 2 products"});
    expect(erfc(40)).toBe(0);
    expect(erfc(Number.POSITIVE_INFINITY)).toBe(0);
    expect(erfc(Number.NEGATIVE_INFINITY)).toBe(2);
    expect(erfc(Number.NaN)).toBeNaN();
  });

  test("distribution function", () => {
    for (const {x, value} of rows("cdf"))
      assertClose(normalCdf(x), value, {factor: 12, scale: value, because: "as erfc, and x/√2"});
    expect(normalCdf(Number.NEGATIVE_INFINITY)).toBe(0);
    expect(normalCdf(Number.POSITIVE_INFINITY)).toBe(1);
    expect(normalCdf(Number.NaN)).toBeNaN();
  });

  test("density is the slope of the distribution function", () => {
    for (const x of [-2, 0.3, 1.7]) {
      const step = 1e-4;
      const slope = (normalCdf(x + step) - normalCdf(x - step)) / (2 * step);
      absoluteClose(normalDensity(x), slope, 1e-8, "central difference: step²/6 · φ″ ≤ 1e-9, rounding 1e-12");
    }
  });

  test("quantiles, and their mirror", () => {
    for (const {x, value} of rows("quantile")) {
      assertClose(normalQuantile(x), value, {factor: 4, scale: Math.max(1, -value), because: "Halley to rounding"});
      if (x > 1e-3)
        assertClose(normalQuantile(1 - x), -value, {
          factor: 200,
          scale: 1,
          because: "1 − x rounds by ε/2, over φ ≥ 0.05",
        });
    }
    for (const bad of [0, 1, -0.1, 1.1, Number.NaN]) expect(() => normalQuantile(bad)).toThrow(/between 0 and 1/);
  });
});

describe("folded normal", () => {
  test("quantiles against 40-digit values", () => {
    for (const {x, level, value} of rows("folded"))
      absoluteClose(foldedNormalQuantile(x, level), value, 1e-13, "level met to 1e-15, over a density above 0.02");
  });

  test("levels are met over the whole range, also below one half where steps may overshoot", () => {
    for (const level of [1e-6, 0.1, 0.3, 0.5, 0.9, 0.9999, 1 - 1e-9]) {
      for (let t = 0; t < 12; t += 0.173) {
        const c = foldedNormalQuantile(t, level);
        absoluteClose(normalCdf(c - t) - normalCdf(-c - t), level, 1e-12, "the promise of the function");
      }
    }
  });

  test("without bias it is the two-sided quantile, with a large one the one-sided", () => {
    assertClose(foldedNormalQuantile(0, 0.95), normalQuantile(0.975), {
      factor: 20,
      scale: 2,
      because: "the same equation",
    });
    assertClose(foldedNormalQuantile(30, 0.95), 30 + normalQuantile(0.95), {
      factor: 2,
      scale: 32,
      because: "far tail 0",
    });
  });

  test("arguments out of range are refused", () => {
    for (const [t, level] of [
      [-1, 0.9],
      [Number.NaN, 0.9],
      [1, 0],
      [1, 1],
      [Number.POSITIVE_INFINITY, 0.5],
    ] as const)
      expect(() => foldedNormalQuantile(t, level)).toThrow(/finite number ≥ 0/);
  });
});
