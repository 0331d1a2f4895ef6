/**
 * Coordinates from one system to another, through proj4, with every result checked.
 *
 * proj4 takes latitude 95 without a word, answers NaN outside a projection's domain, and
 * throws on NaN: all three are turned into errors that say which position is at fault.
 */
import {InputError, type Place} from "../errors.ts";
import type {Notice} from "../notice.ts";
import type {CoordinateSystem} from "./crs-definition.ts";
import {type Datum, datumChange} from "./datum.ts";
import {proj4Library} from "./proj4-library.ts";

/** x, y of a system: longitude, latitude in degrees, or its own unit. */
export type Position = readonly [x: number, y: number];

export interface Transformation {
  readonly from: CoordinateSystem;
  readonly to: CoordinateSystem;
  readonly notices: readonly Notice[];
  /**
   * One position turned into the other system.
   * @param place where the position stands in an input, for messages
   * @throws {InputError} `crs/not-finite`, `crs/latitude-range`, `crs/longitude-range`, `crs/outside-projection`
   */
  apply(x: number, y: number, place?: Place): Position;
}

/** Refuses a position that cannot be longitude and latitude in degrees. */
export function checkGeographic(longitude: number, latitude: number, place?: Place): void {
  if (!(Math.abs(latitude) <= 90)) {
    const swapped = Math.abs(longitude) <= 90 ? " Longitude and latitude may be in each other's column." : "";
    throw new InputError(
      "crs/latitude-range",
      `Latitude ${latitude} (longitude ${longitude}) lies beyond ±90°.${swapped} ` +
        `Correct the position, exchange the columns, or give the projected system if these are metres.`,
      {place},
    );
  }
  if (!(Math.abs(longitude) <= 360))
    throw new InputError(
      "crs/longitude-range",
      `Longitude ${longitude} (latitude ${latitude}) lies beyond ±360°. Correct the position, or give the projected system if these are metres.`,
      {place},
    );
}

/** A longitude folded into [−180°, 180°]. */
export const foldLongitude = (longitude: number): number =>
  Math.abs(longitude) <= 180 ? longitude : longitude - 360 * Math.round(longitude / 360);

const shiftWords = (datum: Datum): string => ` +towgs84=${(datum.toWgs84 ?? [0, 0, 0]).join(",")}`;

/**
 * The way from one system to another.
 * @throws {InputError} `crs/datum-change` where the datums do not allow it
 */
export function transformation(from: CoordinateSystem, to: CoordinateSystem): Transformation {
  const change = datumChange(from.datum, to.datum);
  const definition = (system: CoordinateSystem): string =>
    change.shifted ? system.definition + shiftWords(system.datum) : system.definition;
  const converter = proj4Library()(definition(from), definition(to));
  const fromGeographic = from.kind === "geographic";
  const toGeographic = to.kind === "geographic";
  const apply = (x: number, y: number, place?: Place): Position => {
    if (!(Number.isFinite(x) && Number.isFinite(y)))
      throw new InputError("crs/not-finite", `Position (${x}, ${y}) is not a pair of numbers. Remove or mend it.`, {
        place,
      });
    if (fromGeographic) checkGeographic(x, y, place);
    // The second argument makes proj4 respect axes that point west and south.
    const [gotX, gotY] = converter.forward([x, y], true) as [number, number];
    if (!(Number.isFinite(gotX) && Number.isFinite(gotY)))
      throw new InputError(
        "crs/outside-projection",
        `Position (${x}, ${y}) in ${from.name} has no place in ${to.name} (${to.title}). ` +
          `Check that the coordinates are in the system given, and choose one made for the area.`,
        {place},
      );
    return toGeographic ? [foldLongitude(gotX), gotY] : [gotX, gotY];
  };
  return {from, to, notices: change.notices, apply};
}
