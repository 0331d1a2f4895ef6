/**
 * Legendre functions of the second kind, Q_k(z) = ½ ∫₋₁¹ P_k(t) / (z − t) dt, off the
 * segment [−1, 1], for k = 0, 1, 2, …
 *
 * Q is the solution of (k + 1) Q_{k+1} = (2k + 1) z Q_k − k Q_{k−1} that falls, so ratios
 * r_k = Q_k / Q_{k−1} are found backwards, r_k = k / ((2k + 1) z − (k + 1) r_{k+1}), from an
 * index where the error of any start has died, and multiplied up from Q_0 = ½ ln((z+1)/(z−1)).
 * Source: W. Gautschi, SIAM Review 9 (1967) 24–82.
 */

/** The ratio of the two solutions falls below e^{−40} over the extra steps. */
const DECAY = 40;

/** Room for the ratios, kept by the caller between calls. */
export interface SecondKindWorkspace {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

export const secondKindWorkspace = (count: number): SecondKindWorkspace => ({
  re: new Float64Array(count),
  im: new Float64Array(count),
});

/**
 * Writes Im Q_k(x + iy), k = 0 … count − 1, to `target` from `offset` on.
 *
 * Absolute error below about 1e-15 √k on the scale of |Q_0|. Steps: count + 20 / ln ρ, where
 * ρ = |z + √(z² − 1)| is about 1 + y / √(1 − x²) inside the segment.
 *
 * @param x in [−1, 1]
 * @param y > 0
 */
export function secondKindImaginaryInto(
  target: Float64Array,
  offset: number,
  x: number,
  y: number,
  count: number,
  workspace: SecondKindWorkspace,
): Float64Array {
  const {re, im} = workspace;
  // ln ρ = arsinh of half the minor axis of the ellipse with foci ±1 through z.
  const sum = (x - 1) * (x + 1) + y * y;
  const root = Math.sqrt(sum * sum + 4 * y * y);
  const minor = Math.sqrt(sum > 0 ? 0.5 * (root + sum) : (2 * y * y) / (root - sum));
  const extra = Math.ceil(DECAY / (2 * Math.asinh(minor)));
  let r = 0;
  let s = 0;
  for (let k = count - 1 + extra; k > 0; --k) {
    const a = (2 * k + 1) * x - (k + 1) * r;
    const b = (2 * k + 1) * y - (k + 1) * s;
    const scale = k / (a * a + b * b);
    r = a * scale;
    s = -b * scale;
    if (k < count) {
      re[k] = r;
      im[k] = s;
    }
  }
  let u = 0.25 * Math.log1p((4 * x) / ((x - 1) * (x - 1) + y * y));
  let v = -0.5 * Math.atan2(2 * y, sum);
  target[offset] = v;
  for (let k = 1; k < count; ++k) {
    const next = u * re[k] - v * im[k];
    v = u * im[k] + v * re[k];
    u = next;
    target[offset + k] = v;
  }
  return target;
}
