import {describe, expect, test} from "vitest";
import {lengthFromShare, recordNoise, WHITE_LAG_ONE} from "../../lib/survey/record-noise.ts";
import {redNoise} from "../harness/red-noise.ts";
import {normals} from "./normals.ts";

const even = (count: number, step: number) => Float64Array.from({length: count}, (_, i) => i * step);

describe("noise by the fourth difference", () => {
  test("finds the standard deviation of white noise over a smooth field", () => {
    // n = 4000: the median of |normal| has a relative standard error of 1.17/√n for independent
    // entries, and about twice that here (neighbours correlate at −0.8, 0.4): 3.7 %. Four of them.
    const n = 4000;
    const chainage = even(n, 5);
    const noise = normals(n, 11);
    const values = chainage.map((x, i) => 40 / (1 + ((x - 9000) / 400) ** 2) + 0.25 * noise[i]!);
    const found = recordNoise(chainage, values);
    expect(Math.abs(found.sigma / 0.25 - 1)).toBeLessThan(0.15);
    expect(found.used).toBe(n - 4);
    expect(found.spacing).toBe(5);
    expect(found.white).toBe(true);
    expect(Math.abs(found.lagOne - WHITE_LAG_ONE)).toBeLessThan(found.lagOneTolerance);
  });

  test("does so over uneven steps on a steep cubic, where plain differences would see the slope", () => {
    const n = 4000;
    const jitter = normals(n, 5);
    const chainage = even(n, 5).map((x, i) => x + 0.5 * Math.tanh(jitter[i]!));
    const noise = normals(n, 6);
    const values = chainage.map((x, i) => 1e-9 * x ** 3 - 3 * x + 0.1 * noise[i]!);
    expect(Math.abs(recordNoise(chainage, values).sigma / 0.1 - 1)).toBeLessThan(0.15);
  });

  test("is the same for the line flown backwards", () => {
    const chainage = even(200, 2);
    const values = normals(200, 3);
    expect(recordNoise(chainage.toReversed(), values.toReversed())).toEqual(recordNoise(chainage, values));
  });

  test("is not moved by spikes", () => {
    const chainage = even(2000, 1);
    const values = normals(2000, 8);
    const clean = recordNoise(chainage, values).sigma;
    for (let i = 50; i < 2000; i += 100) values[i]! += 1e4;
    // 20 spikes spoil 5 differences each: 5 % of them, which moves the median of |d| by some 8 %.
    expect(Math.abs(recordNoise(chainage, values).sigma / clean - 1)).toBeLessThan(0.12);
  });

  test("says that smoothed noise is not white", () => {
    const raw = normals(2002, 21);
    const smooth = Float64Array.from({length: 2000}, (_, i) => (raw[i]! + raw[i + 1]! + raw[i + 2]!) / 3);
    expect(recordNoise(even(2000, 1), smooth).white).toBe(false);
  });

  test("never takes five stations across a gap", () => {
    const chainage = Float64Array.from({length: 60}, (_, i) => i * 2 + (i >= 30 ? 500 : 0));
    const values = normals(60, 2).map((v, i) => v + (i >= 30 ? 1e6 : 0));
    const found = recordNoise(chainage, values);
    expect(found.used).toBe(52);
    expect(found.sigma).toBeLessThan(2);
  });

  test("asks for --noise when the record is short, or rounded flat", () => {
    expect(() => recordNoise(even(23, 1), normals(23, 1))).toThrow(/Only 19 runs .* --noise/s);
    expect(() => recordNoise(even(100, 1), new Float64Array(100).fill(7))).toThrow(/rounded, interpolated or smoothed/);
  });
});

describe("of noise correlated over a known length", () => {
  // Steps between 3.5 and 6.5 m.
  const chainage = even(4000, 5).map((x, i) => x + 0.75 * Math.sin(7 * i));

  test.each([2, 20, 300])("L = %d m: the standard deviation is found over a smooth field", (length) => {
    const noise = redNoise(chainage, 0.25, length, 17);
    const values = chainage.map((x, i) => 40 / (1 + ((x - 9000) / 800) ** 2) + noise[i]!);
    const found = recordNoise(chainage, values, length);
    // As for white noise: 3.7 % is the standard error of 4,000 stations, four of them.
    expect(Math.abs(found.sigma / 0.25 - 1)).toBeLessThan(0.15);
    expect(found.white).toBe(true);
  });

  test("taken for white it is far too small, and said not to be white", () => {
    const noise = redNoise(chainage, 0.25, 20, 17);
    const found = recordNoise(chainage, noise);
    // Even steps: Σ a_i a_j e^(−|i − j|/4)/70 is 0.1417 for (1, −4, 6, −4, 1), σ is 0.376 of the true one.
    expect(Math.abs(found.sigma / 0.25 / Math.sqrt(0.1417) - 1)).toBeLessThan(0.2);
    expect(found.white).toBe(false);
  });

  test("the length goes to 0: the figure of white noise", () => {
    const values = normals(4000, 4);
    const white = recordNoise(chainage, values);
    const limit = recordNoise(chainage, values, 0.05);
    // e^(−70) of a neighbour; the variance is the sum of the same products in another order.
    expect(Math.abs(limit.sigma / white.sigma - 1)).toBeLessThan(1e-12);
    expect(limit.lagOne).toBeCloseTo(white.lagOne, 12);
    expect(limit.lagOneTolerance).toBeCloseTo(white.lagOneTolerance, 12);
  });

  test("at a great length nothing cancels", () => {
    // Only e^(−x) − 1 ≈ −x counts: twice the length, and the same differences are read as √2 of the noise.
    const values = normals(400, 4);
    const [one, other] = [1e9, 2e9].map((length) => recordNoise(chainage.slice(0, 400), values, length).sigma);
    expect(Math.abs(other! / one! / Math.SQRT2 - 1)).toBeLessThan(1e-7);
  });

  test.each([0.5, 4, 50])("of L = %d spacings is found again from what it leaves of white noise", (length) => {
    const weights = [1, -4, 6, -4, 1];
    let variance = 0;
    weights.forEach((a, i) => {
      weights.forEach((b, j) => {
        variance += (a * b * Math.exp(-Math.abs(i - j) / length)) / 70;
      });
    });
    // A sum of 70ths that cancels to some 1/(L/Δ): ε over that, twice for the root.
    expect(Math.abs(lengthFromShare(Math.sqrt(variance), 3) / (3 * length) - 1)).toBeLessThan(1e-11);
  });
});
