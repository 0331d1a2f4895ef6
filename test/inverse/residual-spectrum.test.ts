/** The short-wave end of a residual: its level, and whether it is flat. */
import {describe, expect, test} from "vitest";
import {levelError, shortWaveEnd} from "../../lib/inverse/residual-spectrum.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {absoluteClose} from "../harness/assert-close.ts";

const white = (count: number, seed: number): Float64Array => normalDeviates(seededRandom(seed), count);
/** Means of `taken` neighbours. */
const smoothed = (count: number, taken: number, seed: number): Float64Array => {
  const raw = white(count + taken, seed);
  return Float64Array.from({length: count}, (_, i) => raw.slice(i, i + taken).reduce((sum, v) => sum + v / taken, 0));
};

describe("the level", () => {
  test("of white noise is its standard deviation, within the error that is stated", () => {
    const levels = Array.from({length: 300}, (_, seed) => shortWaveEnd(white(201, seed).map((v) => 3 * v))!.level / 3);
    const mean = levels.reduce((sum, v) => sum + v, 0) / 300;
    const spread = Math.sqrt(levels.reduce((sum, v) => sum + (v - mean) ** 2, 0) / 299);
    const error = levelError(50);
    // Of 300 draws the mean is known to a seventeenth of the spread, the spread to 4 %; of 50 ordinates the median is
    // some 1/100 high, and the linear error some 2 % off.
    absoluteClose(mean, 1, 0.01 + (3 * error) / 17, "three standard errors and the bias of the median");
    absoluteClose(spread / error, 1, 0.15, "three standard errors and the linear form");
  });

  test("is blind to long waves, and hardly moved by a line in the spectrum", () => {
    const noise = white(400, 5);
    const own = shortWaveEnd(noise)!.level;
    // 5 and 20 whole waves on the line: orthogonal to every ordinate used.
    const anomaly = noise.map(
      (v, i) => v + 50 * Math.cos((2 * Math.PI * 5 * i) / 400) + 20 * Math.sin((2 * Math.PI * 20 * i) / 400),
    );
    absoluteClose(shortWaveEnd(anomaly)!.level, own, 1e-10, "rounding of waves 50 times the noise");
    const hum = noise.map((v, i) => v + 5 * Math.cos((2 * Math.PI * 150 * i) / 400));
    // One ordinate of 100: the median moves by one place.
    absoluteClose(shortWaveEnd(hum)!.level / own, 1, 0.03, "one place of a median of 100");
  });

  test("of a long residual comes from 512 ordinates, and agrees", () => {
    const end = shortWaveEnd(white(20_001, 9))!;
    expect(end.ordinates).toBe(512);
    absoluteClose(end.level, 1, 3 * levelError(512), "three standard errors");
    expect(end.flat).toBe(true);
  });

  test("is not given where there are too few readings, or nothing is left", () => {
    expect(shortWaveEnd(white(38, 1))).toBeUndefined();
    expect(shortWaveEnd(white(44, 1))?.ordinates).toBeGreaterThanOrEqual(10);
    expect(shortWaveEnd(new Float64Array(100))).toBeUndefined();
  });
});

describe("flat", () => {
  test("is white noise, but for about one draw in a thousand", () => {
    const bent = Array.from({length: 1000}, (_, seed) => shortWaveEnd(white(121, seed))!.flat).filter((flat) => !flat);
    // Mean 1; six or more come by chance once in 1,700.
    expect(bent.length).toBeLessThan(6);
  });

  test.each([
    ["means of two", 2],
    ["means of five", 5],
  ])("is not what a filter leaves: %s", (_, taken) => {
    for (const seed of [1, 2, 3]) expect(shortWaveEnd(smoothed(400, taken, seed))!.flat).toBe(false);
  });
});
