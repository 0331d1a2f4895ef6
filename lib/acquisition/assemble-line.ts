/** A line of the survey from its run of rows: placed on the axis, heights complete, readings in SI. */
import {InputError, type Place, type ReportableError} from "../errors.ts";
import type {Track} from "../geometry/track.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import {byChainage} from "../survey/by-chainage.ts";
import type {Channel, Stations, SurveyLine} from "../survey/line.ts";
import {chainageAt, offsetAt, pointAt} from "../survey/line-axis.ts";
import {spacingOf} from "../survey/record-noise.ts";
import type {LineRecord} from "../survey/survey.ts";
import {type TrackKnots, trackKnots, valueAt} from "../survey/track-shape.ts";
import {axisTrack} from "./axis-track.ts";
import {bendDoubts} from "./bend-doubts.ts";
import type {ChannelPlan} from "./channel-plan.ts";
import type {Frames} from "./frames.ts";
import {heightsOf} from "./heights.ts";
import type {LineRun} from "./line-runs.ts";
import type {PlacedGroup} from "./place-groups.ts";
import type {AcquisitionSettings} from "./settings.ts";

/** How the stations of a line are placed. */
export interface Placing {
  /** Undefined where chainage was given. */
  readonly group: PlacedGroup | undefined;
  readonly groupName: string;
  /** The columns of the coordinates; undefined where only chainage is known. */
  readonly coordinates: readonly [string, string] | undefined;
  readonly frames: Frames | undefined;
}

/** Shortening of distances by a line's angle to its axis that is worth a doubt: 8° off. */
const OBLIQUE = 0.01;
/** Stations this near, in units of the spacing, stand at one place. */
const SAME_PLACE = 1e-6;

export function assembleLine(
  id: string,
  run: LineRun,
  placing: Placing,
  channels: readonly ChannelPlan[],
  settings: AcquisitionSettings,
): LineRecord {
  const count = run.row.length;
  const place: Place = {file: run.file, row: run.firstRow};
  const chainage = chainageOf(run, placing);
  const failure = unusable(id, run, chainage, place);
  if (failure !== undefined) return {id, failure};
  const offset = offsetOf(run, placing);
  const delivered = deliveredOf(run, placing);
  const {notices: heightNotices, ...heights} = heightsOf(run.columns, count, settings, place);
  const stations: Stations = {
    count,
    row: run.row,
    chainage,
    offset,
    x: delivered?.x,
    y: delivered?.y,
    ...heights,
  };
  const course = trackKnots(chainage, offset);
  const notices = [...heightNotices, ...shapeNotices(chainage, course, placing, place)];
  return {
    line: {
      id,
      group: placing.groupName,
      stations,
      channels: channels.map((channel): Channel => {
        const values = run.columns.get(channel.role)!;
        return {
          role: channel.role,
          observable: channel.observable,
          values: values.map((value) => value * channel.unit.factor),
          noise: channel.noise,
          noiseLength: channel.noiseLength,
          above: sensorAbove(run, channel.role),
        };
      }),
      file: run.file,
      direction: chainage[count - 1]! < chainage[0]! ? -1 : 1,
      omitted: run.omitted,
      locate: locator(placing, course, stations),
      track: trackOf(run, placing, course, chainage),
      notices: notices.map((notice) => ({...notice, line: id})),
    },
  };
}

/** A second sensor over the first, where it has a height column of its own (`elevation.2`, `clearance.2`). */
function sensorAbove(run: LineRun, role: string): Float64Array | undefined {
  const number = role.slice("value".length);
  if (number === "") return undefined;
  for (const kind of ["elevation", "clearance"] as const) {
    const own = run.columns.get(`${kind}${number}`);
    const first = run.columns.get(kind);
    if (own !== undefined && first !== undefined) return own.map((height, i) => height - first[i]!);
  }
  return undefined;
}

function chainageOf(run: LineRun, {group, coordinates}: Placing): Float64Array {
  if (group === undefined) return run.columns.get("chainage")!;
  const [first, second] = coordinates!.map((role) => run.columns.get(role)!);
  // No station lies before the zero of its group; what rounding of large coordinates leaves there is taken off.
  return first!.map((a, i) => Math.max(0, chainageAt(group.axis, ...group.frame.metric(a, second![i]!))));
}

function offsetOf(run: LineRun, {group, coordinates}: Placing): Float64Array {
  if (group === undefined) return new Float64Array(run.row.length);
  const [first, second] = coordinates!.map((role) => run.columns.get(role)!);
  return first!.map((a, i) => offsetAt(group.axis, ...group.frame.metric(a, second![i]!)));
}

