/**
 * Heights of the sensor and the ground from columns and constants: two of elevation,
 * clearance and ground give the third; all three must agree.
 */
import {InputError, type Place} from "../errors.ts";
import {doubt, type Notice} from "../notice.ts";
import {median} from "../survey/order-statistics.ts";
import type {AcquisitionSettings} from "./settings.ts";

export interface Heights {
  /** Sensor above the height datum, m. */
  readonly elevation: Float64Array | undefined;
  /** Sensor above ground, m. */
  readonly clearance: Float64Array | undefined;
  /** Ground above the height datum, m. */
  readonly ground: Float64Array | undefined;
  readonly notices: readonly Notice[];
}

type HeightSettings = Pick<
  AcquisitionSettings,
  "clearance" | "elevation" | "sensorOffset" | "elevationDatum" | "groundDatum" | "geoidOffset" | "inspecting"
>;

/** Median of elevation − ground − clearance beyond which the three do not agree, m (contract). */
const AGREEMENT = 2;

/**
 * Whether the settings and the columns give a height at all, and on one datum.
 * @param roles the roles that the file has columns for; undefined for a raster, which has no columns
 * @returns a doubt when there is no height and none is needed yet
 * @throws {InputError} `height/none`, `height/datums-differ`, `height/not-finite`
 */
export function checkHeightSettings(
  roles: ReadonlySet<string> | undefined,
  settings: HeightSettings,
  place: Place,
): Notice[] {
  for (const [option, value] of [
    ["--clearance", settings.clearance],
    ["--elevation", settings.elevation],
    ["--sensor-offset", settings.sensorOffset],
    ["--geoid-offset", settings.geoidOffset],
  ] as const)
    if (value !== undefined && !Number.isFinite(value))
      throw new InputError(
        "height/not-finite",
        `${option} was given as ${value}; a finite number of metres was needed.`,
      );
  const elevation = settings.elevation !== undefined || roles?.has("elevation");
  const clearance = settings.clearance !== undefined || roles?.has("clearance");
  if (!elevation && !clearance) {
    const found =
      roles === undefined
        ? `${place.file} is a raster of readings and does not say how high the sensor was. Give --clearance H (above the ground) or --elevation Z (above a datum) in metres.`
        : `${place.file} has no column for the height of the sensor (elevation above a datum, or clearance above ground), and none was given. Give --clearance H or --elevation Z in metres, or name a column with --column clearance=NAME or --column elevation=NAME.`;
    if (settings.inspecting !== true) throw new InputError("height/none", found, {place});
    return [doubt("height/none", found, place)];
  }
  const {elevationDatum, groundDatum, geoidOffset} = settings;
  if (elevation && roles?.has("ground") && elevationDatum !== undefined && groundDatum !== undefined)
    if (elevationDatum.trim().toLowerCase() !== groundDatum.trim().toLowerCase() && geoidOffset === undefined)
      throw new InputError(
        "height/datums-differ",
        `Elevation is above "${elevationDatum}" and ground above "${groundDatum}"; one datum was needed. Give the height of the ground's datum above the elevation's with --geoid-offset N in metres, or give one of the two on the other's datum.`,
        {place},
      );
  return [];
}

/**
 * @param columns finite entries, m, one a station
 * @param count stations
 */
export function heightsOf(
  columns: ReadonlyMap<string, Float64Array>,
  count: number,
  settings: HeightSettings,
  place: Place,
): Heights {
  const sensor = (role: "elevation" | "clearance"): Float64Array | undefined => {
    const column = columns.get(role);
    const constant = settings[role];
    if (constant !== undefined) return new Float64Array(count).fill(constant + settings.sensorOffset);
    return column?.map((height) => height + settings.sensorOffset);
  };
  const elevation = sensor("elevation");
  const clearance = sensor("clearance");
  const ground = columns.get("ground")?.map((height) => height + (settings.geoidOffset ?? 0));
  const notices: Notice[] = [];
  const difference = (a: Float64Array, b: Float64Array) => a.map((value, i) => value - b[i]!);
  if (elevation !== undefined && ground !== undefined && clearance !== undefined) {
    const apart = median(difference(difference(elevation, ground), clearance));
    if (!(Math.abs(apart) <= AGREEMENT))
      notices.push(
        doubt(
          "height/disagree",
          `Elevation less ground differs from clearance by ${apart.toFixed(2)} m (median); they should agree to ${AGREEMENT} m. Two height datums, a sensor offset counted twice or a wrong column would do this; compare --elevation-datum and --ground-datum, and give --geoid-offset if they differ.`,
          place,
        ),
      );
    return {elevation, clearance, ground, notices};
  }
  const whole = {
    elevation:
      elevation ??
      (clearance !== undefined && ground !== undefined ? clearance.map((h, i) => h + ground[i]!) : undefined),
    clearance:
      clearance ?? (elevation !== undefined && ground !== undefined ? difference(elevation, ground) : undefined),
    ground:
      ground ?? (elevation !== undefined && clearance !== undefined ? difference(elevation, clearance) : undefined),
  };
  const below = whole.clearance?.reduce((least, height) => Math.min(least, height), Infinity) ?? Infinity;
  if (below < 0)
    notices.push(
      doubt(
        "height/below-ground",
        `The sensor lies up to ${(-below).toFixed(2)} m below the ground. Check the height columns, their datums and --sensor-offset.`,
        place,
      ),
    );
  return {...whole, notices};
}
