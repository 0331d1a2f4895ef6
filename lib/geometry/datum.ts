/**
 * Datums, and whether coordinates may pass from one to the other.
 *
 * No shift is ever taken from a name: definitions hold the projection alone, and coordinates
 * pass between two datums only if they are the same, if both lie within 2 m of WGS 84 by the
 * EPSG dataset (then as they are, with a doubt), or if the user has given the shift to WGS 84
 * in numbers. Every other pair is refused: shifts hidden in tables of names moved points by up
 * to 168 m without a word when the libraries were tried.
 */
import {InputError} from "../errors.ts";
import {doubt, type Notice} from "../notice.ts";
import {type Ellipsoid, ellipsoidWords} from "./ellipsoid.ts";

export interface Datum {
  /** "EPSG:6326", or what a PROJ string said; equal ids are the same datum. */
  readonly id: string;
  readonly name: string;
  readonly ellipsoid: Ellipsoid;
  /** Degrees east of Greenwich. */
  readonly primeMeridian: number;
  /** Within 2 m of WGS 84, so that its coordinates may stand for those of WGS 84, with a doubt. */
  readonly nearWgs84: boolean;
  /** Shift to WGS 84 as the user gave it: metres, arc-seconds (position vector), parts per million. */
  readonly toWgs84?: readonly number[];
}

/** How coordinates pass from one datum to another. */
export interface DatumChange {
  /** Whether the shifts that the datums carry are applied. */
  readonly shifted: boolean;
  readonly notices: readonly Notice[];
}

/**
 * Pairs that are each near WGS 84 as first defined, but not near each other.
 * JGD2000 and JGD2011 differ by up to 5 m in north-east Honshu since the earthquake of 2011 (from memory).
 */
const APART: readonly (readonly [string, string])[] = [["EPSG:6612", "EPSG:1128"]];

/**
 * Decides how to go from one datum to the other.
 * @throws {InputError} `crs/datum-change` if they differ by more than 2 m, or by an unknown amount, and no shift was given
 */
export function datumChange(from: Datum, to: Datum): DatumChange {
  if (from.id === to.id) return {shifted: false, notices: []};
  const known = (datum: Datum): boolean => datum.nearWgs84 || datum.toWgs84 !== undefined;
  const apart = APART.some((pair) => pair.includes(from.id) && pair.includes(to.id));
  if (apart || !known(from) || !known(to)) {
    const missing = !known(from) ? from : to;
    throw new InputError(
      "crs/datum-change",
      `Coordinates on the datum "${from.name}" were to be turned into "${to.name}". ` +
        `The two differ by more than 2 m, or by an amount not known here. ` +
        `Transform the coordinates beforehand with a tool you trust, or give the system on "${missing.name}" as a PROJ string ` +
        `with its shift to WGS 84: "+proj=… ${ellipsoidWords(missing.ellipsoid)} +towgs84=dx,dy,dz".`,
    );
  }
  const shifted = from.toWgs84 !== undefined || to.toWgs84 !== undefined;
  const bothNear = from.toWgs84 === undefined && to.toWgs84 === undefined;
  return {
    shifted,
    notices: bothNear
      ? [
          doubt(
            "crs/datums-taken-as-one",
            `Datums "${from.name}" and "${to.name}" are taken as one: positions delivered may be off by up to about 2 m. ` +
              `If that matters, transform the coordinates beforehand with a tool you trust.`,
          ),
        ]
      : [],
  };
}
