/** What is in a survey and what is doubtful, as plain data to be printed. SI; metres; degrees. */
import {type ErrorCode, ReportableError} from "../errors.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import type {SurveyLine} from "./line.ts";
import {type LineFigures, lineFigures} from "./line-figures.ts";
import {type Neighbours, neighbours} from "./neighbours.ts";
import {NOT_CORRECTED, type Uncorrected} from "./not-corrected.ts";
import type {Axis, GridFrame, RoleChoice, Survey} from "./survey.ts";
import {type ThinnedLine, thinned} from "./thinned-line.ts";

export interface Inspection {
  readonly kind: Survey["kind"];
  readonly files: readonly string[];
  readonly choices: readonly RoleChoice[];
  readonly axes: readonly Axis[];
  readonly delivered: string | undefined;
  readonly grid: GridFrame | undefined;
  /** In the order of the files. */
  readonly lines: readonly LineFigures[];
  /** Lines that could not be made, and why. */
  readonly failures: readonly {readonly id: string; readonly code: ErrorCode; readonly message: string}[];
  /** Undefined for grids, whose rows are alike by construction. */
  readonly neighbours: Neighbours | undefined;
  /** Of the survey as a whole; those of a line are with the line. */
  readonly notices: readonly Notice[];
  /** Corrections that are not made, for the methods measured. */
  readonly notCorrected: readonly Uncorrected[];
}

/** Lines kept for comparison, at 2,000 points each: 64 MB. */
const MOST_COMPARED = 2000;

/** The Earth's field along a line; undefined where no direction was given. */
export type DirectionOf = (line: SurveyLine) => EffectiveDirection | undefined;

/**
 * One walk over the lines; memory holds figures of every line and thinned copies of at most 2,000.
 * @param directionOf what it throws is a doubt here, since a look needs no direction
 * @throws {ReportableError} of `directionOf`, where its code is `direction/date`: wrong for every line
 */
export async function inspectSurvey(survey: Survey, directionOf: DirectionOf = () => undefined): Promise<Inspection> {
  const azimuths = new Map(survey.axes.map(({group, azimuth}) => [group, azimuth]));
  const lines: LineFigures[] = [];
  const failures: Inspection["failures"][number][] = [];
  const copies: ThinnedLine[] = [];
  const methods = new Set<string>(["both"]);
  const notices = [...survey.notices];
  const flown = survey.kind === "lines" && survey.fromGrid !== true;
  for await (const record of survey.lines()) {
    if ("failure" in record) {
      failures.push({id: record.id, code: record.failure.code, message: record.failure.message});
      continue;
    }
    const {line} = record;
    for (const {observable} of line.channels) methods.add(observable.source.method);
    const {fieldAlong, doubts} = lookedUp(line, directionOf);
    const figures = lineFigures(line, azimuths.get(line.group), flown ? "lines" : "grid", fieldAlong);
    lines.push({...figures, notices: [...figures.notices, ...doubts]});
    if (flown && copies.length < MOST_COMPARED) copies.push(thinned(line));
  }
  if (flown && lines.length > copies.length)
    notices.push(
      remark(
        "inspect/not-all-compared",
        `Of ${lines.length} lines the first ${copies.length} are compared with each other.`,
      ),
    );
  return {
    kind: survey.kind,
    files: survey.files,
    choices: survey.choices,
    axes: survey.axes,
    delivered: survey.delivered,
    grid: survey.grid,
    lines,
    failures,
    neighbours: flown ? neighbours(copies) : undefined,
    notices,
    notCorrected: NOT_CORRECTED.filter(({method}) => methods.has(method)),
  };
}

function lookedUp(
  line: SurveyLine,
  directionOf: DirectionOf,
): {readonly fieldAlong: EffectiveDirection | undefined; readonly doubts: readonly Notice[]} {
  try {
    return {fieldAlong: directionOf(line), doubts: []};
  } catch (error) {
    if (!(error instanceof ReportableError) || error.code === "direction/date") throw error;
    return {fieldAlong: undefined, doubts: [doubt(error.code, error.message)]};
  }
}
