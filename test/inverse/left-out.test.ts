/** Readings foretold by all others: the identity against fits that never saw them. */
import {Matrix, solve} from "ml-matrix";
import {describe, expect, test} from "vitest";
import {type Blocks, leftOut} from "../../lib/inverse/left-out.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly} from "../harness/synthetic-line.ts";

const NOISE = 0.05;

/** Stations out of order at uneven heights; blocks of 1, 7 and more of them. */
function line(stations: number, width: number, degree: number) {
  const even = evenly(-50, 350, stations);
  const x = even.map((_, i) => even[(7 * i) % stations]);
  const z = x.map((t) => 20 + 6 * Math.sin(t / 40));
  const values = normalDeviates(seededRandom(9), stations).map((e, i) => NOISE * e + Math.cos(x[i] / 60) + 3);
  const readings = verticalReadings(x, z, NOISE);
  const operator = forwardOperator(readings, panelsOn([{from: 0, to: 300}], width));
  const basis = regionalBasis(readings, degree);
  const order = Int32Array.from(x.keys()).sort((i, j) => x[i] - x[j]);
  const blocks: Blocks = {order, ends: Int32Array.of(1, 8, 20, stations - 9, stations)};
  /** Columns of source and regional over the whitened readings, nothing projected out. */
  const free = whiten(operator, readings, values, regionalBasis(readings, -1));
  return {solver: spectralSolver(whiten(operator, readings, values, basis), degree + 1), free, basis, blocks, stations};
}

/** Error of the readings `block` in a fit to the others, by a dense LU of ml-matrix. */
function refit({free, basis, stations}: ReturnType<typeof line>, block: readonly number[], alpha: number): number[] {
  const source = Matrix.from1DArray(stations, free.columns, free.matrix);
  const regional = Matrix.from1DArray(basis.terms, stations, basis.rows).transpose();
  const columns =
    basis.terms === 0 ? source : new Matrix(source.to2DArray().map((row, i) => [...row, ...regional.getRow(i)]));
  const kept = [...Array(stations).keys()].filter((i) => !block.includes(i));
  const seen = columns.selection(kept, [...Array(columns.columns).keys()]);
  const normal = seen.transpose().mmul(seen);
  for (let j = 0; j < free.columns; ++j) normal.set(j, j, normal.get(j, j) + alpha);
  const data = Matrix.columnVector(kept.map((i) => free.data[i]));
  const found = solve(normal, seen.transpose().mmul(data)).to1DArray();
  return block.map((i) => free.data[i] - columns.getRow(i).reduce((sum, entry, j) => sum + entry * found[j], 0));
}

describe("readings left out", () => {
  test.each([
    {stations: 60, width: 12, degree: -1, shape: "tall"},
    {stations: 60, width: 12, degree: 2, shape: "tall, with regional"},
    {stations: 45, width: 4, degree: 1, shape: "wide, with regional"},
  ])("are missed by what a fit without them misses: $shape", ({stations, width, degree}) => {
    const made = line(stations, width, degree);
    const {solver, blocks} = made;
    const errorsAt = leftOut(solver.dataSide!(), blocks);
    for (const share of [1e-4, 1e-2, 1, 10]) {
      const alpha = share * solver.largest;
      const errors = errorsAt(alpha);
      let first = 0;
      for (const end of blocks.ends) {
        const want = refit(made, [...blocks.order.subarray(first, end)], alpha);
        const size = Math.max(1, ...want.map(Math.abs));
        want.forEach((error, i) => {
          absoluteClose(
            errors[first + i] / size,
            error / size,
            1e-9,
            "condition 1e4 of the dense fit, regional beside it, times ε and the size of the sums",
          );
        });
        first = end;
      }
    }
  });

  test("do not depend on how the readings are cut where nothing is shared", () => {
    // Without panels that matter every error is the reading itself.
    const {solver, blocks} = line(60, 12, -1);
    const side = solver.dataSide!();
    const errors = leftOut(side, blocks)(1e30);
    blocks.order.forEach((place, i) => {
      absoluteClose(errors[i], side.data[place], 1e-12, "the fit vanishes as 1/α");
    });
  });

  test("are those of the noise with which the readings were whitened", () => {
    const {solver, blocks} = line(60, 12, 1);
    const alpha = 1e-3 * solver.largest;
    const errors = leftOut(solver.dataSide!(), blocks)(alpha);
    const twice = leftOut(solver.withNoise(2).dataSide!(), blocks)(alpha / 4);
    errors.forEach((error, i) => {
      absoluteClose(twice[i], error / 2, 1e-11 * Math.max(1, Math.abs(error)), "rounding");
    });
    expect(errors.some((error) => Math.abs(error) > 0.1)).toBe(true);
  });
});
