/**
 * A coordinate system, and its definition in PROJ's words.
 *
 * Coordinates are always x, y: longitude, latitude in degrees, or easting, northing in the
 * system's own unit, whatever order an authority lists them in.
 */
import type {Notice} from "../notice.ts";
import type {Datum} from "./datum.ts";
import {ellipsoidWords} from "./ellipsoid.ts";

export interface CoordinateSystem {
  /** As it was asked for: "EPSG:32633", or "PROJ string", "WKT". */
  readonly name: string;
  /** In words: "WGS 84 / UTM zone 33N". */
  readonly title: string;
  readonly kind: "geographic" | "projected";
  /** Metres in one unit of x and y; absent for degrees. */
  readonly metresPerUnit?: number;
  readonly datum: Datum;
  /** PROJ string: the projection alone, ellipsoid as numbers, no datum shift. */
  readonly definition: string;
  readonly notices: readonly Notice[];
}

/** proj4 makes NaN of a missing +y_0 in some projections, so zeros are always written. */
const ALWAYS_PRESENT = ["lat_0", "lon_0", "x_0", "y_0"] as const;

/**
 * The PROJ string of a projection on a datum.
 * @param words bare words, the projection's name first: ["utm", "zone=33"]
 */
export function projectionDefinition(words: readonly string[], datum: Datum): string {
  const [projection, ...parameters] = words;
  const has = (key: string): boolean => parameters.some((word) => word.startsWith(`${key}=`));
  const parts = [`+proj=${projection}`, ...parameters.map((word) => `+${word}`)];
  for (const key of ALWAYS_PRESENT) if (!has(key)) parts.push(`+${key}=0`);
  // Only web Mercator brings its own sphere.
  if (!has("a")) parts.push(ellipsoidWords(datum.ellipsoid));
  if (datum.primeMeridian !== 0) parts.push(`+pm=${datum.primeMeridian}`);
  parts.push("+no_defs");
  return parts.join(" ");
}

/** The PROJ string of longitude and latitude in degrees on a datum. */
export const geographicDefinition = (datum: Datum): string =>
  `+proj=longlat ${ellipsoidWords(datum.ellipsoid)}${datum.primeMeridian === 0 ? "" : ` +pm=${datum.primeMeridian}`} +no_defs`;

/** Longitude and latitude in degrees on the datum of a system. */
export const geographicOf = (system: CoordinateSystem): CoordinateSystem =>
  system.kind === "geographic"
    ? system
    : {
        name: `longitude/latitude of ${system.name}`,
        title: `longitude and latitude on ${system.datum.name}`,
        kind: "geographic",
        datum: system.datum,
        definition: geographicDefinition(system.datum),
        notices: [],
      };
