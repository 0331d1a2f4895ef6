/** Whether residuals look like white noise along the line. */

/**
 * Ljung–Box statistic of the first lags of residuals in order of chainage, against its mean and spread under
 * white noise (χ² with `lags` degrees of freedom).
 * Source: Ljung & Box, Biometrika 65 (1978) 297 (from memory).
 *
 * @returns standard deviations above the mean, and the correlation of neighbours
 */
export function whiteness(residual: Float64Array, lags = 5): {readonly excess: number; readonly lagOne: number} {
  const n = residual.length;
  if (n < 4 * lags) return {excess: 0, lagOne: 0};
  let mean = 0;
  for (const r of residual) mean += r / n;
  let power = 0;
  for (const r of residual) power += (r - mean) ** 2;
  if (!(power > 0)) return {excess: 0, lagOne: 0};
  let statistic = 0;
  let lagOne = 0;
  for (let lag = 1; lag <= lags; ++lag) {
    let sum = 0;
    for (let i = lag; i < n; ++i) sum += (residual[i] - mean) * (residual[i - lag] - mean);
    const correlation = sum / power;
    if (lag === 1) lagOne = correlation;
    statistic += (correlation * correlation) / (n - lag);
  }
  statistic *= n * (n + 2);
  return {excess: (statistic - lags) / Math.sqrt(2 * lags), lagOne};
}

/** Beyond this many standard deviations residuals are called not white: about 1 line in 1,000 by chance (χ²₅ tail). */
const BY_CHANCE = 5;

/**
 * The excess beyond which residuals are called not white. A rule that stops at a misfit above the number of readings
 * leaves that share of the residual's power unexplained on purpose, and it may all be of one wavelength.
 *
 * @param misfit Σ(residual/σ)²
 */
export function notWhite(readings: number, misfit: number, lags = 5): number {
  const left = Math.max(0, 1 - readings / misfit);
  return BY_CHANCE + (lags * readings * left * left) / Math.sqrt(2 * lags);
}

/**
 * The length L of noise exp(−|x|/L) whose neighbours, `spacing` apart, correlate so; undefined where they do not.
 * An estimate: from one lag, of residuals that have lost what the fit took.
 */
export const lengthFromLagOne = (lagOne: number, spacing: number): number | undefined =>
  lagOne > 0 && lagOne < 1 && spacing > 0 ? -spacing / Math.log(lagOne) : undefined;
