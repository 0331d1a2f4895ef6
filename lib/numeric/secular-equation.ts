/**
 * Eigenvalues of D + ρ z zᵀ, D diagonal and increasing, ρ > 0: the roots of
 *
 *   f(λ) = 1/ρ + Σ_i z_i² / (d_i − λ),
 *
 * one in every (d_j, d_{j+1}) and one above the last.
 *
 * A root is sought as its distance τ from the nearer of the two poles, so that the
 * differences d_i − λ, on which the eigenvectors rest, keep full relative accuracy.
 * Steps interpolate f by a constant and the two neighbouring poles; a bracket stands guard.
 * Source: R.-C. Li, LAPACK Working Note 89 (1994), the middle way; M. Gu & S. Eisenstat,
 * SIAM J. Matrix Anal. Appl. 16 (1995) 172–191, the stopping rule.
 */
import {NumericalError} from "../errors.ts";

const EPSILON = 2 ** -52;
const MAXIMUM_STEPS = 120;

/**
 * Finds root j and writes d_i − λ_j, i = 0 … k − 1, to `gaps` from `at` on.
 *
 * @param d k poles, strictly increasing
 * @param z2 k positive weights z_i²
 * @param total Σ z_i²
 * @returns λ_j
 * @throws {NumericalError} `numeric/no-convergence` after 120 steps
 */
export function secularRootInto(
  gaps: Float64Array,
  at: number,
  d: Float64Array,
  z2: Float64Array,
  k: number,
  j: number,
  rho: number,
  total: number,
): number {
  const inverse = 1 / rho;
  const outer = j === k - 1;
  const width = outer ? rho * total : d[j + 1] - d[j];
  // f at the middle of the interval tells which pole the root is nearer to.
  let middle = inverse;
  for (let i = 0; i < k; ++i) middle += z2[i] / (d[i] - d[j] - 0.5 * width);
  const near = outer || middle >= 0 ? j : j + 1;
  const origin = d[near];
  let low = middle >= 0 ? 0 : 0.5 * width;
  let high = middle >= 0 ? 0.5 * width : width;
  if (near === j + 1) {
    low -= width;
    high = 0;
  }
  for (let i = 0; i < k; ++i) gaps[at + i] = d[i] - origin;
  const pole1 = gaps[at + j];
  const pole2 = outer ? 0 : gaps[at + j + 1];
  let tau = 0.5 * (low + high);
  let before = Number.POSITIVE_INFINITY;
  for (let step = 0; ; ++step) {
    if (step === MAXIMUM_STEPS) {
      throw new NumericalError(
        "numeric/no-convergence",
        `Root ${j + 1} of a secular equation of order ${k} was not met in ${MAXIMUM_STEPS} steps.`,
      );
    }
    let psi = 0;
    let dpsi = 0;
    for (let i = 0; i <= j; ++i) {
      const r = 1 / (gaps[at + i] - tau);
      const t = z2[i] * r;
      psi += t;
      dpsi += t * r;
    }
    let phi = 0;
    let dphi = 0;
    for (let i = j + 1; i < k; ++i) {
      const r = 1 / (gaps[at + i] - tau);
      const t = z2[i] * r;
      phi += t;
      dphi += t * r;
    }
    const f = inverse + psi + phi;
    const size = Math.abs(f);
    // What rounding can make of f at this τ; a smaller value says nothing more.
    if (size <= EPSILON * (k * (inverse - psi + phi) + Math.abs(tau) * (dpsi + dphi))) break;
    if (f > 0) high = tau;
    else low = tau;
    const d1 = pole1 - tau;
    const d2 = pole2 - tau;
    let next: number;
    if (outer) {
      // One pole: f ≈ c + s / (pole − λ) with the value and slope of f.
      const s = d1 * d1 * dpsi;
      const c = f - s / d1;
      next = c > 0 ? tau + d1 + s / c : Number.NaN;
    } else {
      const c = f - d1 * dpsi - d2 * dphi;
      const a = (d1 + d2) * f - d1 * d2 * (dpsi + dphi);
      const b = d1 * d2 * f;
      const root = Math.sqrt(Math.abs(a * a - 4 * b * c));
      next = tau + (a <= 0 ? (a - root) / (2 * c) : (2 * b) / (a + root));
    }
    // Bisect when the step leaves the bracket or f is not falling fast.
    if (!(next > low && next < high) || (step > 3 && size > 0.1 * before)) next = bisect(low, high);
    before = size;
    if (next === tau || next <= low || next >= high) break;
    tau = next;
  }
  for (let i = 0; i < k; ++i) gaps[at + i] -= tau;
  return origin + tau;
}

/** The middle of a bracket on one side of the origin pole: geometric once it spans more than a decade. */
function bisect(low: number, high: number): number {
  if (low > 0 && high > 10 * low) return Math.sqrt(low) * Math.sqrt(high);
  if (high < 0 && low < 10 * high) return -Math.sqrt(-low) * Math.sqrt(-high);
  return 0.5 * (low + high);
}
