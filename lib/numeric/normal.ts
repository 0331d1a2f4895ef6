/**
 * The normal distribution: erfc, distribution function, quantiles, and the
 * quantile of a folded normal, which is the half-width of an interval whose
 * centre is off by a known bias.
 */
import {NumericalError} from "../errors.ts";

/**
 * Chebyshev coefficients of (1 + x) eˣ² erfc x in s = (x − 2)/(x + 2), x ≥ 0.
 * Written by test/reference/erfcx-chebyshev.py in 50-digit arithmetic.
 */
const SCALED_ERFC = Float64Array.of(
  0.77669137760708,
  -0.22836472289031626,
  0.007865722326596006,
  0.010488864927603514,
  -0.0025468631391996634,
  -2.8878658172054086e-5,
  8.7999437989666e-5,
  -3.4745017165396845e-7,
  -3.5980662238990517e-6,
  -1.4381599404319034e-7,
  1.5958722403552472e-7,
  2.1492268688640917e-8,
  -6.066687732174204e-9,
  -1.954937092727581e-9,
  7.153685898778454e-11,
  1.2872321182257737e-10,
  1.7599922759007792e-11,
  -5.056596830484809e-12,
  -2.165472713165219e-12,
  -1.039297535029439e-13,
  1.298686474521839e-13,
  3.729969690761237e-14,
  -7.075626243500149e-16,
  -3.006041419279411e-15,
  -7.191974020084537e-16,
  4.6706732045434017e-17,
  7.091842371207539e-17,
  1.6170791079896452e-17,
  -1.2588125117360679e-18,
  -1.7536928396402964e-18,
);

/** eˣ² erfc x for x ≥ 0, relative error below 4ε. */
function scaledErfc(x: number): number {
  const s = x < 1e300 ? (x - 2) / (x + 2) : 1;
  let b1 = 0;
  let b2 = 0;
  for (let j = SCALED_ERFC.length - 1; j > 0; --j) {
    const b = 2 * s * b1 - b2 + SCALED_ERFC[j];
    b2 = b1;
    b1 = b;
  }
  return (s * b1 - b2 + SCALED_ERFC[0]) / (1 + x);
}

/** e^{−x²·half}; x² is split so that its rounding does not grow into the result. */
function gaussian(x: number, half: number): number {
  const head = Math.round(x * 16) / 16;
  return Math.exp(-half * head * head) * Math.exp(-half * (x - head) * (x + head));
}

/**
 * Complementary error function, 2/√π ∫ₓ^∞ e^{−t²} dt. Relative error below 2e-15
 * for x in [−6, 26]; beyond 26.6 the result leaves the normal range.
 */
export function erfc(x: number): number {
  if (x < 0) return 2 - erfc(-x);
  return x > 28 ? 0 : gaussian(x, 1) * scaledErfc(x);
}

/** Φ(x); relative error below 3e-15 also in the lower tail, down to x = −37. */
export function normalCdf(x: number): number {
  if (x > 0) return 1 - normalCdf(-x);
  return x < -39 ? 0 : 0.5 * gaussian(x, 0.5) * scaledErfc(-x * Math.SQRT1_2);
}

/** The density e^{−x²/2} / √(2π). */
export const normalDensity = (x: number): number => Math.exp(-0.5 * x * x) * 0.3989422804014327;

/**
 * x with Φ(x) = level, to a few ε of x below the median and of 1 − level above it.
 *
 * Start: Abramowitz & Stegun 26.2.23 (error 4.5e-4); two steps of Halley's method
 * on Φ(x)/level − 1 finish it, the first leaving some 1e-11.
 *
 * @throws {NumericalError} `numeric/no-quantile` unless 0 < level < 1
 */
export function normalQuantile(level: number): number {
  if (!(level > 0 && level < 1)) {
    throw new NumericalError(
      "numeric/no-quantile",
      `A quantile of the normal distribution was asked at level ${level}; it must lie between 0 and 1.`,
    );
  }
  if (level > 0.5) return -lowerQuantile(1 - level);
  return lowerQuantile(level);
}

/** The quantile at p ≤ 1/2. */
function lowerQuantile(p: number): number {
  const t = Math.sqrt(-2 * Math.log(p));
  let x = (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308))) - t;
  for (let step = 0; step < 3; ++step) {
    // Φ/φ = √(π/2) eˣ²ᐟ² erfc is well scaled in the tail, where Φ and φ both vanish.
    const mills = Math.sqrt(Math.PI / 2) * scaledErfc(Math.max(0, -x) * Math.SQRT1_2);
    const ratio = x <= 0 ? mills * (1 - p / normalCdf(x)) : (normalCdf(x) - p) / normalDensity(x);
    x -= ratio / (1 + 0.5 * x * ratio);
  }
  return x;
}

/** Two ulp of one: what the tails, summed and taken from one, can be off by. */
const ROUNDING = 2 ** -51;

/**
 * The c with Φ(c − t) − Φ(−c − t) = level: the `level` quantile of |X|, X normal
 * with mean t and unit variance. The level is met
 * to 1e-15 absolute, in about two microseconds.
 *
 * c lies between max(t + z(level), z((1 + level)/2)) and t + z((1 + level)/2), z the normal
 * quantile: |X| ≥ X, |X| grows with t, and one tail is at most half of both.
 * Newton steps from the lower end, where the function is concave for level ≥ 1/2
 * and they cannot overshoot; elsewhere the bracket catches them.
 *
 * @param t ≥ 0: bias over standard deviation
 * @param level in (0, 1)
 * @throws {NumericalError} `numeric/no-quantile` for other arguments;
 *   `numeric/no-convergence` if 60 steps do not meet it
 */
export function foldedNormalQuantile(t: number, level: number): number {
  if (!(t >= 0 && t < Infinity && level > 0 && level < 1)) {
    throw new NumericalError(
      "numeric/no-quantile",
      `A quantile of a folded normal was asked for mean ${t} and level ${level}; they must be a finite number ≥ 0 and a level between 0 and 1.`,
    );
  }
  const twoSided = -lowerQuantile((1 - level) / 2);
  let low = Math.max(t + normalQuantile(level), twoSided);
  // Beyond 8 the far tail is under 1e-15 of the level: c = t + z(level).
  if (t + low > 8.5 && low > 0) return low;
  let high = t + twoSided;
  let c = low;
  for (let step = 0; step < 60; ++step) {
    // Missing from 1, in tails: no cancellation for levels near one.
    const missing = normalCdf(t - c) + normalCdf(-c - t) - (1 - level);
    if (Math.abs(missing) <= ROUNDING) return c;
    if (missing > 0) low = Math.max(low, c);
    else high = Math.min(high, c);
    let next = c + missing / (normalDensity(c - t) + normalDensity(c + t));
    if (!(next >= low && next <= high)) next = (low + high) / 2;
    const change = Math.abs(next - c);
    c = next;
    if (change <= 1e-14 * (1 + c)) return c;
  }
  throw new NumericalError(
    "numeric/no-convergence",
    `The ${level} quantile of a folded normal with mean ${t} was not met in 60 steps; the last value was ${c}.`,
  );
}
