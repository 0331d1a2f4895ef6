/**
 * How fast the eigenvalues of the truncated Poisson operator fall, and how many
 * stand above a floor.
 *
 * ln μ_n ≈ −(n + ½) R with R = π K(sech πa/h) / K(tanh πa/h), a the half-length and h the
 * height. The rate R per mode is H. Widom's, Arch. Rational Mech. Anal. 17 (1964) 215–229
 * (from memory of the literature). The ½ is a numerical finding, not a theorem: in
 * 260-digit arithmetic −ln μ_n − (n + ½) R is about 0.16 / n for h/a from 0.5 to 5.
 */
import {arithmeticGeometricMean} from "../numeric/elliptic.ts";

/** Above this sech²(s) is below ε and K(tanh s) = s + ln 2 to rounding. */
const FAR = 20;

/** R for h/a = `ratio`; μ falls by e^{−R} a mode. Relative error a few ε. */
export function modeDecayRate(ratio: number): number {
  const s = Math.PI / ratio;
  // K(sech s) = π / (2 M(1, tanh s)); K(tanh s) = π / (2 M(1, sech s)), → ln(4 / sech s).
  if (s > FAR) return (Math.PI * Math.PI) / (2 * (s + Math.LN2));
  return (Math.PI * arithmeticGeometricMean(1, 1 / Math.cosh(s))) / arithmeticGeometricMean(1, Math.tanh(s));
}

/** exp(−(n + ½) R): μ_n but for a factor 1 − O(1/n). */
export const decayLaw = (n: number, rate: number): number => Math.exp(-(n + 0.5) * rate);

/** Number of n ≥ 0 with exp(−(n + ½) R) above `floor` < 1. */
export const modesByLaw = (rate: number, floor: number): number =>
  Math.max(0, Math.floor(-Math.log(floor) / rate - 0.5) + 1);
