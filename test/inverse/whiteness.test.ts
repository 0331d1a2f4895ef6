import {describe, expect, test} from "vitest";
import {notWhite, whiteness} from "../../lib/inverse/whiteness.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {absoluteClose} from "../harness/assert-close.ts";

/** Where the misfit is no more than the number of readings, nothing is left unexplained on purpose. */
const NOT_WHITE = notWhite(100, 100);

const white = (count: number, seed: number) => normalDeviates(seededRandom(seed), count);

describe("whiteness of residuals", () => {
  test("of white noise lies about its mean with unit spread", () => {
    // Ljung–Box over five lags is χ²₅: excess has mean 0 and standard deviation 1; 400 draws, four standard errors.
    const draws = Array.from({length: 400}, (_, seed) => whiteness(white(150, seed)).excess);
    const mean = draws.reduce((sum, e) => sum + e, 0) / 400;
    const spread = Math.sqrt(draws.reduce((sum, e) => sum + (e - mean) ** 2, 0) / 399);
    absoluteClose(mean, 0, 0.2, "4/√400");
    // The kurtosis of χ²₅ is 3 + 12/5, so the spread has standard error √(4.4/(4 × 400)) = 0.052.
    absoluteClose(spread, 1, 0.21, "four standard errors");
    // One in 1,000 by chance: with 400 draws, more than four has probability 1e-4.
    expect(draws.filter((e) => e > NOT_WHITE).length).toBeLessThanOrEqual(4);
  });

  test("sees correlated residuals, whatever their size and level", () => {
    const e = white(201, 3);
    const residual = Float64Array.from({length: 200}, (_, i) => 1e-8 * (3 + e[i] + e[i + 1]));
    const {excess, lagOne} = whiteness(residual);
    expect(excess).toBeGreaterThan(NOT_WHITE);
    // A moving sum of two has correlation 1/2; standard error below 1/√200.
    absoluteClose(lagOne, 0.5, 0.21, "three standard errors");
  });

  test("sees a residual that swings from reading to reading", () => {
    const {excess, lagOne} = whiteness(white(100, 4).map((e, i) => e + (i % 2 === 0 ? 1.5 : -1.5)));
    expect(excess).toBeGreaterThan(NOT_WHITE);
    expect(lagOne).toBeLessThan(-0.4);
  });

  test("agrees with the statistic worked by hand", () => {
    // 1, −1 … twenty times: r_k = (−1)^k (20 − k)/20, Q = 20 × 22 Σ r_k²/(20 − k) = 22/20 Σ (20 − k) = 93.5 over five lags.
    const {excess, lagOne} = whiteness(Float64Array.from({length: 20}, (_, i) => (i % 2 === 0 ? 1 : -1)));
    absoluteClose(excess, (93.5 - 5) / Math.sqrt(10), 1e-12, "rounding");
    absoluteClose(lagOne, -19 / 20, 1e-15, "rounding");
  });

  test("says nothing of too few residuals or none at all", () => {
    expect(whiteness(white(19, 5))).toEqual({excess: 0, lagOne: 0});
    expect(whiteness(new Float64Array(50))).toEqual({excess: 0, lagOne: 0});
  });

  test("allows for what a rule leaves unexplained on purpose", () => {
    expect([notWhite(200, 150), notWhite(200, 200)]).toEqual([NOT_WHITE, NOT_WHITE]);
    // The discrepancy target leaves 2√(2N) of N + 2√(2N): 40 of 240. All of one wavelength it raises each of five
    // correlations by 40/240, so Q by about 5 N (1/6)², over its spread √10.
    absoluteClose(notWhite(200, 240) - NOT_WHITE, (5 * 200) / 36 / Math.sqrt(10), 1e-12, "rounding");
  });
});
