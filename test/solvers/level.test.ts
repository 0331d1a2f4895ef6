/** The solver of level lines beside the dense one on the same cells: every question, every kind of reading and zone. */
import {Matrix, QrDecomposition} from "ml-matrix";
import {describe, expect, test} from "vitest";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {type WhitenedSystem, whiten, whitenData} from "../../lib/operators/whitened.ts";
import type {Response} from "../../lib/potential/kernel.ts";
import {levelSolver, pooledLevelSolver} from "../../lib/solvers/level.ts";
import {levelSystem} from "../../lib/solvers/level-system.ts";
import type {Solver} from "../../lib/solvers/solver.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {levelCase, levelValues, NOISE, RESPONSES, ZONES} from "../harness/level-line.ts";

type Zone = (typeof ZONES)[number];

function both(response: Response, [, support, width]: Zone, degree: number) {
  const {readings, cells, panels} = levelCase(response, support, width);
  const basis = regionalBasis(readings, degree);
  const values = levelValues();
  const system = whiten(forwardOperator(readings, panels), readings, values, basis);
  const level = levelSolver(levelSystem(cells, basis), system.data, panels);
  return {system, level, dense: spectralSolver(system, basis.terms), readings, panels, values};
}

const apart = (a: Float64Array, b: Float64Array): number =>
  Math.hypot(...a.map((value, i) => value - b[i]!)) / Math.hypot(...b);

/** The least-squares solution of [B; √α] f = [d; 0] by Householder's QR, which squares nothing. */
function bySquares({rows, columns, matrix, data, rootWidth}: WhitenedSystem, alpha: number): Float64Array {
  const all = Matrix.zeros(rows + columns, columns);
  all.setSubMatrix(Matrix.from1DArray(rows, columns, matrix), 0, 0);
  for (let j = 0; j < columns; ++j) all.set(rows + j, j, Math.sqrt(alpha));
  const right = Matrix.zeros(rows + columns, 1);
  for (let i = 0; i < rows; ++i) right.set(i, 0, data[i]!);
  return Float64Array.from(new QrDecomposition(all).solve(right).to1DArray(), (value, j) => value / rootWidth[j]!);
}

const QUESTIONS: readonly (readonly [name: string, ask: (solver: Solver, alpha: number) => number])[] = [
  ["misfit", (solver, alpha) => solver.misfit(alpha)],
  ["norm", (solver, alpha) => solver.norm(alpha)],
  ["slope of the norm", (solver, alpha) => solver.normSlope(alpha)],
  ["degrees of freedom", (solver, alpha) => solver.degreesOfFreedom(alpha)],
  ["noise by likelihood", (solver, alpha) => solver.evidence!(alpha).noise],
  ["likelihood", (solver, alpha) => solver.evidence!(alpha).against],
];

describe.each(RESPONSES)("the solver of a level line, %s", (_, response) => {
  for (const zone of ZONES)
    for (const degree of [-1, 0, 1])
      test(`answers as the dense one does: ${zone[0]}, regional ${degree}`, () => {
        const {level, dense} = both(response, zone, degree);
        absoluteClose(
          level.largest / dense.largest,
          1,
          0.01,
          "largest eigenvalue by 24 steps; it scales searches alone",
        );
        for (const share of [1, 1e-2, 1e-4]) {
          const alpha = share * dense.largest;
          // The dense solver squares the matrix: it is good to some ε/share × 100 itself.
          const tolerance = 1e-12 + 2e-14 / share;
          expect(apart(level.estimate(alpha), dense.estimate(alpha))).toBeLessThan(tolerance);
          for (const [, ask] of QUESTIONS)
            absoluteClose(ask(level, alpha) / ask(dense, alpha), 1, 1e-5, "V is cut where 1e-5 of α is left");
        }
        expect([level.modes, level.data]).toEqual([undefined, dense.data]);
      });

  test.each(ZONES)("keeps ten digits of the source down to the least multiplier: %s", (...zone) => {
    const {level, system} = both(response, zone, 1);
    expect(level.least / level.largest).toBeLessThan(2e-7);
    // By theory ε √(λ₁/α) = 2e-11 at most, times the conditioning of what V takes from the gap.
    for (const alpha of [10 * level.least, Math.max(level.least, 1e-8 * level.largest)])
      expect(apart(level.estimate(alpha), bySquares(system, alpha))).toBeLessThan(1e-9);
  });
});

