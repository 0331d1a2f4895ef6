/**
 * Noise from the record itself: the fourth difference along the line kills what is smooth
 * (any cubic) and leaves white noise multiplied by √70, since 1 + 16 + 36 + 16 + 1 = 70.
 * Common practice of survey quality control; the median form σ = 1.4826 median|Δ⁴| / √70
 * (1.4826 = 1/Φ⁻¹(¾)) is not moved by spikes and short anomalies.
 *
 * Stations are never quite even. The weights of the fourth divided difference, scaled to unit
 * square sum, kill cubics at any spacing and are (1, −4, 6, −4, 1)/√70 when it is even.
 *
 * Of noise with covariance σ² exp(−|x − x′|/L) a difference Σ a_i r_i has the variance σ² Σ a_i a_j exp(−|x_i − x_j|/L),
 * less than that of white noise where neighbours are alike: each is divided by the root of its own.
 */
import {InputError} from "../errors.ts";
import {byChainage} from "./by-chainage.ts";
import {median} from "./order-statistics.ts";

export interface RecordNoise {
  /** Standard deviation of the noise, in the unit of the values. */
  readonly sigma: number;
  /** Fourth differences used. */
  readonly used: number;
  /** Median spacing of the stations used, m. */
  readonly spacing: number;
  /** Correlation of successive fourth differences; −0.8 for white noise. NaN with fewer than two in a row. */
  readonly lagOne: number;
  /** How far off that of the noise assumed it may lie: three standard errors. */
  readonly lagOneTolerance: number;
  /**
   * Whether it lies that near; if not, the sigma is not that of the noise assumed (white, or of the length given):
   * signal, drift or a filter is in it.
   */
  readonly white: boolean;
}

/** Differences below which a median says too little: its own error is then above a quarter (heuristic). */
const LEAST_DIFFERENCES = 20;
/** Largest over smallest step within five stations; beyond it the weights lean on two stations (heuristic). */
const EVENNESS = 2;
/** Autocorrelation of (1, −4, 6, −4, 1) at lag one: −56/70. */
export const WHITE_LAG_ONE = -56 / 70;
/**
 * Standard error of the lag-one correlation times √n for white noise, from Bartlett's formula
 * Σ (ρ(k+1) + ρ(k−1) − 2ρ(1)ρ(k))², k ≥ 1, with ρ = −56, 28, −8, 1 over 70.
 * Source: Bartlett, J. R. Stat. Soc. Suppl. 8 (1946) 27 (from memory).
 */
const WHITE = {lagOne: WHITE_LAG_ONE, error: bartlett([1, WHITE_LAG_ONE, 28 / 70, -8 / 70, 1 / 70])};
const EVEN_WEIGHTS = [1, -4, 6, -4, 1];
/** Lags of the autocorrelation of fourth differences that count; beyond four it falls like (Δ/L)⁸ e^(−kΔ/L). */
const LAGS = 24;

/** As for white noise, of noise correlated over `length`, at even spacing. */
function lagOneOf(spacing: number, length: number): {readonly lagOne: number; readonly error: number} {
  if (!(length > 0)) return WHITE;
  const covariance = (lag: number): number => {
    let sum = 0;
    // The weights add up to zero, so that 1 may be taken off the covariance: nothing cancels at a great length.
    for (let i = 0; i < 5; ++i)
      for (let j = 0; j < 5; ++j)
        sum += EVEN_WEIGHTS[i]! * EVEN_WEIGHTS[j]! * Math.expm1((-Math.abs(i - j + lag) * spacing) / length);
    return sum;
  };
  const all = Array.from({length: LAGS}, (_, lag) => covariance(lag) / covariance(0));
  return {lagOne: all[1]!, error: bartlett(all)};
}

/**
 * The length over which noise is correlated whose fourth differences, taken for those of white noise, give `share` of
 * its standard deviation at even spacing: with ρ = e^(−Δ/L) neighbour by neighbour,
 * share² = (70 − 112 ρ + 56 ρ² − 16 ρ³ + 2 ρ⁴)/70, which falls from 1 to 0 as ρ grows.
 *
 * @param share in (0, 1)
 */
export function lengthFromShare(share: number, spacing: number): number {
  let [low, high] = [0, 1];
  for (let step = 0; step < 50; ++step) {
    const rho = 0.5 * (low + high);
    const found = (70 + rho * (-112 + rho * (56 + rho * (-16 + 2 * rho)))) / 70;
    if (found > share * share) low = rho;
    else high = rho;
  }
  return -spacing / Math.log(0.5 * (low + high));
}

function bartlett(rho: readonly number[]): number {
  const at = (k: number) => rho[Math.abs(k)] ?? 0;
  let sum = 0;
  for (let k = 1; k <= rho.length; ++k) sum += (at(k + 1) + at(k - 1) - 2 * at(1) * at(k)) ** 2;
  return Math.sqrt(sum);
}

