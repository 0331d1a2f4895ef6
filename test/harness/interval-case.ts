/** The solver of intervals for stations, support and noise given as numbers; the walk of lib/study without a survey. */
import type {BoundaryLine} from "../../lib/geometry/boundary-line.ts";
import type {Support} from "../../lib/geometry/interval.ts";
import {type AffineIntervalSolver, intervalSolver} from "../../lib/inverse/intervals.ts";
import {type BandSolver, simultaneousSolver} from "../../lib/inverse/simultaneous.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {type Functional, fieldAt} from "../../lib/operators/functional.ts";
import {type Readings, readingsOf, verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";
import type {Response} from "../../lib/potential/kernel.ts";

/** The downward component. */
export const VERTICAL: Response = {re: 1, im: 0, order: 0};

export interface IntervalCase {
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly support: Support;
  readonly noise: number;
  readonly bound: number;
  readonly degree?: number;
  readonly confidence?: number;
  readonly values?: Float64Array;
  readonly loosest?: number;
  readonly layout?: "by size" | "whole" | "windows";
  /** What was read, where it is not the downward component at (x, z). */
  readonly readings?: Readings;
  readonly boundary?: BoundaryLine;
}

export function intervalsOf(given: IntervalCase): AffineIntervalSolver {
  const {continuum, basis, data, terms} = prepared(given);
  return intervalSolver(continuum, basis, data, terms);
}

export function bandOf(given: IntervalCase): BandSolver {
  const {continuum, basis, data, terms} = prepared(given);
  return simultaneousSolver(continuum, basis, data, terms);
}

function prepared(given: IntervalCase) {
  const {x, z, support, noise, bound, degree = 1, confidence = 0.95, layout = "by size"} = given;
  const continuum = continuumOf(given.readings ?? verticalReadings(x, z, noise), support, given.boundary);
  const basis = regionalBasis(continuum, degree);
  const values = given.values ?? new Float64Array(continuum.count);
  const readings = Float64Array.from(continuum.place, (i) => values[i]);
  const data = whitenData(readings, continuum, basis);
  return {continuum, basis, data, terms: {bound, confidence, layout, loosest: given.loosest ?? 1}};
}

/** What a sensor would read at a point above a flat boundary, or another. */
export const readAt = (
  x: number,
  z: number,
  support: Support,
  response: Response = VERTICAL,
  boundary?: BoundaryLine,
): Functional => fieldAt(x, z, response, continuumOf(readingsOf([]), support, boundary));
