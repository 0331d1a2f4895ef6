/** The solver for long uneven lines: against the solver by modes on the same panels. */
import {expect, test} from "vitest";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {multipoleOperator} from "../../lib/operators/multipole.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import {iterativeSolver} from "../../lib/solvers/iterative.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {FIELD, GRADIENT, TOTAL_FIELD, type UnevenLine, unevenLine} from "../harness/uneven-line.ts";

function solvers(line: UnevenLine, degree: number) {
  const {readings, panels, values} = unevenLine(line);
  const basis = regionalBasis(readings, degree);
  const system = whiten(forwardOperator(readings, panels), readings, values, basis);
  const long = iterativeSolver(multipoleOperator(readings, panels), readings, system.data, basis);
  return {long, dense: spectralSolver(system, basis.terms)};
}

const ratioOff = (a: number, b: number): number => Math.abs(a / b - 1);

const CASES: readonly (readonly [name: string, line: UnevenLine, degree: number, shares: readonly number[]])[] = [
  ["heights ±10 %, regional 1", {stations: 700, sway: 0.1}, 1, [1e-2, 1e-4, 1e-6]],
  ["heights ±40 %, no regional", {stations: 420, sway: 0.4}, -1, [1e-2, 1e-4, 1e-6]],
  ["a gap, regional 0", {stations: 420, sway: 0.2, gap: true}, 0, [1e-2, 1e-4, 1e-6]],
  ["two channels", {stations: 450, sway: 0.2, responses: [FIELD, GRADIENT]}, 1, [1e-1, 1e-3, 1e-5]],
  ["total field", {stations: 420, sway: 0.2, responses: [TOTAL_FIELD]}, 1, [1e-2, 1e-4, 1e-6]],
  ["correlated noise", {stations: 420, sway: 0.2, noiseLength: 12}, 1, [1e-2, 1e-4, 1e-6]],
];

test.each(CASES)("%s: as the modes say", (_, line, degree, shares) => {
  const {long, dense} = solvers(line, degree);
  // The power method reaches some per cent in twelve steps; it only scales searches.
  expect(ratioOff(long.largest, dense.largest)).toBeLessThan(0.15);
  for (const share of shares) {
    const multiplier = share * dense.largest;
    expect(long.least).toBeLessThan(multiplier);
    const estimate = dense.estimate(multiplier);
    const scale = estimate.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
    const found = long.estimate(multiplier);
    // Steps end at 1e-13 of c; f, which sees its smooth part most, is worth the less the smaller the multiplier.
    expect(Math.max(...found.map((value, j) => Math.abs(value - estimate[j]!)))).toBeLessThan(1e-8 * scale);
    expect(ratioOff(long.misfit(multiplier), dense.misfit(multiplier))).toBeLessThan(1e-8);
    expect(ratioOff(long.norm(multiplier), dense.norm(multiplier))).toBeLessThan(1e-8);
    // Solved to 1e-8 of its own c, of which f sees the smooth part; it only steers searches.
    expect(ratioOff(long.normSlope(multiplier), dense.normSlope(multiplier))).toBeLessThan(1e-5);
    // Counted by windows: an approximation, worst beside gaps.
    expect(ratioOff(long.degreesOfFreedom(multiplier), dense.degreesOfFreedom(multiplier))).toBeLessThan(0.01);
    expect(Math.abs(long.evidence!(multiplier).against - dense.evidence!(multiplier).against)).toBeLessThan(0.02);
    expect(ratioOff(long.evidence!(multiplier).noise, dense.evidence!(multiplier).noise)).toBeLessThan(1e-8);
  }
});

test("no source at all, and other noise", () => {
  const {long, dense} = solvers({stations: 200, sway: 0.2}, 1);
  expect(long.norm(Infinity)).toBe(0);
  expect(long.estimate(Infinity).every((value) => value === 0)).toBe(true);
  expect(ratioOff(long.misfit(Infinity), dense.misfit(Infinity))).toBeLessThan(1e-12);
  const twice = long.withNoise(2);
  const multiplier = 1e-3 * twice.largest;
  // The same equation, scaled.
  expect(twice.norm(multiplier)).toBe(long.norm(4 * multiplier));
  expect(ratioOff(twice.misfit(multiplier), 0.25 * long.misfit(4 * multiplier))).toBeLessThan(1e-15);
  expect(ratioOff(twice.normSlope(multiplier), 4 * long.normSlope(4 * multiplier))).toBeLessThan(1e-15);
});
