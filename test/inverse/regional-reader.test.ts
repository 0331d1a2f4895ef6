/** A reader of the regional takes all of it, RᵀW = 1, whatever solutions over the line it is made from. */
import {expect, test} from "vitest";
import {regionalReader} from "../../lib/inverse/regional-reader.ts";
import type {WholeLine} from "../../lib/inverse/whole-line.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";

const COUNT = 200;
const x = Float64Array.from({length: COUNT}, (_, i) => 2 * i);
const basis = regionalBasis(verticalReadings(x, new Float64Array(COUNT).fill(20), 0.1), 1);

function furthestFromUnit(line: WholeLine): number {
  const {weights} = regionalReader(line, basis, 1);
  let most = 0;
  for (let t = 0; t < basis.terms; ++t)
    for (let u = 0; u < basis.terms; ++u) {
      let sum = t === u ? -1 : 0;
      for (let i = 0; i < COUNT; ++i) sum += basis.rows[t * COUNT + i] * weights[u * COUNT + i];
      most = Math.max(most, Math.abs(sum));
    }
  return most;
}

test.each([1, 2, 3])("steps that stood still at something of either sign, draw %d", (seed) => {
  const random = seededRandom(seed);
  const line: WholeLine = {gram: (vector) => vector, solve: () => normalDeviates(random, COUNT)};
  // The lift leaves RᵀK⁻¹R well conditioned or nearly singular; corrected once, that is squared.
  expect(furthestFromUnit(line)).toBeLessThan(1e-6);
});

test("the negative of what was asked", () => {
  const line: WholeLine = {gram: (vector) => vector, solve: (_, vector) => vector.map((value) => -value)};
  expect(furthestFromUnit(line)).toBeLessThan(1e-12);
});
