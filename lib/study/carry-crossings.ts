/**
 * Readings at crossings brought to one height. Mis-ties must be compared at equal height: over a shallow source a few
 * metres of height are worth more than any drift. To each reading is added what the line's own source adds between
 * its sensor and the common level; noise, regional and whatever is wrong with the line stay in it.
 *
 * A second walk over the lines, which estimates the source of those that have a reading to carry, one at a time.
 */
import {carriedChange} from "../continuation/carried-change.ts";
import {ReportableError} from "../errors.ts";
import {isDoubtful, type Notice} from "../notice.ts";
import type {CrossingSide, Crossings} from "../survey/crossings.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {Survey} from "../survey/survey.ts";
import {interpolated} from "../survey/track-place.ts";
import {estimateLine, type LineEstimate} from "./line-study.ts";
import type {Settings} from "./settings.ts";
import {statusWithout} from "./skipped.ts";
import {checkGroups, checkTies} from "./survey-study.ts";
import {zonesFor} from "./zones.ts";

/** Filled in line by line; NaN where a reading could not be carried. SI, m. */
export interface CarriedCrossings {
  /** Common level of each crossing, in the heights of the crossings. */
  readonly level: Float64Array;
  readonly first: Float64Array;
  readonly second: Float64Array;
  /** Why a crossing has no carried difference, by its number. */
  readonly reasons: Map<number, string>;
  /** By line, what is left to be carried; readings taken on the common level are kept and need no source. */
  readonly tasks: ReadonlyMap<number, readonly Task[]>;
}

/** What became of a line that had readings to carry. */
export type CarriedLine =
  | {readonly status: "done" | "doubtful"; readonly id: string; readonly notices: readonly Notice[]}
  | {readonly status: "skipped" | "failed"; readonly id: string; readonly failure: ReportableError};

/** Heights nearer than this are equal, m: no height is known better. */
const SAME_HEIGHT = 1e-3;

/** @param level of all crossings; undefined: of each the higher of its two sensors, so that nothing is carried downward */
export function uncarried(crossings: Crossings, level: number | undefined): CarriedCrossings {
  const {count, first, second} = crossings;
  const tasks = new Map<number, Task[]>();
  const carried = {
    level: Float64Array.from({length: count}, (_, i) => level ?? Math.max(first.height[i]!, second.height[i]!)),
    first: new Float64Array(count).fill(Number.NaN),
    second: new Float64Array(count).fill(Number.NaN),
    reasons: new Map<number, string>(),
    tasks,
  };
  for (let i = 0; i < count; ++i)
    for (const side of ["first", "second"] as const) {
      const {line, height, value} = crossings[side];
      if (Math.abs(carried.level[i]! - height[i]!) <= SAME_HEIGHT) {
        carried[side][i] = value[i]!;
        continue;
      }
      const own = tasks.get(line[i]!) ?? [];
      own.push({crossing: i, side});
      tasks.set(line[i]!, own);
    }
  return carried;
}

/** First less second at the common level; NaN where one of them could not be carried. */
export const carriedDifferences = ({first, second}: CarriedCrossings): Float64Array =>
  first.map((value, i) => value - second[i]!);

/** Readings of one line that must be carried: crossing, and on which of its sides the line is. */
interface Task {
  readonly crossing: number;
  readonly side: "first" | "second";
}

/**
 * Fills `carried`.
 * @param lines names of the lines that could be read, in the order of the files
 * @throws {InputError} `support/needs-group`, `tie/no-line`, before the first line; `zone/…`
 */
export async function* carryCrossings(
  survey: Survey,
  {lines, crossings}: {readonly lines: readonly string[]; readonly crossings: Crossings},
  settings: Settings,
  carried: CarriedCrossings,
): AsyncGenerator<CarriedLine> {
  checkGroups(survey, settings);
  await checkTies(survey, settings);
  const zonesOf = zonesFor(settings);
  let place = -1;
  for await (const record of survey.lines()) {
    if ("failure" in record) continue;
    ++place;
    const {line} = record;
    if (line.id !== lines[place]) throw new Error(`line ${line.id} where ${lines[place]} was before`);
    const own = carried.tasks.get(place);
    if (own === undefined) continue;
    const zones = zonesOf(line);
    try {
      const source = estimateLine(line, settings, zones);
      for (const task of own) carryOne(line, source, task, crossings, carried);
      yield {status: isDoubtful(source.notices) ? "doubtful" : "done", id: line.id, notices: source.notices};
    } catch (error) {
      if (!(error instanceof ReportableError)) throw error;
      for (const {crossing} of own) addReason(carried, crossing, `${line.id} has no source (${error.code})`);
      yield {status: statusWithout(error), id: line.id, failure: error};
    }
  }
}

function carryOne(
  {id}: SurveyLine,
  {conditioned, panels, estimate}: LineEstimate,
  {crossing, side}: Task,
  crossings: Crossings,
  carried: CarriedCrossings,
): void {
  const {at, height, value}: CrossingSide = crossings[side];
  const {response, z} = conditioned.channels[0]!;
  const x = interpolated(conditioned.line.stations.chainage, at[crossing]!);
  const from = interpolated(z, at[crossing]!);
  // A step up is the same in every kind of height, whatever each line's own counts from.
  const to = from + carried.level[crossing]! - height[crossing]!;
  try {
    const change = carriedChange({panels, density: estimate.density}, response, x, from, to);
    carried[side][crossing] = value[crossing]! + change;
  } catch (error) {
    if (!(error instanceof ReportableError)) throw error;
    addReason(carried, crossing, `the level is not above the boundary of ${id}`);
  }
}

function addReason({reasons}: CarriedCrossings, crossing: number, words: string): void {
  const earlier = reasons.get(crossing);
  reasons.set(crossing, earlier === undefined ? words : `${earlier}; ${words}`);
}
