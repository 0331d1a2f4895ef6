/** Noise with covariance σ² exp(−|x − x′|/L), drawn, and its covariance written out; neither knows how it is whitened. */
import {Matrix} from "ml-matrix";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";

export const redCovariance = (x: Float64Array, sigma: number, length: number): Matrix =>
  Matrix.from1DArray(
    x.length,
    x.length,
    Array.from(x, (a) => Array.from(x, (b) => sigma * sigma * Math.exp(-Math.abs(a - b) / length))).flat(),
  );

/** One draw at places in increasing order: each owes e^(−Δ/L) of itself to the one before. */
export function redNoise(x: Float64Array, sigma: number, length: number, seed: number): Float64Array {
  const deviates = normalDeviates(seededRandom(seed), x.length);
  let last = 0;
  return x.map((at, i) => {
    const rho = i === 0 ? 0 : Math.exp((x[i - 1]! - at) / length);
    last = rho * last + sigma * Math.sqrt(1 - rho * rho) * deviates[i]!;
    return last;
  });
}
