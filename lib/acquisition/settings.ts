/** What the user says about what was measured. Metres; SI after the edge. */
import type {GeoFile} from "../formats/geojson.ts";
import type {SamplingName} from "./sampling.ts";

/** Columns a table may hold. `value.2`, `elevation.2` … follow the same pattern for further channels. */
export const ROLES = [
  "line",
  "chainage",
  "x",
  "y",
  "longitude",
  "latitude",
  "elevation",
  "clearance",
  "ground",
  "time",
  "value",
] as const;

export interface ChannelSettings {
  /** `value`, `value.2` … */
  readonly role: string;
  /** Name in the catalogue of observables. */
  readonly observable: string;
  /** Unit of the readings and of a given noise; undefined: the delivery unit of the observable. */
  readonly unit: string | undefined;
  /** In that unit; `record`; undefined: `record` for lines, required for grids. */
  readonly noise: number | "record" | undefined;
}

export interface AcquisitionSettings {
  /** Role → name of the column, as asked by `--column`. */
  readonly columns: ReadonlyMap<string, string>;
  /** Constant heights of the sensor, m. */
  readonly clearance: number | undefined;
  readonly elevation: number | undefined;
  /** Added to elevation or clearance, m (a slung sensor: negative). */
  readonly sensorOffset: number;
  readonly elevationDatum: string | undefined;
  readonly groundDatum: string | undefined;
  /** Height of the ground datum above the elevation datum, m: added to ground. */
  readonly geoidOffset: number | undefined;
  readonly crs: string | undefined;
  readonly outCrs: string | undefined;
  readonly split: "column" | "auto" | undefined;
  /** The first is for `value`. */
  readonly channels: readonly ChannelSettings[];
  /** Grids: which way the lines run, or the transects that are lines. */
  readonly profiles: "rows" | "columns" | GeoFile;
  /** Grids: each n-th row or column as a line of its own; undefined: all of them, as a grid. */
  readonly every?: number | undefined;
  /** How transects are sampled; undefined: bilinear. */
  readonly sampling?: SamplingName | undefined;
  /** Length over which the noise of every channel is correlated along the line, m; undefined or 0: it is white. */
  readonly noiseLength?: number | undefined;
  /** Only to look at: heights and the noise of a grid may be missing, which is then a doubt. */
  readonly inspecting?: boolean;
}
