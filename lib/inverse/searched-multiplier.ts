/**
 * The search for a multiplier where each one costs a solution: among the few that all searches share, from the
 * outer ones inwards, and then between two of them, each time by the polynomial through those tried that lie nearest. In the
 * logarithms norm and misfit are monotone, and analytic within π of the real axis: so close to a root a step more than
 * squares what is wrong, and no derivative is asked for, which would cost a solution too.
 */
import {polynomialThrough} from "../numeric/polynomial-through.ts";
import {fewMultipliers} from "../solvers/few-multipliers.ts";
import type {Solver} from "../solvers/solver.ts";

/** Where to begin among the few: most roots lie below, and those above cost one solution more. */
const FIRST = 1 / 3;
/** The few end where so many steps of theirs enclose the root: the polynomial is then right to a hundredth. */
const NEIGHBOURS = 2;
/** Points of the polynomial. */
const POINTS = 6;
/** Steps between the two; twice as many as were ever needed, and beyond them the caller searches by itself. */
const STEPS = 24;

/** A multiplier tried, in logarithms: what it gives over the target. */
interface Tried {
  readonly t: number;
  readonly y: number;
}

/**
 * @param value positive, falling or growing with the multiplier all along
 * @param tolerance of the value, relative
 * @returns undefined where modes answer at once, the few do not enclose the target, or nothing was found
 */
export function searchedMultiplier(
  solver: Solver,
  value: (multiplier: number) => number,
  target: number,
  tolerance: number,
): number | undefined {
  if (solver.modes !== undefined || !(target > 0)) return undefined;
  const few = fewMultipliers(solver);
  const tried: Tried[] = [];
  const attempt = (alpha: number): Tried => {
    const one = {t: Math.log(alpha), y: Math.log(value(alpha) / target)};
    tried.push(one);
    return one;
  };
  let [left, right] = [Math.floor(few.length * FIRST), few.length - 1];
  let after = attempt(few[right]!);
  let before = attempt(few[left]!);
  if (left > 0 && before.y > 0 === after.y > 0) {
    [right, after] = [left, before];
    left = 0;
    before = attempt(few[left]!);
  }
  if (!(Number.isFinite(before.y) && Number.isFinite(after.y) && before.y > 0 !== after.y > 0)) return undefined;
  const rises = before.y > 0;
  for (let halved = true; right - left > NEIGHBOURS; ) {
    const width = right - left;
    const guess = rootOf(tried, after.t, before.t, rises);
    const place = left + (width * (before.t - guess)) / (before.t - after.t);
    // At first, and where the polynomial halves nothing, the middle does.
    const middle = halved ? (left + right) >> 1 : Math.min(Math.max(Math.round(place), left + 1), right - 1);
    const one = attempt(few[middle]!);
    if (one.y > 0 === rises) [left, before] = [middle, one];
    else [right, after] = [middle, one];
    halved = !halved && right - left > width / 2;
  }
  let [low, high] = [after.t, before.t];
  for (let step = 0; step < STEPS; ++step) {
    const alpha = Math.exp(rootOf(tried, low, high, rises));
    const one = attempt(alpha);
    if (Math.abs(Math.expm1(one.y)) <= tolerance) return alpha;
    if (one.y > 0 === rises) high = one.t;
    else low = one.t;
    if (!(high - low > 1e-14)) return alpha;
  }
  return undefined;
}

/** The root of the polynomial through the nearest points between two places that enclose it. */
function rootOf(tried: readonly Tried[], from: number, to: number, rises: boolean): number {
  const middle = 0.5 * (from + to);
  const near = [...tried].sort((a, b) => Math.abs(a.t - middle) - Math.abs(b.t - middle)).slice(0, POINTS);
  const through = polynomialThrough(
    near.map(({t}) => t),
    near.map(({y}) => y),
  );
  let [low, high] = [from, to];
  for (;;) {
    const half = 0.5 * (low + high);
    if (!(half > low && half < high)) return half;
    if (through(half) > 0 === rises) high = half;
    else low = half;
  }
}
