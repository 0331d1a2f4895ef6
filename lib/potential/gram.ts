/**
 * Inner products of Poisson kernels over a support, in closed form.
 *
 * With w = x + iz, L_S(w) = Σ_parts ln((b − w)/(a − w)) over the parts [a, b] of S,
 *
 *   ⟨P_w, P_v⟩_S = (1/2π²) Re { [L(w) − conj L(v)]/(w − conj v) − [L(w) − L(v)]/(w − v) }
 *
 * and the last fraction tends to L′(w) = Σ [1/(a − w) − 1/(b − w)] as v → w. Both follow from partial fractions of
 * P_w(t) = (1/π) Im 1/(t − w). Derived for this project; checked against quadrature in the tests.
 */
import type {Support} from "../geometry/interval.ts";

/** L_S at one point: real part ln of the moduli, imaginary part the angle that S subtends. */
export interface SupportLogarithm {
  readonly x: number;
  readonly z: number;
  readonly re: number;
  readonly im: number;
}

/**
 * L_S(x + iz), z > 0. The angle of each part is one atan2 and the modulus half a log1p:
 * for thin far parts differences of logarithms lose four to sixteen digits.
 */
export function supportLogarithm(support: Support, x: number, z: number): SupportLogarithm {
  let re = 0;
  let im = 0;
  for (const {from, to} of support) {
    const a = from - x;
    const b = to - x;
    // |b − w|²/|a − w|² = 1 + (b − a)(b + a)/|a − w|², or its inverse: the argument is kept ≥ 0, since near −1 the
    // logarithm of a long part below one of its ends would lose digits. Mirrored supports then mirror to the bit.
    if (a + b >= 0) re += 0.5 * Math.log1p(((b - a) * (b + a)) / (a * a + z * z));
    else re -= 0.5 * Math.log1p(((a - b) * (a + b)) / (b * b + z * z));
    im += Math.atan2(z * (b - a), z * z + a * b);
  }
  return {x, z, re, im};
}

/** Closeness, over the sum of the heights, below which the difference quotient is taken as a mean; see `gramEntry`. */
const CONFLUENT = 1e-2;
/** Outer node and weights of the three-point Gauss–Legendre rule on [−1/2, 1/2]. */
const OUTER = 0.5 * Math.sqrt(0.6);
const OUTER_WEIGHT = 5 / 18;
const MIDDLE_WEIGHT = 8 / 18;

/**
 * ⟨P_w, P_v⟩ over the support, 1/m.
 *
 * The quotient [L(w) − L(v)]/(w − v) cancels when w ≈ v. It is the mean of L′ between the two, so within a hundredth
 * of the heights it is taken by three Gauss points, whose error is |w − v|⁶ L⁽⁷⁾/2,016,000; outside, rounding costs
 * ε/1e-2. Both are below 1e-13 of 1/(π(z_w + z_v)), the entry of the endless line (measured in the tests: 7e-15); a
 * support far from both points leaves a small difference of the two fractions, with the same absolute error.
 */
export function gramEntry(support: Support, w: SupportLogarithm, v: SupportLogarithm): number {
  const dx = w.x - v.x;
  const dz = w.z - v.z;
  const sz = w.z + v.z;
  // [L(w) − conj L(v)] / (w − conj v), numerator (re, im), denominator (dx, sz)
  const conjugate = ((w.re - v.re) * dx + (w.im + v.im) * sz) / (dx * dx + sz * sz);
  const distance2 = dx * dx + dz * dz;
  let direct: number;
  if (distance2 < CONFLUENT * CONFLUENT * sz * sz) direct = meanSlope(support, w, v);
  else direct = ((w.re - v.re) * dx + (w.im - v.im) * dz) / distance2;
  return (conjugate - direct) / (2 * Math.PI * Math.PI);
}

/** Mean of Re L′ between two points close to each other. */
function meanSlope(support: Support, w: SupportLogarithm, v: SupportLogarithm): number {
  const x = 0.5 * (w.x + v.x);
  const z = 0.5 * (w.z + v.z);
  const dx = OUTER * (w.x - v.x);
  const dz = OUTER * (w.z - v.z);
  const outer = logarithmSlope(support, x - dx, z - dz) + logarithmSlope(support, x + dx, z + dz);
  return OUTER_WEIGHT * outer + MIDDLE_WEIGHT * logarithmSlope(support, x, z);
}

/** Re L′(w) = Re Σ [1/(a − w) − 1/(b − w)]. */
function logarithmSlope(support: Support, x: number, z: number): number {
  let sum = 0;
  for (const {from, to} of support) {
    const a = from - x;
    const b = to - x;
    sum += a / (a * a + z * z) - b / (b * b + z * z);
  }
  return sum;
}
