/**
 * Noise correlated along the line, σ² exp(−|x − x′|/L), whitened exactly. Such noise is a Markov process: given the
 * reading before it, a reading owes nothing to those farther back, so that in the order of chainage
 *
 *   w_0 = r_0/σ,   w_i = (r_i − ρ_i r_(i−1)) / (σ √(1 − ρ_i²)),   ρ_i = exp(−Δ_i/L)
 *
 * are independent with variance one, whatever the steps Δ_i. L = 0 is white noise, ρ = 0.
 * Source: Uhlenbeck & Ornstein, Phys. Rev. 36 (1930) 823; Doob, Ann. Math. 43 (1942) 351 (both from memory).
 */

/** How each reading is whitened: (r − ρ r_before) / noise. */
export interface Whitening {
  /** What divides, SI: the standard deviation of the noise, or of the part of it that the reading before does not tell. */
  readonly noise: Float64Array;
  /** Place of the reading before it in the order of chainage, of the same channel; −1 where there is none. */
  readonly before: Int32Array;
  readonly rho: Float64Array;
  /** Whether any ρ is above zero; white noise keeps to the short road. */
  readonly correlated: boolean;
}

/** Writes the whitening of one channel, `x.length` readings from place `at` on. @param length L, m; 0: white */
export function chainInto(
  {noise, before, rho}: Omit<Whitening, "correlated">,
  at: number,
  x: Float64Array,
  sigma: number,
  length: number,
): void {
  noise.fill(sigma, at, at + x.length);
  if (!(length > 0)) return;
  const order = Int32Array.from(x.keys()).sort((i, j) => x[i] - x[j] || i - j);
  for (let k = 1; k < order.length; ++k) {
    const step = (x[order[k]] - x[order[k - 1]]) / length;
    const i = at + order[k];
    before[i] = at + order[k - 1];
    rho[i] = Math.exp(-step);
    // 1 − ρ² without cancellation where stations are dense.
    noise[i] = sigma * Math.sqrt(-Math.expm1(-2 * step));
  }
}

/** Values over the readings, whitened; a new list. */
export function whitened(values: Float64Array, {noise, before, rho, correlated}: Whitening): Float64Array {
  if (!correlated) return values.map((value, i) => value / noise[i]);
  return values.map((value, i) => (before[i] < 0 ? value : value - rho[i] * values[before[i]]) / noise[i]);
}

/** Whitens what all readings say; `target` must not alias `raw`. */
export function whitenInto(
  target: Float64Array,
  raw: Float64Array,
  {noise, before, rho, correlated}: Whitening,
): Float64Array {
  for (let i = 0; i < raw.length; ++i) target[i] = raw[i] / noise[i];
  for (let i = 0; correlated && i < raw.length; ++i)
    if (before[i] >= 0) target[i] -= (rho[i] * raw[before[i]]) / noise[i];
  return target;
}

/** The transpose of `whitenInto`; `target` must not alias `white`. */
export function whitenAdjointInto(
  target: Float64Array,
  white: Float64Array,
  {noise, before, rho, correlated}: Whitening,
): Float64Array {
  for (let i = 0; i < white.length; ++i) target[i] = white[i] / noise[i];
  for (let i = 0; correlated && i < white.length; ++i)
    if (before[i] >= 0) target[before[i]] -= (rho[i] * white[i]) / noise[i];
  return target;
}

/** The values that were whitened; a new list. @param x chainage of the readings */
export function unwhitened(
  values: Float64Array,
  x: Float64Array,
  {noise, before, rho, correlated}: Whitening,
): Float64Array {
  const result = values.map((value, i) => value * noise[i]);
  if (!correlated) return result;
  const order = Int32Array.from(x.keys()).sort((i, j) => x[i] - x[j] || i - j);
  for (const i of order) if (before[i] >= 0) result[i] += rho[i] * result[before[i]];
  return result;
}

/**
 * Whitened responses of the readings `first … last − 1`, in the order of chainage, to the head of `target`.
 * @param raw response of a reading before whitening; the one before the first may be asked for
 */
export function whitenedInto(
  target: Float64Array,
  {noise, before, rho}: Whitening,
  first: number,
  last: number,
  raw: (i: number) => number,
): Float64Array {
  for (let i = first; i < last; ++i) target[i - first] = raw(i);
  // From the right, so that what stands before is still raw.
  for (let i = last - 1; i >= first; --i) {
    const k = before[i];
    if (k >= 0) target[i - first] -= rho[i] * (k >= first ? target[k - first] : raw(k));
    target[i - first] /= noise[i];
  }
  return target;
}
