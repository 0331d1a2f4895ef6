/** A survey line as it was measured, on the axis of its survey. SI units; metres. */
import type {Track} from "../geometry/track.ts";
import type {Notice} from "../notice.ts";
import type {Observable} from "../potential/observable.ts";

/** One entry a station used, in the order of the file. Absent columns are undefined; entries are finite. */
export interface Stations {
  readonly count: number;
  /** Row of the file, counted from one as editors do (raster: column or row of the pixel, from one). */
  readonly row: Float64Array;
  /** Distance along the axis, m. */
  readonly chainage: Float64Array;
  /** Distance from the axis, positive to the left of increasing chainage, m. Zero where only chainage is known. */
  readonly offset: Float64Array;
  /** Delivered coordinates (`--out-crs`, else those of the data); undefined where only chainage is known. */
  readonly x: Float64Array | undefined;
  readonly y: Float64Array | undefined;
  /** Sensor above the height datum, sensor offset applied, m. */
  readonly elevation: Float64Array | undefined;
  /** Sensor above the ground, sensor offset applied, m. */
  readonly clearance: Float64Array | undefined;
  /** Ground above the height datum, m. */
  readonly ground: Float64Array | undefined;
}

/** One kind of reading; entries align with the stations. */
export interface Channel {
  /** `value`, `value.2` … */
  readonly role: string;
  readonly observable: Observable;
  /** Readings, SI. */
  readonly values: Float64Array;
  /** Standard deviation of the noise, SI, or `record`: from the fourth differences of the record itself. */
  readonly noise: number | "record";
  /** Length L over which the noise is correlated along the line, exp(−|x − x′|/L), m; absent or 0: it is white. */
  readonly noiseLength?: number | undefined;
  /** Interpolated from a grid: smooth, so that the record shows no noise. */
  readonly interpolated?: true;
  /** This sensor above the one that the stations' heights belong to, m; undefined where it is that one. */
  readonly above?: Float64Array | undefined;
}

export interface SurveyLine {
  readonly id: string;
  /** Name of the file it comes from, for messages. */
  readonly file: string;
  /** Name of the group of lines that share an axis: G1, G2 … */
  readonly group: string;
  readonly stations: Stations;
  /** At least one; the first is `value`. */
  readonly channels: readonly Channel[];
  /** +1 when the line was flown towards increasing chainage, −1 when against. */
  readonly direction: 1 | -1;
  /** Rows of the file left out because a reading or a height was missing. */
  readonly omitted: number;
  /** Delivered coordinates of a place on the line, also beyond its ends; undefined where only chainage is known. */
  readonly locate: ((chainage: number) => readonly [number, number]) | undefined;
  /** The course on the map, for what is drawn there; undefined where only chainage is known. */
  readonly track: Track | undefined;
  readonly notices: readonly Notice[];
}
