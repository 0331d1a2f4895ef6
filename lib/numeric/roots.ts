/** One-dimensional roots and minima on a bracket. Both either meet their tolerance or throw. */
import {NumericalError} from "../errors.ts";

const EPSILON = 2 ** -52;

export interface RootSettings {
  /** Change in x at which to stop: relative to x, or in ln x with `logarithmic`. Default 4ε. */
  readonly tolerance?: number;
  /** Steps are taken in ln x; the bracket must then be positive. */
  readonly logarithmic?: boolean;
  readonly start?: number;
  /** Default 100. */
  readonly iterations?: number;
}

/**
 * A root of f between `low` and `high`, where f changes sign, by Newton steps
 * that fall back on bisection when they leave the bracket or stop shrinking it.
 * Source: Press et al., Numerical Recipes, §9.4 (the safeguard); the code is ours.
 *
 * @param f value and slope df/dx at x
 * @throws {NumericalError} `numeric/no-bracket` if f has one sign at both ends or is NaN there;
 *   `numeric/no-convergence` after `iterations` steps
 */
export function findRoot(
  f: (x: number) => readonly [value: number, slope: number],
  low: number,
  high: number,
  settings: RootSettings = {},
): number {
  const {tolerance = 4 * EPSILON, logarithmic = false, iterations = 100} = settings;
  if (logarithmic && !(low > 0)) {
    throw new NumericalError(
      "numeric/no-bracket",
      `A search in ln x was given the lower end ${low}; it must be above 0.`,
    );
  }
  const atLow = f(low)[0];
  const atHigh = f(high)[0];
  if (atLow === 0) return low;
  if (atHigh === 0) return high;
  if (!(atLow * Math.sign(atHigh) < 0)) {
    throw new NumericalError(
      "numeric/no-bracket",
      `A function has values ${atLow} and ${atHigh} at ${low} and ${high}; a root needs opposite signs. Widen the bracket.`,
    );
  }
  const from = logarithmic ? Math.log : identity;
  const to = logarithmic ? Math.exp : identity;
  const rising = atLow < 0;
  let a = from(low);
  let b = from(high);
  let t =
    settings.start !== undefined && settings.start > low && settings.start < high ? from(settings.start) : (a + b) / 2;
  let previous = b - a;
  for (let step = 0; step < iterations; ++step) {
    const x = to(t);
    const [value, slope] = f(x);
    if (value === 0) return x;
    if (Number.isNaN(value)) break;
    if (value < 0 === rising) a = t;
    else b = t;
    let next = t - value / (logarithmic ? slope * x : slope);
    if (!(next > a && next < b) || Math.abs(next - t) > 0.5 * Math.abs(previous)) next = (a + b) / 2;
    previous = next - t;
    t = next;
    const scale = logarithmic ? 1 : Math.abs(t);
    if (Math.abs(previous) <= tolerance * scale || b - a <= tolerance * scale) return to(t);
  }
  throw new NumericalError(
    "numeric/no-convergence",
    `A root between ${low} and ${high} was not met to ${tolerance} in ${iterations} steps; the last bracket was ${to(a)} to ${to(b)}.`,
  );
}

const identity = (x: number): number => x;

export interface Minimum {
  readonly x: number;
  readonly value: number;
}

/**
 * A local minimum of f on [low, high]: golden sections, with parabolic steps
 * where they help. Source: R. Brent, Algorithms for Minimization without
 * Derivatives (1973), ch. 5.
 *
 * @param tolerance in x, relative to the bracket; below 1.5e-8 a smooth minimum is flat to rounding
 * @throws {NumericalError} `numeric/no-convergence` after 200 steps, or if f is NaN at a step
 */
export function minimise(f: (x: number) => number, low: number, high: number, tolerance = 1e-8): Minimum {
  const golden = (3 - Math.sqrt(5)) / 2;
  const goal = tolerance * (high - low);
  let a = low;
  let b = high;
  let x = a + golden * (b - a);
  let w = x;
  let v = x;
  let fx = f(x);
  let fw = fx;
  let fv = fx;
  let step = 0;
  let before = 0;
  for (let count = 0; count < 200 && !Number.isNaN(fx); ++count) {
    const middle = (a + b) / 2;
    if (Math.abs(x - middle) <= 2 * goal - (b - a) / 2) return {x, value: fx};
    let parabolic = false;
    if (Math.abs(before) > goal) {
      const r = (x - w) * (fx - fv);
      const s = (x - v) * (fx - fw);
      let p = (x - v) * s - (x - w) * r;
      let q = 2 * (s - r);
      if (q > 0) p = -p;
      else q = -q;
      if (Math.abs(p) < Math.abs(0.5 * q * before) && p > q * (a - x) && p < q * (b - x)) {
        before = step;
        step = p / q;
        parabolic = true;
        if (x + step - a < 2 * goal || b - x - step < 2 * goal) step = x < middle ? goal : -goal;
      }
    }
    if (!parabolic) {
      before = (x < middle ? b : a) - x;
      step = golden * before;
    }
    const u = Math.abs(step) >= goal ? x + step : x + (step > 0 ? goal : -goal);
    const fu = f(u);
    if (Number.isNaN(fu)) {
      fx = fu;
      break;
    }
    if (fu <= fx) {
      if (u < x) b = x;
      else a = x;
      v = w;
      fv = fw;
      w = x;
      fw = fx;
      x = u;
      fx = fu;
    } else {
      if (u < x) a = u;
      else b = u;
      if (fu <= fw || w === x) {
        v = w;
        fv = fw;
        w = u;
        fw = fu;
      } else if (fu <= fv || v === x || v === w) {
        v = u;
        fv = fu;
      }
    }
  }
  throw new NumericalError(
    "numeric/no-convergence",
    `A minimum between ${low} and ${high} was not met to ${goal} in 200 steps (last value ${fx} at ${x}).`,
  );
}
