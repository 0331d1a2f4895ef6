import {describe, expect, test} from "vitest";
import {normalCdf} from "../../lib/numeric/normal.ts";
import {normalDeviates, seededRandom, splitMix64, xoshiro128} from "../../lib/numeric/random.ts";

describe("seeded random numbers", () => {
  test("SplitMix64 gives the outputs printed with its published test case", () => {
    // Seed 1234567; also on the generator's page of Rosetta Code.
    expect(splitMix64(1234567n, 5)).toEqual([
      6457827717110365317n,
      3203168211198807973n,
      9817491932198370423n,
      4593380528125082431n,
      16408922859458223821n,
    ]);
  });

  test("xoshiro128** follows its definition", () => {
    // The recurrence of Blackman & Vigna in exact integers, from the state 1, 2, 3, 4.
    const mask = 0xffffffffn;
    const rotate = (x: bigint, k: bigint) => ((x << k) | (x >> (32n - k))) & mask;
    let [a, b, c, d] = [1n, 2n, 3n, 4n];
    const {bits} = xoshiro128(1, 2, 3, 4);
    for (let i = 0; i < 1000; ++i) {
      expect(bits()).toBe(Number((rotate((b * 5n) & mask, 7n) * 9n) & mask));
      const t = (b << 9n) & mask;
      c ^= a;
      d ^= b;
      b ^= c;
      a ^= d;
      c ^= t;
      d = rotate(d, 11n);
    }
  });

  test("the first outputs from that state are the known ones", () => {
    // By hand from the definition: rotl(2·5, 7)·9 = 11520; then s1 = 0 gives 0.
    const {bits} = xoshiro128(1, 2, 3, 4);
    expect([bits(), bits()]).toEqual([11520, 0]);
  });

  test("a seed fixes the sequence, another seed changes it", () => {
    const first = normalDeviates(seededRandom(7), 100);
    expect(normalDeviates(seededRandom(7), 100)).toEqual(first);
    expect(normalDeviates(seededRandom(8), 100)).not.toEqual(first);
    expect(normalDeviates(seededRandom(-7n), 100)).not.toEqual(first);
  });

  test("uniform and normal deviates pass Kolmogorov's test", () => {
    const n = 20_000;
    const {uniform} = seededRandom(1);
    const samples: [Float64Array, (x: number) => number][] = [
      [Float64Array.from({length: n}, uniform), (x) => x],
      [normalDeviates(seededRandom(2), n), normalCdf],
    ];
    for (const [values, cdf] of samples) {
      let worst = 0;
      values.sort().forEach((x, i) => {
        worst = Math.max(worst, Math.abs(cdf(x) - i / n), Math.abs(cdf(x) - (i + 1) / n));
      });
      // 1.63/√n is the 1 % point of Kolmogorov's distribution; the seed is fixed.
      expect(worst * Math.sqrt(n)).toBeLessThan(1.63);
    }
  });

  test("uniform stays in [0, 1)", () => {
    const {uniform} = seededRandom(3);
    for (let i = 0; i < 10_000; ++i) {
      const u = uniform();
      expect(u >= 0 && u < 1).toBe(true);
    }
  });
});
