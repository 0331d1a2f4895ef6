/** The affine estimate that is applied to the readings, and the same at a looser bound. */
import {describe, expect, test} from "vitest";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {meanOver} from "../../lib/operators/functional.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {intervalsOf, readAt} from "../harness/interval-case.ts";
import {evenly} from "../harness/synthetic-line.ts";

const x = evenly(0, 600, 151);
const values = normalDeviates(seededRandom(7), 151);
const support = [{from: -60, to: 660}];
const CASE = {x, z: x.map((t) => 14 + Math.sin(t / 31)), support, noise: 0.01, bound: 20, values};

const functionals = [
  ["a strip", meanOver({from: 240, to: 300}, support)],
  ["a mean longer than two windows", meanOver({from: 40, to: 580}, support)],
  ["the field at a point", readAt(200, 3, support)],
] as const;

describe.each(["whole", "windows"] as const)("the weights of an answer, %s", (layout) => {
  const solver = intervalsOf({...CASE, layout});
  const readings = verticalReadings(x, CASE.z, CASE.noise);
  const basis = regionalBasis(readings, 1);
  const data = whitenData(values, readings, basis);

  test.each(functionals)("give it from the whitened readings, and its deviation: %s", (_, functional) => {
    const {weights, deviation, bias, halfWidth} = solver.affine(functional);
    const answer = solver.interval(functional);
    const sum = weights.reduce((total, c, i) => total + c * data[i], 0);
    // Two orders of summing 151 terms whose sizes are those of weights and data.
    const rounding = 151 * Number.EPSILON * Math.hypot(...weights) * Math.hypot(...data);
    absoluteClose(sum, answer.value, 10 * rounding, "rounding of sums");
    expect(halfWidth).toBe(answer.halfWidth);
    absoluteClose(Math.hypot(...weights) / deviation, 1, 1e-8, "sum over modes against sum over readings");
    expect(halfWidth).toBeGreaterThan(bias);
  });

  test.each(functionals)("do not react to a level and a slope: %s", (_, functional) => {
    const {weights} = solver.affine(functional);
    const size = Math.hypot(...weights);
    for (let t = 0; t < basis.terms; ++t) {
      const dot = weights.reduce((total, c, i) => total + c * basis.rows[t * basis.count + i], 0);
      absoluteClose(dot / size, 0, 1e-9, "projection, rounded");
    }
  });

  test.each(functionals)("at a bound four times looser are those of a solver with that bound: %s", (_, functional) => {
    const loose = intervalsOf({...CASE, layout, loosest: 4}).affine(functional, 4);
    const other = intervalsOf({...CASE, layout, bound: 4 * CASE.bound}).affine(functional);
    // The search for `a` ends within half a per cent, of which the width feels 1e-5; windows read the regional by M.
    absoluteClose(
      loose.halfWidth / other.halfWidth,
      1,
      layout === "whole" ? 1e-5 : 5e-3,
      "search for a, regional reader",
    );
    expect(loose.halfWidth).toBeGreaterThan(solver.interval(functional).halfWidth);
  });
});

test("a bound looser than was asked for is a defect", () => {
  expect(() => intervalsOf(CASE).interval(functionals[0][1], 2)).toThrow(RangeError);
});
