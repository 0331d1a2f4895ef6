/** (G + a) c = v over a whole line: against a dense solution, for uneven heights, gaps and two channels. */
import {expect, test} from "vitest";
import {modalWholeLine} from "../../lib/inverse/modal-whole-line.ts";
import {wholeLine} from "../../lib/inverse/whole-line.ts";
import {choleskyInPlace, choleskySolveInto} from "../../lib/numeric/cholesky.ts";
import {multiplyTransposedInto} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {type Continuum, continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {readingsOf} from "../../lib/operators/readings.ts";
import type {Patch} from "../../lib/solvers/patches.ts";
import {dataModes} from "../../lib/spectral/singular-system.ts";

const HEIGHT = 20;

/** 260 stations with a gap of ten heights, heights swaying by a fifth; a gradient beside the field. */
function roughLine() {
  const x = Float64Array.from({length: 260}, (_, i) => 4 * i + Math.sin(7 * i) + (i > 130 ? 200 : 0));
  const z = x.map((t) => HEIGHT * (1 + 0.2 * Math.sin(t / 90)));
  const channels = [
    {x, z, response: {re: 1, im: 0, order: 0 as const}, noise: 0.02},
    {x, z, response: {re: 0, im: -1, order: 1 as const}, noise: 0.002},
  ];
  return continuumOf(readingsOf(channels), [{from: -100, to: 1340}]);
}

/** (G + a)⁻¹ of some vector by Cholesky. */
function denseSolution(line: Continuum, a: number): {readonly right: Float64Array; readonly expected: Float64Array} {
  const {count} = line;
  const nodes = nodesFor(line, 0, count);
  const matrix = nodeMatrix(line, nodes, 0, count);
  const dense = multiplyTransposedInto(new Float64Array(count * count), matrix, matrix, count, nodes.count, count);
  for (let i = 0; i < count; ++i) dense[i * count + i] += a;
  choleskyInPlace(dense, count);
  const right = normalDeviates(seededRandom(3), count);
  const expected = choleskySolveInto(new Float64Array(count), dense, right, count);
  return {right, expected};
}

test.each([1e-2, 1, 1e3])("agrees with Cholesky at a = %d", (a) => {
  const line = roughLine();
  const {count, x} = line;
  const core = 12 * HEIGHT;
  const patches: Patch[] = [];
  for (let from = x[0]; from <= x[count - 1]; from += core) {
    let first = 0;
    while (x[first] < from - core) ++first;
    let last = count;
    while (x[last - 1] > from + 2 * core) --last;
    const nodes = nodesFor(line, first, last);
    const modes = dataModes(nodeMatrix(line, nodes, first, last), last - first, nodes.count);
    patches.push({block: {first, last, modes}, from, to: from + core});
  }
  expect(patches.length).toBeGreaterThan(4);

  const {right, expected} = denseSolution(line, a);
  const found = wholeLine(line, patches).solve(a, right);
  const error = Math.hypot(...found.map((value, i) => value - expected[i])) / Math.hypot(...expected);
  // The steps end at 1e-7 of the residual; Cholesky itself loses ε times the condition, λ_0/a.
  expect(error).toBeLessThan(1e-6 + (Number.EPSILON * 1e8) / a);
});

test.each([1e-2, 1, 1e3])("by its modes agrees with Cholesky at a = %d", (a) => {
  const line = roughLine();
  const {right, expected} = denseSolution(line, a);
  const floor = 1e-7 * a;
  const found = modalWholeLine(line, floor)!.solve(a, right);
  const error = Math.hypot(...found.map((value, i) => value - expected[i])) / Math.hypot(...expected);
  // Modes up to the floor are taken for nothing, and a hundredth of it is left out of the trace; Cholesky as above.
  expect(error).toBeLessThan(2e-7 + (Number.EPSILON * 1e8) / a);
});

test("a line of one sensor has no need of its modes", () => {
  const line = roughLine();
  const one = {
    ...line,
    aRe: line.aRe.map(() => 1),
    aIm: line.aIm.map(() => 0),
    order: line.order.map(() => 0 as const),
  };
  expect(modalWholeLine({...one, shared: new Map()}, 0)).toBeUndefined();
});
