/**
 * A grid row by row with one pooled multiplier. Two walks over the rows: the first gathers, for every geometry that
 * occurs, what fixes the multiplier; the second answers. Memory holds a few blocks of rows, a few geometries, and the
 * sums of the rest.
 */
import {InputError, ModelError, type ReportableError} from "../errors.ts";
import {misfitLimit} from "../inverse/misfit-range.ts";
import type {BoundChoice} from "../inverse/nouns.ts";
import {doubt, isDoubtful, type Notice} from "../notice.ts";
import {recent} from "../numeric/recent.ts";
import {valuesOfLine} from "../operators/readings-of-line.ts";
import {whitenData} from "../operators/whitened.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import type {RowBand, RowOutcome, RowStudy} from "./outcome.ts";
import {pooledRows, sampleStep} from "./pooled-rows.ts";
import {type Prepared, rowPreparer} from "./prepared-rows.ts";
import {type RowAnswers, type RowFigures, type RowGeometry, rowAnswers, rowGeometry} from "./row-geometry.ts";
import type {RowThreads} from "./row-work.ts";
import type {Settings} from "./settings.ts";
import {statusWithout} from "./skipped.ts";
import {checkGroups} from "./survey-study.ts";

/** Geometries kept at a time: a 1,000-pixel row takes about 25 MB. A heuristic. */
const KEPT = 4;
/** Rows solved together: transforms are complex, so that two cost as much as one. */
const TOGETHER = 2;
/** Readings of a parcel for another thread, about; and parcels on their way, for each thread. */
const PARCEL = 2 ** 17;
const ON_THE_WAY = 2;

/**
 * Outcomes in the order of the rows.
 * @param threads that solve level rows beside this one; the answers are the same bits without
 * @throws {ReportableError} when no row can be answered, or no multiplier serves them together
 */
export async function* studyGrid(survey: Survey, settings: Settings, threads?: RowThreads): AsyncGenerator<RowOutcome> {
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
  const prepare = rowPreparer(settings);
  const geometries = recent<string, RowGeometry>(KEPT);
  const pooled = await poolRows(survey, settings, prepare, geometries);
  const answers = recent<string, RowAnswers>(KEPT);
  const pixels = survey.grid === undefined ? 1 : pixelsOf(survey.grid);
  const parcel = threads === undefined ? TOGETHER : TOGETHER * Math.max(1, Math.round(PARCEL / (TOGETHER * pixels)));
  const most = threads === undefined ? 0 : ON_THE_WAY * threads.count;
  let index = -1;
  let waiting: Waiting[] = [];
  /** In the order of the rows. */
  const onTheWay: (RowOutcome | Parcel)[] = [];
  const send = (): void => {
    if (waiting.length > 0) onTheWay.push({rows: waiting, figures: solved(waiting, threads)});
    waiting = [];
  };
  const arrived = async function* (left: number): AsyncGenerator<RowOutcome> {
    while (onTheWay.length > left) {
      const next = onTheWay.shift()!;
      if ("rows" in next) yield* outcomesOf(next.rows, await next.figures, survey.grid, pooled);
      else yield next;
    }
  };
  for await (const record of survey.lines()) {
    ++index;
    const prepared = prepare(record);
    if ("failure" in prepared) {
      send();
      const {id, failure} = prepared;
      onTheWay.push({status: statusWithout(failure), id, index, failure});
    } else {
      const {line, conditioned, zones, key} = prepared;
      const geometry = geometries(key, () => rowGeometry(conditioned, settings, zones.support));
      const answer = answers(key, () => rowAnswers(key, geometry, settings, pooled));
      if (waiting.length > 0 && waiting[0]!.answer !== answer) send();
      waiting.push({line, conditioned, index, geometry, answer});
      if (waiting.length >= parcel) send();
    }
    yield* arrived(most);
  }
  send();
  yield* arrived(0);
}

/** A row on its way to be solved together with the next. */
interface Waiting {
  readonly line: SurveyLine;
  readonly conditioned: ConditionedLine;
  readonly index: number;
  readonly geometry: RowGeometry;
  readonly answer: RowAnswers;
}

/** Rows of one geometry that are being solved. */
interface Parcel {
  readonly rows: readonly Waiting[];
  readonly figures: Promise<readonly RowFigures[]>;
}

/** The first walk: the one multiplier and bound. */
async function poolRows(
  survey: Survey,
  settings: Settings,
  prepare: (record: LineRecord) => Prepared,
  geometries: (key: string, make: () => RowGeometry) => RowGeometry,
): Promise<BoundChoice> {
  const pool = pooledRows();
  const {grid} = survey;
  const step = grid === undefined ? 1 : sampleStep(linesOf(grid), pixelsOf(grid));
  let supportLength = 0;
  /** Level rows so far, by key. */
  const level = new Map<string, number>();
  let failure: ReportableError | undefined;
  for await (const record of survey.lines()) {
    const prepared = prepare(record);
    if ("failure" in prepared) {
      if (failure === undefined || statusWithout(failure) === "skipped") failure = prepared.failure;
      continue;
    }
    const {conditioned, zones, key} = prepared;
    const before = level.get(key);
    if (before !== undefined) {
      level.set(key, before + 1);
      // The middle of each step; before the first of them nothing says that rows are level.
      if ((before + 1) % step !== step >> 1) continue;
    }
    const geometry = geometries(key, () => rowGeometry(conditioned, settings, zones.support));
    if (before === undefined && !("modes" in geometry.rows)) level.set(key, 1);
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
  const all = [...level.values()].reduce((sum, rows) => sum + rows, 0);
  if (pool.levelRows === all) return choice;
  return {
    ...choice,
    reason: `${choice.reason}; by ${pool.levelRows} of ${all} rows without gaps, spread over the grid`,
  };
}

type Grid = NonNullable<Survey["grid"]>;
const pixelsOf = ({orientation, width, height}: Grid): number => (orientation === "rows" ? width : height);
const linesOf = ({orientation, width, height}: Grid): number => (orientation === "rows" ? height : width);

/** Q d/σ. */
const dataOf = (conditioned: ConditionedLine, {readings, basis}: RowGeometry): Float64Array =>
  whitenData(valuesOfLine(conditioned), readings, basis);

/** @param rows of one geometry */
function solved(rows: readonly Waiting[], threads: RowThreads | undefined): Promise<readonly RowFigures[]> {
  const [{geometry, answer}] = rows as readonly [Waiting];
  if (threads === undefined || answer.work === undefined)
    return Promise.resolve(answer.solve(rows.map(({conditioned}) => dataOf(conditioned, geometry))));
  const figures = threads.solve({...answer.work, values: rows.map(({conditioned}) => valuesOfLine(conditioned))});
  // What goes wrong is told in its turn.
  figures.catch(() => undefined);
  return figures;
}

function outcomesOf(
  rows: readonly Waiting[],
  figures: readonly RowFigures[],
  grid: Survey["grid"],
  choice: BoundChoice,
): RowOutcome[] {
  return rows.map((row, k) => {
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
  const halfWidths = answer.halfWidths();
  const bands = values.map((at, k): RowBand => {
    if (count === pixels) return {value: at, halfWidth: halfWidths[k]!};
    const value = new Float64Array(pixels).fill(Number.NaN);
    const halfWidth = new Float64Array(pixels).fill(Number.NaN);
    for (let i = 0; i < count; ++i) {
      value[row[i]! - 1] = at[i]!;
      halfWidth[row[i]! - 1] = halfWidths[k]![i]!;
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
    resolution: answer.resolution(),
    degreesOfFreedom,
    notices,
  };
}
