import fc from "fast-check";
import {Matrix, solve} from "ml-matrix";
import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {type WhitenedSystem, whiten} from "../../lib/operators/whitened.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly} from "../harness/synthetic-line.ts";

const SEED = 40;

/** A line over two parts, uneven heights, more readings than panels or fewer. */
function system(stations: number, width: number, degree: number, seed: number): WhitenedSystem {
  const x = evenly(-50, 350, stations);
  const z = x.map((t) => 20 + 6 * Math.sin(t / 40));
  const panels = panelsOn(
    [
      {from: 0, to: 140},
      {from: 160, to: 300},
    ],
    width,
  );
  const values = normalDeviates(seededRandom(seed), stations).map((e, i) => 0.05 * e + Math.cos(x[i] / 60));
  const readings = verticalReadings(x, z, 0.05);
  return whiten(forwardOperator(readings, panels), readings, values, regionalBasis(readings, degree));
}

/** (BᵀB + α)⁻¹ Bᵀd with its misfit and norm, by a dense LU of ml-matrix. */
function dense({rows, columns, matrix, data, rootWidth}: WhitenedSystem, alpha: number) {
  const b = Matrix.from1DArray(rows, columns, matrix);
  const d = Matrix.columnVector(data);
  const normal = b.transpose().mmul(b).add(Matrix.eye(columns).mul(alpha));
  const g = solve(normal, b.transpose().mmul(d));
  const residual = Matrix.sub(d, b.mmul(g));
  return {
    misfit: residual.norm() ** 2,
    norm: g.norm(),
    density: g.to1DArray().map((entry, j) => entry / rootWidth[j]),
    degrees: solve(normal, b.transpose().mmul(b)).trace(),
  };
}

describe("the solver by eigen-decomposition", () => {
  test.each([
    {stations: 90, width: 8, degree: -1, shape: "tall"},
    {stations: 90, width: 8, degree: 1, shape: "tall, with regional"},
    {stations: 30, width: 4, degree: 2, shape: "wide, with regional"},
  ])("agrees with a dense solution at every multiplier: $shape", ({stations, width, degree}) => {
    const whitened = system(stations, width, degree, 1);
    const solver = spectralSolver(whitened, degree + 1);
    expect([solver.data, solver.unknowns]).toEqual([stations, whitened.columns]);
    for (const share of [1e-7, 1e-5, 1e-3, 0.1, 1, 10]) {
      const alpha = share * solver.largest;
      const want = dense(whitened, alpha);
      // The dense normal matrix has condition 1/share, 1e7 at most, so its solution is good to some 1e7 × 50 ε.
      const tolerance = 1e-7;
      absoluteClose(solver.misfit(alpha) / want.misfit, 1, tolerance, "condition of the dense solution");
      absoluteClose(solver.norm(alpha) / want.norm, 1, tolerance, "condition of the dense solution");
      absoluteClose(solver.degreesOfFreedom(alpha) / want.degrees, 1, tolerance, "condition of the dense solution");
      const size = Math.max(...want.density.map(Math.abs));
      solver.estimate(alpha).forEach((value, j) => {
        absoluteClose((value - want.density[j]) / size, 0, tolerance, "condition of the dense solution");
      });
    }
  });

  test("loses misfit as it gains norm: dE/d(N²) = −α", () => {
    const solver = spectralSolver(system(80, 6, 1, 2), 2);
    for (const share of [1e-8, 1e-6, 1e-4, 1e-2, 1]) {
      const alpha = share * solver.largest;
      const [low, high] = [alpha * (1 - 1e-4), alpha * (1 + 1e-4)];
      const slope = (solver.misfit(high) - solver.misfit(low)) / (solver.norm(high) ** 2 - solver.norm(low) ** 2);
      // Central difference in ln α: (1e-4)² times a few; cancellation ε/1e-4 over the share of E that moves.
      absoluteClose(slope / -alpha, 1, 1e-5, "second-order differences and cancellation");
      const normSlope = (solver.norm(high) - solver.norm(low)) / (high - low);
      absoluteClose(solver.normSlope(alpha) / normSlope, 1, 1e-6, "second-order differences and cancellation");
    }
  });

  test("keeps the promises at the ends: all energy at ∞, none of the norm", () => {
    const whitened = system(60, 8, 1, 3);
    const solver = spectralSolver(whitened, 2);
    const energy = whitened.data.reduce((sum, d) => sum + d * d, 0);
    absoluteClose(solver.misfit(Infinity) / energy, 1, 1e-13, "sum of squares");
    expect(solver.norm(Infinity)).toBe(0);
    expect(solver.estimate(Infinity).every((value) => value === 0)).toBe(true);
    expect(solver.misfit(0)).toBeLessThan(solver.misfit(solver.least));
    expect(solver.degreesOfFreedom(0)).toBe(solver.modes);
  });

  test("is monotone in the multiplier", () => {
    const solver = spectralSolver(system(60, 8, 0, 4), 1);
    fc.assert(
      fc.property(
        fc.double({min: -12, max: 2, noNaN: true}),
        fc.double({min: 0.01, max: 5, noNaN: true}),
        (t, step) => {
          const [low, high] = [10 ** t * solver.largest, 10 ** (t + step) * solver.largest];
          expect(solver.misfit(high)).toBeGreaterThanOrEqual(solver.misfit(low));
          expect(solver.norm(high)).toBeLessThanOrEqual(solver.norm(low));
          expect(solver.degreesOfFreedom(high)).toBeLessThan(solver.degreesOfFreedom(low));
        },
      ),
      {seed: SEED},
    );
  });

  test("takes readings that are exactly zero", () => {
    const whitened = {...system(40, 10, -1, 5), data: new Float64Array(40)};
    const solver = spectralSolver(whitened, 0);
    expect([solver.misfit(1), solver.norm(1), solver.misfit(0), solver.norm(0)]).toEqual([0, 0, 0, 0]);
  });

  test("with another noise is the solver of readings whitened by that noise", () => {
    const whitened = system(60, 8, 1, 6);
    const noisier = {
      ...whitened,
      matrix: whitened.matrix.map((entry) => entry / 3),
      data: whitened.data.map((entry) => entry / 3),
    };
    const [got, want] = [spectralSolver(whitened, 2).withNoise(3), spectralSolver(noisier, 2)];
    const because = "the same decomposition up to rounding, over a multiplier of 1e-6 of the largest eigenvalue";
    absoluteClose(got.largest / want.largest, 1, 1e-12, because);
    for (const share of [1e-6, 1e-3, 1]) {
      const alpha = share * want.largest;
      absoluteClose(got.misfit(alpha) / want.misfit(alpha), 1, 1e-9, because);
      absoluteClose(got.norm(alpha) / want.norm(alpha), 1, 1e-9, because);
      const density = want.estimate(alpha);
      const size = Math.max(...density.map(Math.abs));
      got.estimate(alpha).forEach((value, j) => {
        absoluteClose((value - density[j]) / size, 0, 1e-8, because);
      });
    }
    expect(got.withNoise(1 / 3).norm(5)).toBeCloseTo(spectralSolver(whitened, 2).norm(5), 10);
  });
});
