/** The chi-squared distribution: tails by the incomplete gamma function, and quantiles. */
import {NumericalError} from "../errors.ts";
import {normalQuantile} from "./normal.ts";
import {findRoot} from "./roots.ts";

/** ln Γ(a) for a > 0 by Stirling's series, a moved up to 12 and beyond; error a few ε of a ln a there. */
function logGamma(a: number): number {
  let product = 1;
  let moved = a;
  for (; moved < 12; ++moved) product *= moved;
  const square = 1 / (moved * moved);
  // Bernoulli numbers over 2k(2k − 1); the next term is below 1e-16 at 12.
  const series =
    (1 / 12 +
      square *
        (-1 / 360 + square * (1 / 1260 + square * (-1 / 1680 + square * (1 / 1188 - square * (691 / 360360)))))) /
    moved;
  return (moved - 0.5) * Math.log(moved) - moved + 0.9189385332046727 + series - Math.log(product);
}

/** Terms of a series or fraction; √a of them are needed near x = a. */
const MOST_TERMS = 100_000;

/**
 * Both tails of the gamma distribution of shape a at x, each to its own relative accuracy where it is the one
 * computed: the series below a + 1, Legendre's continued fraction by Lentz's method above.
 * Source: Abramowitz & Stegun 6.5.29, 6.5.31 (from memory).
 */
function tailsOf(a: number, x: number): {readonly below: number; readonly above: number} {
  const front = Math.exp(a * Math.log(x) - x - logGamma(a));
  if (x < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let n = 1; n < MOST_TERMS && term > 1e-17 * sum; ++n) {
      term *= x / (a + n);
      sum += term;
    }
    return {below: front * sum, above: 1 - front * sum};
  }
  let b = x + 1 - a;
  let c = Infinity;
  let d = 1 / b;
  let fraction = d;
  for (let n = 1; n < MOST_TERMS; ++n) {
    const numerator = -n * (n - a);
    b += 2;
    d = 1 / (numerator * d + b);
    c = b + numerator / c;
    const factor = c * d;
    fraction *= factor;
    if (Math.abs(factor - 1) < 1e-16) break;
  }
  return {below: 1 - front * fraction, above: front * fraction};
}

/**
 * The x that a sum of `degrees` squared standard normal deviates exceeds with probability `tail`; relative error
 * about 1e-13 up to some hundred degrees of freedom, 1e-11 up to some hundred thousand.
 *
 * Newton's method on the logarithm of the smaller tail, from the cube of Wilson & Hilferty, Proc. Natl Acad. Sci. 17
 * (1931) 684.
 *
 * @throws {NumericalError} `numeric/no-quantile` unless 0 < tail < 1 and degrees ≥ 1
 */
export function chiSquaredQuantile(tail: number, degrees: number): number {
  if (!(tail > 0 && tail < 1 && degrees >= 1 && degrees < Infinity))
    throw new NumericalError(
      "numeric/no-quantile",
      `A quantile of chi-squared was asked for tail ${tail} and ${degrees} degrees of freedom; they must be a probability between 0 and 1 and a number from 1.`,
    );
  const a = degrees / 2;
  const cube = 2 / (9 * degrees);
  const guess = degrees * Math.max(1 - cube - normalQuantile(tail) * Math.sqrt(cube), 1e-3) ** 3;
  const constant = a * Math.LN2 + logGamma(a);
  const missing = (x: number): readonly [number, number] => {
    const {below, above} = tailsOf(a, x / 2);
    const density = Math.exp((a - 1) * Math.log(x) - x / 2 - constant);
    return tail < 0.5 ? [Math.log(above / tail), -density / above] : [Math.log(below / (1 - tail)), density / below];
  };
  let low = 0.8 * guess;
  let high = 1.25 * guess;
  const beyond = (x: number): boolean => (tail < 0.5 ? missing(x)[0] < 0 : missing(x)[0] > 0);
  while (beyond(low)) low *= 0.5;
  while (!beyond(high)) high *= 1.5;
  return findRoot(missing, low, high, {start: guess, logarithmic: true, tolerance: 1e-14});
}
