/** The solver of intervals for stations, support and noise given as numbers; the walk of lib/study without a survey. */
import type {Support} from "../../lib/geometry/interval.ts";
import {type IntervalSolver, intervalSolver} from "../../lib/inverse/intervals.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";

export interface IntervalCase {
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly support: Support;
  readonly noise: number;
  readonly bound: number;
  readonly degree?: number;
  readonly confidence?: number;
  readonly values?: Float64Array;
  readonly layout?: "by size" | "whole" | "windows";
}

export function intervalsOf(given: IntervalCase): IntervalSolver {
  const {x, z, support, noise, bound, degree = 1, confidence = 0.95, layout = "by size"} = given;
  const continuum = continuumOf(x, z, support, noise);
  const basis = regionalBasis(continuum.x, degree);
  const values = given.values ?? new Float64Array(x.length);
  const readings = Float64Array.from(continuum.order, (i) => values[i]);
  return intervalSolver(continuum, basis, whitenData(readings, noise, basis), bound, confidence, layout);
}
