import {describe, expect, test} from "vitest";
import {recordNoise, WHITE_LAG_ONE} from "../../lib/survey/record-noise.ts";
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