/**
 * @param chainage m, in any order
 * @param values as many readings
 * @param length over which the noise is correlated, m; 0: it is white
 * @throws {InputError} `noise/record-too-short` with fewer than 20 usable differences,
 *   `noise/record-without-noise` when more than half of them are zero
 */
export function recordNoise(chainage: Float64Array, values: Float64Array, length = 0): RecordNoise {
  const differences = fourthDifferences(chainage, values, length);
  const used = differences.filter((difference) => !Number.isNaN(difference));
  if (used.length < LEAST_DIFFERENCES)
    throw new InputError(
      "noise/record-too-short",
      `Only ${used.length} runs of five near-evenly spaced stations were found; the noise of a record needs ${LEAST_DIFFERENCES}. Give the standard deviation with --noise.`,
    );
  const sigma = 1.4826 * median(used.map(Math.abs));
  // Rounding of the sums alone leaves some ε of the largest reading.
  if (!(sigma > 64 * Number.EPSILON * values.reduce((most, value) => Math.max(most, Math.abs(value)), 0)))
    throw new InputError(
      "noise/record-without-noise",
      "More than half of the fourth differences of the record are zero: the readings were rounded, interpolated or smoothed, and their noise cannot be seen. Give the standard deviation with --noise.",
    );
  const {lagOne, pairs} = lagOneCorrelation(differences);
  const spacing = spacingOf(chainage);
  const expected = lagOneOf(spacing, length);
  const lagOneTolerance = (3 * expected.error) / Math.sqrt(Math.max(pairs, 1));
  return {
    sigma,
    used: used.length,
    spacing,
    lagOne,
    lagOneTolerance,
    white: Math.abs(lagOne - expected.lagOne) <= lagOneTolerance,
  };
}

/** Median distance between neighbours along the line, repeats left out; NaN for fewer than two places. */
export function spacingOf(chainage: Float64Array): number {
  const order = byChainage(chainage);
  const steps: number[] = [];
  for (let i = 1; i < order.length; ++i) {
    const step = chainage[order[i]!]! - chainage[order[i - 1]!]!;
    if (step > 0) steps.push(step);
  }
  return median(steps);
}

/**
 * Scaled so that the noise keeps its standard deviation; NaN where five stations are not
 * near-even, which also parts the runs. Of stations at one place the first is taken.
 */
function fourthDifferences(chainage: Float64Array, values: Float64Array, length: number): Float64Array {
  const order = byChainage(chainage).filter(
    (station, k, all) => k === 0 || chainage[station]! > chainage[all[k - 1]!]!,
  );
  const result = new Float64Array(Math.max(0, order.length - 4));
  const at = new Float64Array(5);
  const weights = new Float64Array(5);
  for (let first = 0; first < result.length; ++first) {
    let least = Infinity;
    let largest = 0;
    for (let i = 0; i < 5; ++i) {
      at[i] = chainage[order[first + i]!]!;
      if (i > 0) {
        least = Math.min(least, at[i]! - at[i - 1]!);
        largest = Math.max(largest, at[i]! - at[i - 1]!);
      }
    }
    if (!(largest <= EVENNESS * least)) {
      result[first] = NaN;
      continue;
    }
    let sum = 0;
    let squares = 0;
    for (let i = 0; i < 5; ++i) {
      let product = 1;
      // Steps in units of the largest: no overflow, whatever the unit of the chainage.
      for (let j = 0; j < 5; ++j) if (j !== i) product *= (at[i]! - at[j]!) / largest;
      sum += values[order[first + i]!]! / product;
      squares += 1 / (product * product);
      weights[i] = 1 / product;
    }
    result[first] = sum / Math.sqrt(length > 0 ? variance(weights, at, length) : squares);
  }
  return result;
}

/** Σ a_i a_j exp(−|x_i − x_j|/L); the weights add up to zero, so that 1 may be taken off, and nothing cancels. */
function variance(weights: Float64Array, at: Float64Array, length: number): number {
  let sum = 0;
  for (let i = 0; i < 5; ++i)
    for (let j = 0; j < i; ++j) sum += 2 * weights[i]! * weights[j]! * Math.expm1(-Math.abs(at[i]! - at[j]!) / length);
  return sum;
}

/** About zero, not about the mean: the expectation of a fourth difference of noise is zero. */
function lagOneCorrelation(differences: Float64Array): {lagOne: number; pairs: number} {
  let product = 0;
  let squares = 0;
  let pairs = 0;
  for (let i = 1; i < differences.length; ++i) {
    const a = differences[i - 1]!;
    const b = differences[i]!;
    if (Number.isNaN(a) || Number.isNaN(b)) continue;
    product += a * b;
    squares += (a * a + b * b) / 2;
    ++pairs;
  }
  return {lagOne: pairs > 0 && squares > 0 ? product / squares : NaN, pairs};
}
