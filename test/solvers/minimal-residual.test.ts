/** Generalised minimal residuals on systems whose solution is known. */
import {expect, test} from "vitest";
import {matVecInto} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {minimalResidual} from "../../lib/solvers/minimal-residual.ts";

const N = 90;
/** One plus something unsymmetric, of norm about a half. */
const matrix = normalDeviates(seededRandom(4), N * N).map(
  (value, k) => (0.25 * value) / Math.sqrt(N) + (k % (N + 1) === 0 ? 1 : 0),
);
const apply = (vector: Float64Array): Float64Array => matVecInto(new Float64Array(N), matrix, vector, N, N);
const wanted = normalDeviates(seededRandom(5), N);
const right = apply(wanted);
const apart = (found: Float64Array): number =>
  Math.hypot(...found.map((value, i) => value - wanted[i]!)) / Math.hypot(...wanted);

test("an unsymmetric system, from nothing and from a start", () => {
  const enough = 1e-12 * Math.hypot(...right);
  const first = minimalResidual(apply, right, {enough, mostSteps: 200});
  // The condition of the matrix is about three.
  expect(apart(first.solution)).toBeLessThan(1e-11);
  const near = wanted.map((value, i) => value + 1e-6 * Math.sin(i));
  const second = minimalResidual(apply, right, {enough, mostSteps: 200}, near);
  expect(apart(second.solution)).toBeLessThan(1e-11);
  expect(second.steps).toBeLessThan(first.steps);
});

test("steps that run out, begin anew after sixty, or have nothing to do", () => {
  const few = minimalResidual(apply, right, {enough: 0, mostSteps: 3});
  expect(few.steps).toBe(3);
  expect(few.left).toBeGreaterThan(0.001);
  // The least over the same directions that three steps see: what is told is what is left.
  const image = apply(few.solution);
  expect(Math.hypot(...right.map((value, i) => value - image[i]!)) / few.left).toBeCloseTo(1, 10);
  // Turns of a circle by a 70th part: no step but the 70th helps, so that sixty at a time do not either.
  const turn = (vector: Float64Array): Float64Array => vector.map((_, i) => vector[(i + 1) % 70]!);
  const one = Float64Array.from({length: 70}, (_, i) => (i === 0 ? 1 : 0));
  const stuck = minimalResidual(turn, one, {enough: 1e-6, mostSteps: 130});
  expect(stuck.steps).toBe(130);
  expect(stuck.left).toBeCloseTo(1, 12);
  expect(minimalResidual(apply, new Float64Array(N), {enough: 0, mostSteps: 9})).toMatchObject({steps: 0, left: 0});
});
