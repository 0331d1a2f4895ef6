/** A conditioned line with its operator and solver: what every later question is put to. */
import {NumericalError} from "../errors.ts";
import type {Interval, Support} from "../geometry/interval.ts";
import type {IntervalKind} from "../inverse/interval-kind.ts";
import {misfitTarget} from "../inverse/misfit-range.ts";
import {type LineIntervals, solverByKind} from "../inverse/solver-by-kind.ts";
import {type Continuum, continuumOf} from "../operators/continuum.ts";
import {type ForwardOperator, forwardOperator} from "../operators/forward.ts";
import {withKnownMeans} from "../operators/known-means.ts";
import {multipoleOperator} from "../operators/multipole.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import {pick, type Readings} from "../operators/readings.ts";
import {type PointReading, readingsOfLine, readingsWithPoints, valuesOfLine} from "../operators/readings-of-line.ts";
import {projectOutInPlace, type RegionalBasis, regionalBasis} from "../operators/regional.ts";
import {whiten, whitenData} from "../operators/whitened.ts";
import {constrain} from "../solvers/constraint.ts";
import {iterativeSolver} from "../solvers/iterative.ts";
import {levelSolver} from "../solvers/level.ts";
import {systemOf} from "../solvers/level-systems.ts";
import type {Solver} from "../solvers/solver.ts";
import {spectralSolver} from "../solvers/spectral.ts";
import {byChainage} from "../survey/by-chainage.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SharedGeometry} from "./shared-geometry.ts";
import type {TieRow} from "./ties-of-line.ts";

export interface Operated {
  /** Of the channels, and of ties with a tolerance after them. */
  readonly readings: Readings;
  readonly values: Float64Array;
  readonly regional: RegionalBasis;
  /** Undefined where the solver itself knows the field of its source. */
  readonly operator: ForwardOperator | undefined;
  readonly solver: Solver;
}

/**
 * From this many stations on level lines are solved without modes: there the two take the same time, choice of the
 * multiplier and trade-off curve included. A matter of speed alone.
 */
export const LEVEL_STATIONS = 600;
/** Up to this many stations a line falls back on its modes where the readings ask for a multiplier too small without. */
const MODES_SERVE = 3000;

/**
 * A line that is not level is solved in steps where that is quicker. Modes take a time like readings × panels × the fewer
 * of the two, steps one like readings + panels; the two are equal where the quotient is this (measured from 2,000 stations
 * on 2,000 panels to 4,000 stations on 1,800, choice of the multiplier and trade-off curve included). A matter of speed.
 */
const STEPS_PAY = 2e6;
/** Above this share of the largest eigenvalue the least multiplier is what steps could not go below, not what readings ask for. */
const STEPS_STOOD = 2e-7;
/** Up to this many readings modes can be waited for then: some ten minutes. */
const MODES_POSSIBLE = 12_000;

/**
 * @param degree of the regional, −1 for none; ties have none
 * @param ties what each asks of the panels
 * @param modes whether the rule for the bound weighs them one by one
 * @param shared with lines of the same geometry; none: it is worked out for this line alone
 */
