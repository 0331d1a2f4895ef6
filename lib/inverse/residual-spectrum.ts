/**
 * The noise by the residual: the level of the shortest-wave half of its spectrum. A source some spacings below the
 * line has no waves so short, and the fit has taken none of them, so that noise is all that is there; the other half
 * may hold what the fit left of the anomaly.
 *
 * Each ordinate |Σ w_j e^(−2πi jk/n)|²/n of white noise is its variance times an exponential deviate, independent of
 * the others (at 0 < k < n/2). The median of such deviates is ln 2, and is not moved by a few lines in the spectrum.
 * Source: Priestley, Spectral Analysis and Time Series (1981), ch. 6 (from memory).
 */

export interface ShortWaveEnd {
  /** Standard deviation of the noise there, in the unit of the residual. */
  readonly level: number;
  /** Ordinates used. */
  readonly ordinates: number;
  /** Whether they could be those of white noise; if not the level is that of no one noise: a filter or a source is in it. */
  readonly flat: boolean;
}

/** Ordinates below which their median says too little: its own error is then above a quarter (heuristic). */
const LEAST_ORDINATES = 10;
/** Ordinates beyond which more would only cost time: the level is then known to 3 %. They are spread over the half. */
const MOST_ORDINATES = 512;
/**
 * Greatest distance of the cumulated spectrum of white noise from a straight line, times the root of the ordinates:
 * the Kolmogorov–Smirnov quantile of 1 in 1,000.
 * Source: Bartlett, An Introduction to Stochastic Processes (1955), §9.23 (from memory).
 */
const FARTHEST = 1.95;

/** Relative standard error of the level: half of that of a median of exponentials, 1/(ln 2 √m). */
export const levelError = (ordinates: number): number => 0.5 / (Math.LN2 * Math.sqrt(ordinates));

/**
 * @param residual whitened, in the order of chainage; uneven steps do not matter to white noise
 * @returns undefined where it is too short, or nothing is left in it
 */
export function shortWaveEnd(residual: Float64Array): ShortWaveEnd | undefined {
  const n = residual.length;
  const first = Math.ceil(n / 4);
  const available = Math.ceil(n / 2) - first;
  const m = Math.min(available, MOST_ORDINATES);
  if (!(m >= LEAST_ORDINATES)) return undefined;
  const power = new Float64Array(m);
  for (let j = 0; j < m; ++j) power[j] = ordinate(residual, first + Math.floor((j * available) / m));
  const total = power.reduce((sum, value) => sum + value, 0);
  const sorted = power.toSorted();
  const median = 0.5 * (sorted[(m - 1) >> 1]! + sorted[m >> 1]!);
  if (!(median > 0)) return undefined;
  let cumulated = 0;
  let farthest = 0;
  for (let j = 0; j < m; ++j) {
    // The sum steps up at j: both sides of the step count.
    farthest = Math.max(farthest, Math.abs(cumulated / total - j / m));
    cumulated += power[j]!;
    farthest = Math.max(farthest, Math.abs(cumulated / total - (j + 1) / m));
  }
  return {level: Math.sqrt(median / Math.LN2), ordinates: m, flat: farthest * Math.sqrt(m) <= FARTHEST};
}

/** |Σ w_j e^(−2πi jk/n)|²/n, turned from reading to reading: exact to n ε. */
function ordinate(residual: Float64Array, k: number): number {
  const n = residual.length;
  const turn = (2 * Math.PI * k) / n;
  const [cos, sin] = [Math.cos(turn), Math.sin(turn)];
  let re = 0;
  let im = 0;
  let c = 1;
  let s = 0;
  for (let j = 0; j < n; ++j) {
    re += residual[j]! * c;
    im += residual[j]! * s;
    const next = c * cos - s * sin;
    s = s * cos + c * sin;
    c = next;
  }
  return (re * re + im * im) / n;
}
