/** The search for a multiplier where each costs a solution: the root, wherever it lies, in few solutions. */
import {describe, expect, test} from "vitest";
import {searchedMultiplier} from "../../lib/inverse/searched-multiplier.ts";
import type {Solver} from "../../lib/solvers/solver.ts";

/** Norm and misfit in closed form, of modes that fade like those of a level line. */
const LAMBDA = Array.from({length: 60}, (_, k) => 10 ** (-k / 5));
const norm = (alpha: number): number =>
  Math.sqrt(LAMBDA.reduce((sum, own) => sum + (own * (own + 1e-4)) / (own + alpha) ** 2, 0));
const misfit = (alpha: number): number =>
  LAMBDA.reduce((sum, own) => sum + ((alpha / (own + alpha)) ** 2 * (own + 1e-4)) / 1e-4, 0);
const solver = {modes: undefined, largest: 1, least: 1e-10} as Solver;

describe.each([
  ["norm", norm],
  ["misfit", misfit],
] as const)("%s", (_, value) => {
  test.each([-9.7, -8, -5.5, -3.3, -1.2, 0.4])("that of 10^%f is found", (place) => {
    const root = 10 ** place;
    const asked: number[] = [];
    const found = searchedMultiplier(
      solver,
      (alpha) => {
        asked.push(alpha);
        return value(alpha);
      },
      value(root),
      1e-12,
    )!;
    // Norm and misfit are flat near either end: there 1e-12 of them is up to 1e-9 of the multiplier.
    expect(Math.abs(value(found) / value(root) - 1)).toBeLessThan(1e-12);
    expect(Math.abs(found / root - 1)).toBeLessThan(1e-8);
    // From the outer ones to two steps by halves and by the polynomial at most nine, three or four between them.
    expect(asked.length).toBeLessThanOrEqual(13);
  });

  test("nothing is found beyond the few, and nothing is asked where modes answer", () => {
    expect(searchedMultiplier(solver, value, value(1e-12), 1e-12)).toBeUndefined();
    expect(searchedMultiplier(solver, value, value(1e3), 1e-12)).toBeUndefined();
    expect(searchedMultiplier({...solver, modes: 60}, value, value(1e-3), 1e-12)).toBeUndefined();
  });
});
