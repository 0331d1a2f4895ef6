/**
 * Where to begin the search for a multiplier when each costs a solution: between the two of the few that enclose it, by
 * the polynomial through those next to them. In the logarithms norm and misfit are analytic within π of the real axis,
 * so that steps of half a decade leave about 1e-4 (a heuristic for the start alone; the search itself decides).
 */
import {polynomialThrough} from "../numeric/polynomial-through.ts";
import {fewMultipliers} from "../solvers/few-multipliers.ts";
import type {Solver} from "../solvers/solver.ts";

/** Points of the polynomial on either side. */
const BESIDE = 3;

/** Logarithms of multipliers. */
interface Start {
  readonly low: number;
  readonly high: number;
  readonly t: number;
}

/**
 * @param value positive, falling or growing with the multiplier all along
 * @returns undefined where modes answer at once, or the few do not enclose the target
 */
export function searchStart(solver: Solver, value: (multiplier: number) => number, target: number): Start | undefined {
  if (solver.modes !== undefined) return undefined;
  const few = fewMultipliers(solver);
  const isBefore = (k: number): boolean => value(few[k]!) > target === grows;
  const grows = value(few[0]!) > value(few[few.length - 1]!);
  if (!isBefore(0) || isBefore(few.length - 1)) return undefined;
  let left = 0;
  let right = few.length - 1;
  while (right - left > 1) {
    const middle = (left + right) >> 1;
    if (isBefore(middle)) left = middle;
    else right = middle;
  }
  const near = few.slice(Math.max(0, left + 1 - BESIDE), right + BESIDE);
  const through = polynomialThrough(
    near.map((alpha) => Math.log(alpha)),
    near.map((alpha) => Math.log(value(alpha) / target)),
  );
  let [low, high] = [Math.log(few[right]!), Math.log(few[left]!)];
  const start = {low, high};
  while (high - low > 1e-9) {
    const middle = 0.5 * (low + high);
    if (through(middle) > 0 === grows) high = middle;
    else low = middle;
  }
  return {...start, t: 0.5 * (low + high)};
}
