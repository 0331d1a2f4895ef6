/** Intervals where means of f over stretches of the boundary are known, exactly or with a tolerance. */
import type {BoundaryLine} from "../../lib/geometry/boundary-line.ts";
import type {Interval, Support} from "../../lib/geometry/interval.ts";
import type {IntervalKind} from "../../lib/inverse/interval-kind.ts";
import {type AffineEstimate, intervalSolver} from "../../lib/inverse/intervals.ts";
import {type LineIntervals, solverByKind} from "../../lib/inverse/solver-by-kind.ts";
import type {Layout} from "../../lib/inverse/windows.ts";
import {type Continuum, continuumOf} from "../../lib/operators/continuum.ts";
import type {Functional} from "../../lib/operators/functional.ts";
import {besideMeans, withKnownMeans} from "../../lib/operators/known-means.ts";
import {readingsOf} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";
import {VERTICAL} from "./interval-case.ts";

/** With a tolerance of 0 it is exact. */
export interface Mean {
  readonly stretch: Interval;
  readonly tolerance: number;
  readonly value?: number;
}

export interface TiedCase {
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly support: Support;
  readonly noise: number;
  readonly noiseLength?: number;
  readonly bound: number;
  readonly means: readonly Mean[];
  readonly values?: Float64Array;
  readonly degree?: number;
  readonly layout?: Layout;
  readonly boundary?: BoundaryLine;
  readonly kind?: IntervalKind;
}

interface Tied {
  readonly continuum: Continuum;
  readonly intervals: LineIntervals;
  /** The estimate behind an interval that covers by itself: weights on whitened readings in the order of the continuum. */
  affine(functional: Functional): AffineEstimate;
}

export function tied(given: TiedCase): Tied {
  const {x, z, support, noise, noiseLength, bound, means, degree = -1, layout = "whole", kind = "single"} = given;
  const soft = means.filter(({tolerance}) => tolerance > 0);
  const exact = means.filter(({tolerance}) => !(tolerance > 0));
  const readings = readingsOf([
    {x, z, response: VERTICAL, noise, noiseLength},
    ...soft.map(({stretch, tolerance}) => ({
      x: Float64Array.of(0.5 * (stretch.from + stretch.to)),
      z: Float64Array.of(0),
      response: VERTICAL,
      noise: tolerance,
      stretch,
    })),
  ]);
  const continuum = withKnownMeans(
    continuumOf(readings, support, given.boundary),
    exact.map(({stretch}) => stretch),
  );
  const basis = regionalBasis(continuum, degree, 1);
  const all = Float64Array.of(...(given.values ?? new Float64Array(x.length)), ...soft.map(({value = 0}) => value));
  const data = whitenData(
    Float64Array.from(continuum.place, (i) => all[i]!),
    continuum,
    basis,
  );
  const terms = {bound, confidence: 0.95, layout};
  const solver = intervalSolver(continuum, basis, data, terms);
  const met = Float64Array.from(exact, ({value = 0}) => value);
  return {
    continuum,
    intervals: solverByKind(kind, continuum, basis, data, terms, met),
    affine: (functional) => solver.affine(besideMeans(functional, continuum)),
  };
}
