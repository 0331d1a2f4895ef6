import {describe, expect, test} from "vitest";
import {correlation, interpolateInto, median, medianAbsoluteDeviation} from "../../lib/numeric/correlation.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";

describe("series", () => {
  test("correlation: exact cases, shift and scale, and a worked one", () => {
    const x = Float64Array.of(1, 2, 3, 4, 5);
    const y = Float64Array.of(2, 1, 4, 3, 5);
    // Sums of squares 10 and 10, of products 8.
    assertClose(correlation(x, y), 0.8, {factor: 4, scale: 1, because: "five terms"});
    assertClose(
      correlation(
        x,
        x.map((value) => 7 - 3 * value),
      ),
      -1,
      {factor: 4, scale: 1, because: "five terms"},
    );
    expect(correlation(x, new Float64Array(5).fill(2))).toBeNaN();
    expect(correlation(new Float64Array(0), new Float64Array(0))).toBeNaN();
  });

  test("median of odd and even counts, unsorted, untouched", () => {
    const values = Float64Array.of(5, -1, 3);
    expect(median(values)).toBe(3);
    expect(values).toEqual(Float64Array.of(5, -1, 3));
    expect(median(Float64Array.of(4, 1, 3, 2))).toBe(2.5);
    expect(median(new Float64Array(0))).toBeNaN();
  });

  test("the median absolute deviation of normal noise is 0.6745 of its standard deviation", () => {
    const noise = normalDeviates(seededRandom(4), 40_001).map((value) => 10 + 3 * value);
    absoluteClose(
      medianAbsoluteDeviation(noise),
      3 * 0.6744897501960817,
      0.06,
      "its own deviation: 1.17·3·0.67/√n = 0.012",
    );
    expect(medianAbsoluteDeviation(Float64Array.of(1, 1, 100, 1, 1))).toBe(0);
  });

  test("interpolation: at nodes, between, at ends, outside", () => {
    const x = Float64Array.of(0, 1, 4);
    const y = Float64Array.of(2, 4, -2);
    const at = Float64Array.of(0, 0.5, 1, 3, 4, -0.1, 4.1, Number.NaN);
    const got = interpolateInto(new Float64Array(8), x, y, at);
    expect([...got]).toEqual([2, 3, 4, 0, -2, Number.NaN, Number.NaN, Number.NaN]);
    expect([
      ...interpolateInto(new Float64Array(2), Float64Array.of(3), Float64Array.of(7), Float64Array.of(3, 4)),
    ]).toEqual([7, Number.NaN]);
  });
});
