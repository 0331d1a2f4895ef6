/**
 * The complete elliptic integral of the first kind, K(k) = ∫₀^{π/2} dθ / √(1 − k² sin²θ),
 * as π / (2 M(1, k′)) with M the arithmetic-geometric mean and k′ = √(1 − k²).
 * Source: NIST Digital Library of Mathematical Functions, 19.8.5.
 */

/** Arithmetic-geometric mean of two positive numbers, to about 2 ulp. */
export function arithmeticGeometricMean(a: number, b: number): number {
  let x = a;
  let y = b;
  // Convergence is quadratic: 1e-308 beside 1 takes 14 steps.
  for (let step = 0; step < 40 && Math.abs(x - y) > 2e-16 * x; ++step) {
    const mean = (x + y) / 2;
    y = Math.sqrt(x * y);
    x = mean;
  }
  return x;
}

/** K from the modulus k in [0, 1): not the parameter m = k². */
export const completeEllipticK = (k: number): number => ellipticKOfComplement(Math.sqrt((1 - k) * (1 + k)));

/** K from the complementary modulus k′ in (0, 1], exact where k is too near 1 to be held. */
export const ellipticKOfComplement = (complement: number): number =>
  Math.PI / (2 * arithmeticGeometricMean(1, complement));
