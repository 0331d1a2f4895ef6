/** A conditioned line with its operator and solver: what every later question is put to. */
import type {Support} from "../geometry/interval.ts";
import type {IntervalKind} from "../inverse/interval-kind.ts";
import {type IntervalSolver, intervalSolver} from "../inverse/intervals.ts";
import {type BandSolver, simultaneousSolver} from "../inverse/simultaneous.ts";
import {type Continuum, continuumOf} from "../operators/continuum.ts";
import {type ForwardOperator, forwardOperator} from "../operators/forward.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {type PointReading, readingsOfLine, readingsWithPoints, valuesOfLine} from "../operators/readings-of-line.ts";
import {type RegionalBasis, regionalBasis} from "../operators/regional.ts";
import {whiten, whitenData} from "../operators/whitened.ts";
import {constrain} from "../solvers/constraint.ts";
import type {Solver} from "../solvers/solver.ts";
import {spectralSolver} from "../solvers/spectral.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {TieRow} from "./ties-of-line.ts";

export interface Operated {
  /** Of the channels, and of ties with a tolerance after them. */
  readonly readings: Readings;
  readonly values: Float64Array;
  readonly regional: RegionalBasis;
  readonly operator: ForwardOperator;
  readonly solver: Solver;
}

/**
 * @param degree of the regional, −1 for none; ties have none
 * @param ties what each asks of the panels
 */
export function operated(
  conditioned: ConditionedLine,
  panels: Panels,
  degree: number,
  ties: readonly TieRow[] = [],
): Operated {
  const soft = ties.filter(({exact}) => !exact);
  const exact = ties.filter((tie) => tie.exact);
  const readings = readingsWithPoints(
    conditioned,
    soft.map(({point}) => point),
  );
  const values = Float64Array.of(...valuesOfLine(conditioned), ...soft.map(({value}) => value));
  const measured = forwardOperator(readingsOfLine(conditioned), panels);
  const matrix = new Float64Array(readings.count * panels.count);
  matrix.set(measured.matrix);
  soft.forEach(({row}, k) => {
    matrix.set(row, (measured.readings + k) * panels.count);
  });
  const operator: ForwardOperator = {readings: readings.count, panels, matrix};
  const regional = regionalBasis(readings, degree, conditioned.channels.length);
  const free = whiten(operator, readings, values, regional);
  const tied =
    exact.length === 0
      ? undefined
      : constrain(
          free,
          exact.map(({row}) => row),
          exact.map(({value}) => value),
        );
  return {readings, values, regional, operator, solver: spectralSolver(tied?.system ?? free, regional.terms, tied)};
}

/** The line with one of its channels only. */
export const withChannel = (conditioned: ConditionedLine, place: number): ConditionedLine => ({
  ...conditioned,
  channels: conditioned.channels.slice(place, place + 1),
});

/** Of a simultaneous band with its tally. */
type LineIntervals = IntervalSolver & Partial<Pick<BandSolver, "tally">>;

interface IntervalQuestion {
  readonly support: Support;
  readonly panels: Panels;
  /** Of the regional, −1 for none. */
  readonly degree: number;
  /** M, SI·√m. */
  readonly bound: number;
  readonly confidence: number;
  /** How many times M will be asked for; default 1. */
  readonly loosest?: number;
  /** Default: single. */
  readonly kind?: IntervalKind | undefined;
}

const SOLVER: Readonly<Record<IntervalKind, (...given: Parameters<typeof intervalSolver>) => LineIntervals>> = {
  single: intervalSolver,
  simultaneous: simultaneousSolver,
};

/**
 * The solver for intervals on the readings of a line, f anywhere on the support.
 * @param known ties above the boundary, as readings
 */
export function intervalsOn(
  conditioned: ConditionedLine,
  {support, panels, degree, bound, confidence, loosest = 1, kind = "single"}: IntervalQuestion,
  known: readonly {readonly point: PointReading; readonly value: number}[] = [],
): {readonly continuum: Continuum; readonly intervals: LineIntervals} {
  const readings = readingsWithPoints(
    conditioned,
    known.map(({point}) => point),
  );
  const continuum = continuumOf(readings, support, boundaryOfPanels(panels));
  const sorted = regionalBasis(continuum, degree, conditioned.channels.length);
  const values = Float64Array.of(...valuesOfLine(conditioned), ...known.map(({value}) => value));
  const data = whitenData(
    Float64Array.from(continuum.place, (i) => values[i]),
    continuum,
    sorted,
  );
  const intervals = SOLVER[kind](continuum, sorted, data, {bound, confidence, loosest});
  return {continuum, intervals};
}
