/**
 * Where the tracks of a survey cross, and what both lines read there, straight between the stations either side.
 * One walk over the lines; memory holds five numbers a station.
 */
import {InputError, type ReportableError} from "../errors.ts";
import {type PolylineCrossings, polylineCrossings} from "../geometry/polyline-crossings.ts";
import {type Notice, remark} from "../notice.ts";
import type {Observable} from "../potential/observable.ts";
import type {Channel, SurveyLine} from "./line.ts";
import {GAP} from "./line-figures.ts";
import {median} from "./order-statistics.ts";
import type {Survey} from "./survey.ts";
import {interpolated} from "./track-place.ts";

/** One line at every crossing; SI, m. */
export interface CrossingSide {
  /** Place in `lines`. */
  readonly line: Uint32Array;
  /** Number of a station and share of the way to the next. */
  readonly at: Float64Array;
  readonly chainage: Float64Array;
  readonly height: Float64Array;
  readonly value: Float64Array;
}

/** Crossings in the order of their first line, then their second, then along the first. */
export interface Crossings {
  readonly count: number;
  /** Delivered coordinates. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** The line that comes earlier in the files, and the other. */
  readonly first: CrossingSide;
  readonly second: CrossingSide;
}

export interface CrossedSurvey {
  /** Names of the lines that could be read, in the order of the files. */
  readonly lines: readonly string[];
  readonly observable: Observable;
  /** What the heights are: above the height datum, or above the ground where only that is known. */
  readonly heights: "elevation" | "clearance";
  readonly crossings: Crossings;
  readonly failures: readonly {readonly id: string; readonly failure: ReportableError}[];
  readonly notices: readonly Notice[];
}

interface TrackOfLine {
  readonly id: string;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly chainage: Float64Array;
  readonly height: Float64Array;
  readonly value: Float64Array;
  /** The longest step between stations that is no gap, in the unit of `steps`. */
  readonly longestStep: number;
}

/** Degrees between the courses of two lines below which they run along each other rather than cross (heuristic). */
const LEAST_ANGLE = 10;
/** Stations either side of a crossing that the course is told from: keeps jitter out of it (heuristic). */
const COURSE = 8;

/**
 * @param geographic whether the delivered coordinates are degrees
 * @throws {InputError} `crossings/grid`, `crossings/along-component`, `crossings/no-coordinates`
 */
export async function findCrossings(survey: Survey, geographic: boolean): Promise<CrossedSurvey> {
  if (survey.kind === "grid" || survey.fromGrid === true)
    throw new InputError(
      "crossings/grid",
      `${survey.files[0]} is a grid: lines taken from one grid read the same where they cross. Give the lines as they were measured.`,
    );
  const tracks: TrackOfLine[] = [];
  const failures: {id: string; failure: ReportableError}[] = [];
  let observable: Observable | undefined;
  let heights: CrossedSurvey["heights"] = "elevation";
  // Longitudes count from the first station, so that a survey over the 180° meridian hangs together.
  let from: number | undefined;
  for await (const record of survey.lines()) {
    if ("failure" in record) {
      failures.push({id: record.id, failure: record.failure});
      continue;
    }
    const {line} = record;
    const channel = line.channels[0]!;
    if (observable === undefined) {
      observable = comparable(channel);
      heights = line.stations.elevation === undefined ? "clearance" : "elevation";
    }
    from ??= line.stations.x?.[0] ?? 0;
    tracks.push(trackOf(line, channel, geographic ? from : undefined));
  }
  if (observable === undefined) throw failures[0]?.failure ?? noLine(survey);
  const found = polylineCrossings(tracks);
  const {kept, alongside, inGaps} = judged(found, tracks, geographic);
  return {
    lines: tracks.map(({id}) => id),
    observable,
    heights,
    crossings: crossingsOf(found, kept, tracks, geographic),
    failures,
    notices: leftOut(alongside, inGaps),
  };
}

const noLine = ({files}: Survey): InputError =>
  new InputError("survey/no-station", `${files.join(", ")}: no line could be read. Complete the rows.`);

/** @throws {InputError} `crossings/along-component`: lines of two directions read two components, of no common difference */
function comparable({observable}: Channel): Observable {
  if (observable.name.includes("-along"))
    throw new InputError(
      "crossings/along-component",
      `${observable.name} is a component along each line, so that lines of two directions read two different things where they cross. Compare a vertical component or the total field.`,
    );
  return observable;
}

