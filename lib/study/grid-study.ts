/**
 * A grid row by row with one pooled multiplier. Two walks over the rows: the first gathers, for every geometry that
 * occurs, what fixes the multiplier; the second answers. Memory holds one block of rows, a few geometries, and the
 * sums of the rest.
 */
import {InputError, ModelError, ReportableError} from "../errors.ts";
import {misfitLimit} from "../inverse/misfit-range.ts";
import type {BoundChoice} from "../inverse/nouns.ts";
import {doubt, isDoubtful, type Notice} from "../notice.ts";
import {recent} from "../numeric/recent.ts";
import {valuesOfLine} from "../operators/readings-of-line.ts";
import {whitenData} from "../operators/whitened.ts";
import {condition} from "../survey/condition.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import {effectiveDirectionOf} from "./direction-of-line.ts";
import type {RowBand, RowOutcome, RowStudy} from "./outcome.ts";
import {pooledRows, sampleStep} from "./pooled-rows.ts";
import {type RowAnswers, type RowFigures, type RowGeometry, rowAnswers, rowGeometry} from "./row-geometry.ts";
import type {Settings} from "./settings.ts";
import {statusWithout} from "./skipped.ts";
import {cutNotices, supportOfLine} from "./support-of-line.ts";
import {checkGroups} from "./survey-study.ts";
import {type LineZones, type ZonesOf, zonesFor} from "./zones.ts";

/** Geometries kept at a time: a 1,000-pixel row takes about 25 MB. A heuristic. */
const KEPT = 4;
/** Rows solved together: transforms are complex, so that two cost as much as one. */
const TOGETHER = 2;

/**
 * Outcomes in the order of the rows.
 * @throws {ReportableError} when no row can be answered, or no multiplier serves them together
 */
export async function* studyGrid(survey: Survey, settings: Settings): AsyncGenerator<RowOutcome> {
  checkGroups(survey, settings);
  if (settings.model.strike !== undefined)
    throw new InputError(
      "strike/grid",
      "--strike turns one line at a time, and the survey is a grid, worked row by row with one bound. Leave it out, or take lines across the strike with --profiles FILE.geojson.",
    );
  if (settings.wanted.intervals === "simultaneous")
    throw new InputError(
      "intervals/grid",
      "--intervals simultaneous makes a band for all numbers of one line, and the survey is a grid, whose rows share their half-widths whatever they read. Leave it out, or take lines across the grid with --profiles FILE.geojson or --every N.",
    );
  const zonesOf = zonesFor(settings);
  const geometries = recent<string, RowGeometry>(KEPT);
  const pooled = await poolRows(survey, settings, zonesOf, geometries);
  const answers = recent<string, RowAnswers>(KEPT);
  let index = -1;
  let waiting: Waiting[] = [];
  const answered = (): RowOutcome[] => {
    const rows = waiting;
    waiting = [];
    return rows.length === 0 ? [] : answerRows(rows, survey.grid, pooled);
  };
  for await (const record of survey.lines()) {
    ++index;
    const prepared = prepare(record, settings, zonesOf);
    if ("failure" in prepared) {
      yield* answered();
      const {id, failure} = prepared;
      yield {status: statusWithout(failure), id, index, failure};
      continue;
    }
    const {line, conditioned, zones, key} = prepared;
    const geometry = geometries(key, () => rowGeometry(conditioned, settings, zones.support));
    const answer = answers(key, () => rowAnswers(geometry, settings, pooled.bound, pooled.multiplier));
    if (waiting.length > 0 && waiting[0]!.answer !== answer) yield* answered();
    waiting.push({line, conditioned, index, geometry, answer});
    if (waiting.length === TOGETHER) yield* answered();
  }
  yield* answered();
}

/** A row on its way to be solved together with the next. */
interface Waiting {
  readonly line: SurveyLine;
  readonly conditioned: ConditionedLine;
  readonly index: number;
  readonly geometry: RowGeometry;
  readonly answer: RowAnswers;
}

type Prepared =
  | {
      readonly line: SurveyLine;
      readonly conditioned: ConditionedLine;
      readonly zones: LineZones;
      /** Rows of one key share their geometry. */
      readonly key: string;
    }
  | {readonly id: string; readonly failure: ReportableError};

function prepare(record: LineRecord, settings: Settings, zonesOf: ZonesOf): Prepared {
  if ("failure" in record) return record;
  // What is wrong with polygons is wrong for every row.
  const zones = zonesOf(record.line);
  const line = {...record.line, notices: [...record.line.notices, ...zones.notices]};
  try {
    const first = condition(line, settings.model.boundary, effectiveDirectionOf(line, settings));
    const conditioned = {...first, notices: [...first.notices, ...cutNotices(first, zones.support)]};
    const pattern = `${patternOf(line, settings.model.support.length > 0)}${directionOf(first)}`;
    if (zones.support === undefined) return {line, conditioned, zones, key: pattern};
    const support = supportOfLine(conditioned, settings.model, zones.support);
    return {line, conditioned, zones, key: `${pattern} ${support.map(({from, to}) => `${from}:${to}`).join(" ")}`};
  } catch (error) {
    if (!(error instanceof ReportableError)) throw error;
    return {id: line.id, failure: error};
  }
}

/** Which pixels hold readings, as runs; the place of the first counts only where the support is fixed. */
function patternOf(line: SurveyLine, placed: boolean): string {
  const {row, count} = line.stations;
  const runs: number[] = placed ? [row[0]] : [];
  let length = 1;
  for (let i = 1; i < count; ++i) {
    const step = row[i] - row[i - 1];
    if (step === 1) ++length;
    else {
      runs.push(length, step);
      length = 1;
    }
  }
  runs.push(length);
  return runs.join(" ");
}

