/** Numbers that lie alike among the stations of a level line share their estimate; that must not show. */
import {expect, test} from "vitest";
import {intervalStore} from "../../lib/inverse/interval-store.ts";
import {intervalSolver} from "../../lib/inverse/intervals.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {densityAt, type Functional, meanOver} from "../../lib/operators/functional.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";

const COUNT = 600;
const SPACING = 5;
const SUPPORT = [{from: -100, to: COUNT * SPACING + 100}];

function solverAt(origin: number, degree: number, store = intervalStore()) {
  const x = Float64Array.from({length: COUNT}, (_, i) => origin + i * SPACING);
  const support = SUPPORT.map(({from, to}) => ({from: origin + from, to: origin + to}));
  const continuum = continuumOf(verticalReadings(x, new Float64Array(COUNT).fill(20), 0.02), support);
  const basis = regionalBasis(continuum, degree);
  const data = whitenData(
    Float64Array.from({length: COUNT}, (_, i) => Math.sin(0.07 * i)),
    continuum,
    basis,
  );
  return {
    support,
    intervals: intervalSolver(continuum, basis, data, {bound: 20, confidence: 0.95, layout: "windows", store}),
  };
}

/** The same number, asked as one that is like no other. */
const alone = ({moved: _, ...rest}: Functional): Functional => rest;

test.each([-1, 1])("a mean has the interval that it has by its own window, regional %i", (degree) => {
  const {support, intervals} = solverAt(0, degree);
  for (const at of [400, 1000, 1501.3, 2222]) {
    const mean = meanOver({from: at - 8, to: at + 9}, support);
    const [shared, own] = [intervals.interval(mean), intervals.interval(alone(mean))];
    // The two searches for a stop within 0.08 of the best ln a: the half-width feels 2e-4 of that, or a reader less.
    expect(Math.abs(shared.halfWidth / own.halfWidth - 1)).toBeLessThan(2e-3);
    expect(Math.abs(shared.value - own.value)).toBeLessThan(0.1 * own.halfWidth);
    const {weights, deviation} = intervals.affine(mean);
    // s is that of the weights used.
    expect(Math.hypot(...weights)).toBeCloseTo(deviation, 9);
  }
});

test("without a regional a shift by whole spacings gives the same bits", () => {
  const {support, intervals} = solverAt(0, -1);
  const half = (at: number): number => intervals.interval(meanOver({from: at - 8, to: at + 9}, support)).halfWidth;
  expect(half(1001.7 + 40 * SPACING)).toBe(half(1001.7));
  expect(intervals.resolvingPower(densityAt(1100.3), 1e-3)).toBe(intervals.resolvingPower(densityAt(1500.3), 1e-3));
});

test("a store that another line has filled changes no bit", () => {
  const store = intervalStore();
  const ask = (solver: ReturnType<typeof solverAt>) =>
    [700, 1501.3].map((at) => solver.intervals.interval(meanOver({from: at - 8, to: at + 9}, solver.support)));
  ask(solverAt(0, 1, store));
  expect(ask(solverAt(0, 1, store))).toEqual(ask(solverAt(0, 1)));
});

test("modes of an endless support make no interval shorter than the best of the whole line", () => {
  const {support, intervals} = solverAt(0, 1);
  const x = Float64Array.from({length: COUNT}, (_, i) => i * SPACING);
  const continuum = continuumOf(verticalReadings(x, new Float64Array(COUNT).fill(20), 0.02), support);
  const whole = intervalSolver(continuum, regionalBasis(continuum, 1), new Float64Array(COUNT), {
    ...{bound: 20, confidence: 0.95, layout: "whole"},
  });
  for (const at of [300, 1501.3]) {
    const mean = meanOver({from: at - 8, to: at + 9}, support);
    const ratio = intervals.interval(mean).halfWidth / whole.interval(mean).halfWidth;
    // Modes left out count 1e-4 either way; the window and the readers of the regional cost the rest.
    expect(ratio).toBeGreaterThan(1 - 1e-4);
    expect(ratio).toBeLessThan(1.01);
  }
});
