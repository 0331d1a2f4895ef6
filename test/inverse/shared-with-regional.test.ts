/** What a reader of the regional has in common with a number: by polynomials and by a grid, against the sum itself. */
import {expect, test} from "vitest";
import {farField} from "../../lib/inverse/far-field.ts";
import {regionalMeans} from "../../lib/inverse/regional-means.ts";
import {type Continuum, continuumOf} from "../../lib/operators/continuum.ts";
import {type Functional, fieldAt, meanOver} from "../../lib/operators/functional.ts";
import {levelLine} from "../../lib/operators/level-cells.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";

const COUNT = 700;
const SUPPORT = [
  {from: -60, to: 900},
  {from: 1000, to: 1500},
];
/** Smooth in one term, rough in the other. */
const WEIGHTS = Float64Array.from({length: 2 * COUNT}, (_, i) => (i < COUNT ? Math.cos(0.01 * i) : Math.sin(1.7 * i)));

/** Off from the sum over all stations, as a share of the sum of sizes. */
function offBy(continuum: Continuum, functional: Functional, got: Float64Array | undefined): number {
  const response = functional.respondInto(new Float64Array(COUNT), continuum, 0, COUNT);
  const size = response.reduce((sum, value, i) => sum + Math.abs(value * WEIGHTS[i]!), 0);
  return Math.max(
    ...[0, 1].map(
      (t) => Math.abs(got![t]! - response.reduce((sum, value, i) => sum + value * WEIGHTS[t * COUNT + i]!, 0)) / size,
    ),
  );
}

test.each([0, 1])("far stations by polynomials, readings of order %i over uneven heights", (order) => {
  const x = Float64Array.from({length: COUNT}, (_, i) => 2 * i + Math.sin(i));
  const vertical = verticalReadings(
    x,
    x.map((at) => 10 + Math.sin(at / 90)),
    0.1,
  );
  const readings = {...vertical, order: vertical.order.map(() => order), aRe: vertical.aRe.map(() => 0.4)};
  const continuum = continuumOf(readings, SUPPORT);
  const field = farField(continuum, 2, 10)!;
  for (const at of [-50, 3, 700, 1333.3]) {
    const mean = meanOver({from: at, to: at + 17}, SUPPORT);
    const point = fieldAt(at, 6, {re: 1, im: 0.3, order: 0}, continuum);
    // Polynomials of degree 15 with ρ = 3 + √8, the point a fifth of a half length above the cell: 1e-10.
    expect(offBy(continuum, mean, field.shared(WEIGHTS, mean))).toBeLessThan(1e-10);
    expect(offBy(continuum, point, field.shared(WEIGHTS, point))).toBeLessThan(1e-10);
  }
});

test("means by the integral on a grid, on a level line", () => {
  const x = Float64Array.from({length: COUNT}, (_, i) => 2 * i);
  const continuum = continuumOf(verticalReadings(x, new Float64Array(COUNT).fill(10), 0.1), SUPPORT);
  const means = regionalMeans(continuum, levelLine(continuum)!, WEIGHTS, 2);
  for (const [from, to] of [
    [-60, -41.3],
    [7.123, 9],
    [400, 880],
    [1490, 1500],
  ] as const) {
    const mean = meanOver({from, to}, SUPPORT);
    // A value of the integral is right to 3e-12 a station; a short mean divides that by its length.
    expect(offBy(continuum, mean, means({from, to}))).toBeLessThan(1e-9);
  }
});