export function operated(
  conditioned: ConditionedLine,
  panels: Panels,
  degree: number,
  ties: readonly TieRow[] = [],
  modes = false,
  shared?: SharedGeometry,
): Operated {
  const without =
    modes || ties.length > 0
      ? undefined
      : (levelOperated(conditioned, panels, degree, shared) ?? longOperated(conditioned, panels, degree));
  if (without !== undefined) return without;
  const soft = ties.filter(({exact}) => !exact);
  const exact = ties.filter((tie) => tie.exact);
  const readings = readingsWithPoints(
    conditioned,
    soft.map(({point}) => point),
  );
  const values = Float64Array.of(...valuesOfLine(conditioned), ...soft.map(({value}) => value));
  const measured = forwardOperator(readingsOfLine(conditioned), panels);
  const operator = soft.length === 0 ? measured : withRows(measured, soft);
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

/** The readings of the line, then one more for each tie. */
function withRows({readings, panels, matrix}: ForwardOperator, ties: readonly TieRow[]): ForwardOperator {
  const longer = new Float64Array((readings + ties.length) * panels.count);
  longer.set(matrix);
  ties.forEach(({row}, k) => {
    longer.set(row, (readings + k) * panels.count);
  });
  return {readings: readings + ties.length, panels, matrix: longer};
}

/** A long line, level and even, of one channel with white noise; undefined for any other. */
function levelOperated(
  conditioned: ConditionedLine,
  panels: Panels,
  degree: number,
  shared: SharedGeometry | undefined,
): Operated | undefined {
  if (conditioned.channels.length > 1 || conditioned.line.stations.count < LEVEL_STATIONS) return undefined;
  const readings = readingsOfLine(conditioned);
  // Flown backwards, it is the same line.
  const order = Int32Array.from(byChainage(readings.x));
  const sorted = pick(readings, order);
  const system = shared === undefined ? systemOf(sorted, panels, degree) : shared.systems.of(sorted, panels, degree);
  if (system === undefined) return undefined;
  const values = valuesOfLine(conditioned);
  // The system knows no noise, so that lines of one geometry share it.
  const data = projectOutInPlace(
    Float64Array.from(order, (i) => values[i]!),
    system.basis,
  );
  const solver = levelSolver(system, data, panels).withNoise(readings.noise[0]!);
  if (readings.count <= MODES_SERVE && solver.misfit(solver.least) > misfitTarget(readings.count)) return undefined;
  return {
    readings,
    values,
    regional: regionalBasis(readings, degree),
    operator: undefined,
    solver: inOrderOfFile(solver, order),
  };
}

const stepsPay = (readings: number, panels: number): boolean =>
  readings * panels * Math.min(readings, panels) > STEPS_PAY * (readings + panels);

/** A long line, however uneven and of however many channels; undefined for any other. */
function longOperated(conditioned: ConditionedLine, panels: Panels, degree: number): Operated | undefined {
  const readings = readingsOfLine(conditioned);
  if (!stepsPay(readings.count, panels.count)) return undefined;
  const {count} = conditioned.line.stations;
  const values = valuesOfLine(conditioned);
  const regional = regionalBasis(readings, degree);
  const operator = multipoleOperator(readings, panels);
  const solver = iterativeSolver(operator, readings, whitenData(values, readings, regional), regional);
  if (solver.misfit(solver.least) > misfitTarget(readings.count)) {
    const stood = solver.least > STEPS_STOOD * solver.largest;
    if (count <= MODES_SERVE || (stood && readings.count <= MODES_POSSIBLE)) return undefined;
    if (stood) throw tooPrecise(readings.count);
  }
  const field = (estimate: Solver["estimate"]) => (multiplier: number) =>
    operator.applyInto(new Float64Array(readings.count), estimate(multiplier));
  const told = (own: Solver): Solver => ({
    ...own,
    field: field(own.estimate),
    withNoise: (factor) => told(own.withNoise(factor)),
  });
  return {readings, values, regional, operator: undefined, solver: told(solver)};
}

const tooPrecise = (readings: number): NumericalError =>
  new NumericalError(
    "line/too-precise",
    `The ${readings} readings of this long line are too precise, or too little alike in their channels, to be fitted in steps, and too many to be fitted otherwise. Take one channel, a larger noise, or the line in parts.`,
  );

/** @param order `order[k]` is the place in the file of the k-th from the left */
function inOrderOfFile(solver: Solver, order: Int32Array): Solver {
  const {field} = solver;
  if (field === undefined) return solver;
  return {
    ...solver,
    field(multiplier) {
      const sorted = field(multiplier);
      const placed = new Float64Array(sorted.length);
      order.forEach((place, k) => {
        placed[place] = sorted[k]!;
      });
      return placed;
    },
    withNoise: (factor) => inOrderOfFile(solver.withNoise(factor), order),
  };
}

/** The line with one of its channels only. */
export const withChannel = (conditioned: ConditionedLine, place: number): ConditionedLine => ({
  ...conditioned,
  channels: conditioned.channels.slice(place, place + 1),
});

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
  readonly shared?: SharedGeometry | undefined;
}

/** What is known of a line beside its channels. */
export interface Known {
  readonly readings: readonly {readonly point: PointReading; readonly value: number}[];
  /** Means of f that are known exactly. */
  readonly means: readonly {readonly stretch: Interval; readonly value: number}[];
}

const NOTHING: Known = {readings: [], means: []};

/**
 * The solver for intervals on the readings of a line, f anywhere on the support.
 * @param known ties, as readings and as means
 */
export function intervalsOn(
  conditioned: ConditionedLine,
  {support, panels, degree, bound, confidence, loosest = 1, kind = "single", shared}: IntervalQuestion,
  known = NOTHING,
): {readonly continuum: Continuum; readonly intervals: LineIntervals} {
  const readings = readingsWithPoints(
    conditioned,
    known.readings.map(({point}) => point),
  );
  const continuum = withKnownMeans(
    continuumOf(readings, support, boundaryOfPanels(panels)),
    known.means.map(({stretch}) => stretch),
  );
  const sorted = regionalBasis(continuum, degree, conditioned.channels.length);
  const values = Float64Array.of(...valuesOfLine(conditioned), ...known.readings.map(({value}) => value));
  const data = whitenData(
    Float64Array.from(continuum.place, (i) => values[i]),
    continuum,
    sorted,
  );
  const met = Float64Array.from(known.means, ({value}) => value);
  const intervals = solverByKind(
    kind,
    continuum,
    sorted,
    data,
    {bound, confidence, loosest, store: shared?.intervals},
    met,
  );
  return {continuum, intervals};
}