/** Rows share a geometry while the Earth's field along them is the same to a tenth of a degree and a thousandth of β. */
const directionOf = ({direction}: ConditionedLine): string =>
  direction === undefined ? "" : ` ${direction.inclination.toFixed(1)}° ${direction.beta.toFixed(3)}`;

/** The first walk: the one multiplier and bound. */
async function poolRows(
  survey: Survey,
  settings: Settings,
  zonesOf: ZonesOf,
  geometries: (key: string, make: () => RowGeometry) => RowGeometry,
): Promise<BoundChoice> {
  const pool = pooledRows();
  const {grid} = survey;
  const pixels = grid === undefined ? Infinity : pixelsOf(grid);
  const step = grid === undefined ? 1 : sampleStep(linesOf(grid), pixels);
  let supportLength = 0;
  let complete = 0;
  let sampling = false;
  let failure: ReportableError | undefined;
  for await (const record of survey.lines()) {
    const isComplete = "line" in record && record.line.stations.count === pixels;
    if (isComplete) ++complete;
    // The middle of each step; before the first level row nothing says that rows are level.
    if (sampling && isComplete && complete % step !== step >> 1) continue;
    const prepared = prepare(record, settings, zonesOf);
    if ("failure" in prepared) {
      if (failure === undefined || statusWithout(failure) === "skipped") failure = prepared.failure;
      continue;
    }
    const {conditioned, zones, key} = prepared;
    const geometry = geometries(key, () => rowGeometry(conditioned, settings, zones.support));
    if (isComplete && !("modes" in geometry.rows)) sampling = true;
    pool.add(key, geometry, dataOf(conditioned, geometry));
    supportLength = Math.max(supportLength, geometry.supportLength);
  }
  const question = pool.question();
  if (question === undefined)
    throw (
      failure ??
      new ModelError("grid/no-readings", "The grid holds no reading at all. Check its nodata value and band.")
    );
  const choice = settings.bound.choose({...question, supportLength});
  if (pool.levelRows === 0 || pool.levelRows === complete) return choice;
  return {
    ...choice,
    reason: `${choice.reason}; by ${pool.levelRows} of ${complete} complete rows, spread over the grid`,
  };
}

type Grid = NonNullable<Survey["grid"]>;
const pixelsOf = ({orientation, width, height}: Grid): number => (orientation === "rows" ? width : height);
const linesOf = ({orientation, width, height}: Grid): number => (orientation === "rows" ? height : width);

/** Q d/σ. */
const dataOf = (conditioned: ConditionedLine, {readings, basis}: RowGeometry): Float64Array =>
  whitenData(valuesOfLine(conditioned), readings, basis);

/** @param waiting rows of one geometry */
function answerRows(waiting: readonly Waiting[], grid: Survey["grid"], choice: BoundChoice): RowOutcome[] {
  const [{geometry, answer}] = waiting as [Waiting];
  const figures = answer.solve(waiting.map(({conditioned}) => dataOf(conditioned, geometry)));
  return waiting.map((row, k) => {
    const study = studyOf(row, figures[k]!, grid, choice);
    return {status: isDoubtful(study.notices) ? "doubtful" : "done", id: row.line.id, index: row.index, study};
  });
}

function studyOf(
  {line, conditioned, geometry, answer}: Waiting,
  {values, norm, misfit, degreesOfFreedom}: RowFigures,
  grid: Survey["grid"],
  choice: BoundChoice,
): RowStudy {
  const {count, row} = line.stations;
  const pixels = grid === undefined ? count : pixelsOf(grid);
  const bands = values.map((at, k): RowBand => {
    const value = new Float64Array(pixels).fill(Number.NaN);
    const halfWidth = new Float64Array(pixels).fill(Number.NaN);
    for (let i = 0; i < count; ++i) {
      value[row[i]! - 1] = at[i]!;
      halfWidth[row[i]! - 1] = answer.halfWidths[k]![i]!;
    }
    return {value, halfWidth};
  });
  const notices: Notice[] = [...line.notices, ...conditioned.notices];
  if (misfit > misfitLimit(count))
    notices.push(
      doubt(
        "grid/row-fits-poorly",
        `The pooled multiplier leaves a misfit of ${misfit.toPrecision(4)} on row ${line.id}, beyond what the noise explains for ${count} readings (${misfitLimit(count).toPrecision(4)}).`,
      ),
    );
  // Where the bound was assumed from a sample of rows, others may be stronger.
  if (choice.basis === "assumed-bound" && norm > choice.bound)
    notices.push(
      doubt(
        "grid/row-beyond-bound",
        `The source under row ${line.id} is stronger (norm ${(norm / choice.bound).toPrecision(3)} times the bound) than was assumed from the rows that the multiplier was chosen by: its intervals are too narrow. Give a --bound.`,
      ),
    );
  return {
    source: bands[0]!,
    levels: answer.levels.map(({setting, band}) => ({setting, band: bands[band]!})),
    stations: count,
    panels: geometry.panels.count,
    modes: "modes" in geometry.rows ? geometry.rows.modes.count : undefined,
    choice,
    norm,
    misfit,
    misfitExpected: count,
    noise: conditioned.channels[0].noise,
    noiseLength: conditioned.channels[0].noiseLength,
    resolution: answer.resolution,
    degreesOfFreedom,
    notices,
  };
}