/** @param meridian longitude that others are unfolded around; undefined where coordinates are no degrees */
function trackOf({id, file, stations}: SurveyLine, {values}: Channel, meridian: number | undefined): TrackOfLine {
  const {y, chainage} = stations;
  if (stations.x === undefined || y === undefined)
    throw new InputError(
      "crossings/no-coordinates",
      `Line ${id} is known by its chainage only, which does not tell where it meets other lines. Give the columns of its coordinates with --column x=NAME and --column y=NAME, or longitude and latitude.`,
      {place: {file}},
    );
  const x =
    meridian === undefined
      ? stations.x
      : stations.x.map((longitude) => longitude - 360 * Math.round((longitude - meridian) / 360));
  const height = stations.elevation ?? stations.clearance;
  if (height === undefined)
    throw new InputError(
      "height/none",
      `Line ${id} has neither elevation nor clearance. Give a column, --elevation or --clearance.`,
      {place: {file}},
    );
  const steps = new Float64Array(x.length - 1);
  for (let k = 0; k < steps.length; ++k) steps[k] = stepOf(x, y, k, meridian !== undefined);
  return {
    id,
    x,
    y,
    chainage,
    height,
    value: values,
    // Stations that stand where another one stands say nothing of the usual step.
    longestStep: GAP * median(steps.filter((step) => step > 0)),
  };
}

/** Length of the step after station k in the unit of y. */
const stepOf = (x: Float64Array, y: Float64Array, k: number, geographic: boolean): number =>
  Math.hypot((x[k + 1]! - x[k]!) * (geographic ? squeeze(y[k]!) : 1), y[k + 1]! - y[k]!);

/** Length of a degree of longitude over that of latitude, near enough for angles and gaps. */
const squeeze = (latitude: number): number => Math.cos((latitude * Math.PI) / 180);

/** The crossings that count, and how many do not. */
function judged(
  {count, first, second, firstAt, secondAt, y}: PolylineCrossings,
  tracks: readonly TrackOfLine[],
  geographic: boolean,
): {readonly kept: readonly number[]; readonly alongside: number; readonly inGaps: number} {
  const kept: number[] = [];
  let alongside = 0;
  let inGaps = 0;
  const least = Math.sin((LEAST_ANGLE * Math.PI) / 180);
  for (let i = 0; i < count; ++i) {
    const [a, b] = [tracks[first[i]!]!, tracks[second[i]!]!];
    const aspect = geographic ? squeeze(y[i]!) : 1;
    if (!(sineBetween(a, firstAt[i]!, b, secondAt[i]!, aspect) >= least)) ++alongside;
    else if (isInGap(a, firstAt[i]!, geographic) || isInGap(b, secondAt[i]!, geographic)) ++inGaps;
    else kept.push(i);
  }
  return {kept, alongside, inGaps};
}

/** Sine of the angle between the courses of two lines, which have no direction. */
function sineBetween(a: TrackOfLine, atA: number, b: TrackOfLine, atB: number, aspect: number): number {
  const [ux, uy] = courseAt(a, atA, aspect);
  const [vx, vy] = courseAt(b, atB, aspect);
  return Math.abs(ux * vy - uy * vx) / (Math.hypot(ux, uy) * Math.hypot(vx, vy));
}

function courseAt({x, y}: TrackOfLine, at: number, aspect: number): readonly [number, number] {
  const k = Math.floor(at);
  const from = Math.max(0, k - COURSE);
  const to = Math.min(x.length - 1, k + 1 + COURSE);
  return [(x[to]! - x[from]!) * aspect, y[to]! - y[from]!];
}

/** At a station there is a reading, whatever the steps either side. */
function isInGap({x, y, longestStep}: TrackOfLine, at: number, geographic: boolean): boolean {
  const k = Math.min(Math.floor(at), x.length - 2);
  const share = at - k;
  return share > 1e-6 && share < 1 - 1e-6 && stepOf(x, y, k, geographic) > longestStep;
}

function leftOut(alongside: number, inGaps: number): Notice[] {
  const notices: Notice[] = [];
  if (alongside > 0)
    notices.push(
      remark(
        "crossings/alongside",
        `${alongside} places where tracks meet at less than ${LEAST_ANGLE}° are left out: there lines run along each other, as a repeated line does.`,
      ),
    );
  if (inGaps > 0)
    notices.push(
      remark(
        "crossings/in-gaps",
        `${inGaps} crossings lie in a gap of a line, a step more than ${GAP} times the usual one, and are left out: nothing was read there.`,
      ),
    );
  return notices;
}

function crossingsOf(
  found: PolylineCrossings,
  kept: readonly number[],
  tracks: readonly TrackOfLine[],
  geographic: boolean,
): Crossings {
  const side = (lines: Uint32Array, at: Float64Array): CrossingSide => {
    const read = (column: "chainage" | "height" | "value"): Float64Array =>
      Float64Array.from(kept, (i) => interpolated(tracks[lines[i]!]![column], at[i]!));
    return {
      line: Uint32Array.from(kept, (i) => lines[i]!),
      at: Float64Array.from(kept, (i) => at[i]!),
      chainage: read("chainage"),
      height: read("height"),
      value: read("value"),
    };
  };
  const folded = (x: number): number => (geographic ? x - 360 * Math.round(x / 360) : x);
  return {
    count: kept.length,
    x: Float64Array.from(kept, (i) => folded(found.x[i]!)),
    y: Float64Array.from(kept, (i) => found.y[i]!),
    first: side(found.first, found.firstAt),
    second: side(found.second, found.secondAt),
  };
}