function deliveredOf(run: LineRun, {frames, coordinates}: Placing): {x: Float64Array; y: Float64Array} | undefined {
  if (frames === undefined || coordinates === undefined) return undefined;
  const [first, second] = coordinates.map((role) => run.columns.get(role)!);
  const x = new Float64Array(run.row.length);
  const y = new Float64Array(run.row.length);
  for (let i = 0; i < x.length; ++i) [x[i], y[i]] = frames.deliver(first![i]!, second![i]!);
  return {x, y};
}

/** Why no line can be made of the stations. */
function unusable(id: string, run: LineRun, chainage: Float64Array, place: Place): ReportableError | undefined {
  const where = `Line "${id.length > 60 ? `${id.slice(0, 60)}…` : id}" (${run.file}, from row ${run.firstRow})`;
  const count = run.row.length;
  if (count === 0)
    return new InputError(
      "line/no-station",
      `${where} has no station: all of its ${run.omitted} rows lack a reading, a height or a position. Complete the rows, or name other columns with --column.`,
      {place},
    );
  if (count === 1)
    return new InputError(
      "line/one-station",
      `${where} has one station; two at different places were needed. Remove the line, or check its identifier.`,
      {place},
    );
  let [least, greatest] = [Infinity, -Infinity];
  for (const value of chainage) {
    least = Math.min(least, value);
    greatest = Math.max(greatest, value);
  }
  // A micrometre of chainage is rounding, whatever the survey.
  if (!(greatest - least > 1e-6))
    return new InputError(
      "line/one-place",
      `${where} has all of its ${count} stations at one place along the axis; two different places were needed. Check the columns of the position.`,
      {place},
    );
  return undefined;
}

/** Stations no farther from the one before, in the order of chainage, than `distance`. */
function repeatsWithin(chainage: Float64Array, distance: number): number {
  const order = byChainage(chainage);
  let repeats = 0;
  for (let i = 1; i < order.length; ++i) if (chainage[order[i]!]! - chainage[order[i - 1]!]! <= distance) ++repeats;
  return repeats;
}

function shapeNotices(chainage: Float64Array, course: TrackKnots, {group}: Placing, place: Place): Notice[] {
  const notices: Notice[] = [];
  const spacing = spacingOf(chainage);
  const repeats = repeatsWithin(chainage, SAME_PLACE * spacing);
  if (repeats > 0)
    notices.push(
      remark(
        "line/repeated-stations",
        `${repeats} stations stand where another one stands; each is kept as a reading of its own.`,
        place,
      ),
    );
  if (group === undefined) return notices;
  const shortening = 1 - 1 / Math.hypot(1, course.slope);
  if (shortening > OBLIQUE) {
    const angle = (Math.atan(Math.abs(course.slope)) * 180) / Math.PI;
    notices.push(
      doubt(
        "line/oblique",
        `The line runs ${angle.toFixed(1)}° off the axis of its group, which shortens its distances by ${(100 * shortening).toFixed(1)} %. That is right for sources that strike across the axis; otherwise give the line in a file of its own.`,
        place,
      ),
    );
  }
  notices.push(...bendDoubts(course, spacing, place));
  return notices;
}

/** Between the ends along the course flown, beyond them straight on. */
function locator({group, frames}: Placing, course: TrackKnots, {chainage, x, y}: Stations): SurveyLine["locate"] {
  if (group !== undefined) return (at) => group.frame.delivered(...pointAt(group.axis, at, valueAt(course, at)));
  if (frames === undefined || x === undefined || y === undefined) return undefined;
  const [courseX, courseY] = [trackKnots(chainage, x), trackKnots(chainage, y)];
  return (at) => [valueAt(courseX, at), valueAt(courseY, at)];
}

/** The course flown in the metric system of the survey, knot by knot. */
function trackOf(
  run: LineRun,
  {group, frames, coordinates}: Placing,
  course: TrackKnots,
  chainage: Float64Array,
): Track | undefined {
  if (group !== undefined) return axisTrack(group.axis, course, group.frame.system, group.frame.unit);
  if (frames === undefined || coordinates === undefined) return undefined;
  const {metric, system, unit} = frames.first;
  const [first, second] = coordinates.map((role) => run.columns.get(role)!);
  const places = Array.from(first!, (a, i) => metric(a, second![i]!));
  const x = trackKnots(
    chainage,
    Float64Array.from(places, ([east]) => east / unit),
  );
  const y = trackKnots(
    chainage,
    Float64Array.from(places, ([, north]) => north / unit),
  );
  return {system, chainage: x.chainage, x: x.value, y: y.value, beyond: [x.slope, y.slope]};
}