describe("the solver of a level line", () => {
  const vertical = RESPONSES[0]![1];
  const {level, dense, values, readings, panels} = both(vertical, ZONES[1]!, 1);

  test("noise raised afterwards is noise given before", () => {
    const alpha = 1e-3 * dense.largest;
    for (const [, ask] of QUESTIONS)
      absoluteClose(ask(level.withNoise(3), alpha) / ask(dense.withNoise(3), alpha), 1, 1e-6, "as at once");
    absoluteClose(
      apart(level.withNoise(3).estimate(alpha), dense.withNoise(3).estimate(alpha)),
      0,
      1e-10,
      "as at once",
    );
  });

  test("lines pooled under one multiplier are the sum of each", () => {
    const [, support, width] = ZONES[1]!;
    const {cells} = levelCase(vertical, support, width);
    const basis = regionalBasis(readings, 1);
    const fine = levelSystem(cells, basis);
    const rows = [3, 4, 5].map((seed) => whitenData(levelValues(seed), readings, basis));
    const pooled = pooledLevelSolver(fine, rows);
    const each = rows.map((row) => levelSolver(fine, row, panels));
    for (const share of [1e-1, 1e-3, 1e-5]) {
      const alpha = share * fine.largest;
      const sum = (ask: (solver: Solver) => number): number => each.reduce((total, one) => total + ask(one), 0);
      const close = (got: number, want: number): void =>
        absoluteClose(got / want, 1, 1e-6, "V is cut where 1e-7 of α is left, and nothing is refined");
      close(
        pooled.misfit(alpha),
        sum((one) => one.misfit(alpha)),
      );
      close(
        pooled.norm(alpha) ** 2,
        sum((one) => one.norm(alpha) ** 2),
      );
      close(
        pooled.norm(alpha) * pooled.normSlope(alpha),
        sum((one) => one.norm(alpha) * one.normSlope(alpha)),
      );
      close(
        pooled.degreesOfFreedom(alpha),
        sum((one) => one.degreesOfFreedom(alpha)),
      );
      close(pooled.largestNorm(alpha), Math.max(...each.map((one) => one.norm(alpha))));
      close(pooled.evidence!(alpha).noise ** 2, sum((one) => one.evidence!(alpha).noise ** 2) / 3);
    }
  });

  test("no source at all for an infinite multiplier", () => {
    expect([level.norm(Infinity), level.degreesOfFreedom(Infinity)]).toEqual([0, 0]);
    absoluteClose(level.misfit(Infinity) / dense.misfit(Infinity), 1, 1e-13, "one sum of squares");
    expect(level.estimate(Infinity).every((value) => value === 0)).toBe(true);
    expect(level.field!(Infinity).every((value) => value === 0)).toBe(true);
  });

  test("the field at the stations leaves the misfit and a straight line", () => {
    const alpha = 1e-3 * level.largest;
    const field = level.field!(alpha);
    const basis = regionalBasis(readings, 1);
    let misfit = 0;
    const left = values.map((value, i) => (value - field[i]!) / NOISE);
    const shares = [0, 1].map((t) => left.reduce((sum, value, i) => sum + value * basis.rows[t * left.length + i]!, 0));
    left.forEach((value, i) => {
      misfit += (value - shares[0]! * basis.rows[i]! - shares[1]! * basis.rows[left.length + i]!) ** 2;
    });
    absoluteClose(misfit / level.misfit(alpha), 1, 1e-10, "rounding of field and residual against the noise");
  });

  test("on wider panels it gives the means over them", () => {
    const [, support, width] = ZONES[1]!;
    const wide = panelsOn(support, 3.3 * width);
    const {cells} = levelCase(vertical, support, width);
    const basis = regionalBasis(readings, 1);
    const alpha = 1e-3 * level.largest;
    const {data} = whiten(forwardOperator(readings, panels), readings, values, basis);
    const fine = level.estimate(alpha);
    const means = levelSolver(levelSystem(cells, basis), data, wide).estimate(alpha);
    for (let k = 0; k < wide.count; ++k) {
      let sum = 0;
      for (let j = 0; j < panels.count; ++j)
        sum += fine[j]! * Math.max(0, Math.min(panels.to[j]!, wide.to[k]!) - Math.max(panels.from[j]!, wide.from[k]!));
      absoluteClose(means[k]!, sum / wide.width[k]!, 1e-12 * Math.max(...fine), "the same mean, summed otherwise");
    }
  });
});
