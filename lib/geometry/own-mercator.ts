/**
 * A projection of a survey's own, for coordinates in longitude and latitude.
 *
 * Transverse Mercator centred on the mean position, scale one at the centre meridian. At a
 * distance d east or west of it the scale is 1 + d²/2R²: 0.01 % at 90 km, 0.05 % at 200 km,
 * 0.5 % at 640 km. A long line that runs east and west asks for the oblique one, whose scale
 * is one along the line. Both are conformal, so angles, and the two-dimensional field, are
 * undistorted; only the scale needs a look (projection-scale.ts).
 */
import {InputError, type Place} from "../errors.ts";
import {type CoordinateSystem, geographicOf, projectionDefinition} from "./crs-definition.ts";
import {checkGeographic, type Position, transformation} from "./transformation.ts";

export interface OwnProjection {
  readonly system: CoordinateSystem;
  /** Degrees to metres. */
  project(longitude: number, latitude: number, place?: Place): Position;
  /** Metres to degrees. */
  unproject(x: number, y: number): Position;
}

const RADIANS = Math.PI / 180;

/** The mean position on the sphere, so that the antimeridian is no edge; to 1e-4 degrees, to be printable. */
function meanPosition(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): Position {
  let [x, y, z] = [0, 0, 0];
  for (let i = 0; i < longitudes.length; ++i) {
    const [longitude, latitude] = [longitudes[i]!, latitudes[i]!];
    checkGeographic(longitude, latitude);
    const across = Math.cos(latitude * RADIANS);
    x += across * Math.cos(longitude * RADIANS);
    y += across * Math.sin(longitude * RADIANS);
    z += Math.sin(latitude * RADIANS);
  }
  if (!(Math.hypot(x, y, z) > 0.1 * longitudes.length))
    throw new InputError(
      "crs/no-centre",
      `The ${longitudes.length} positions are spread around the whole Earth or there are none: they have no centre to project from. Split the survey.`,
    );
  const rounded = (radians: number): number => Math.round((radians / RADIANS) * 1e4) / 1e4;
  return [rounded(Math.atan2(y, x)), rounded(Math.atan2(z, Math.hypot(x, y)))];
}

const compass = (degrees: number, positive: string, negative: string): string =>
  `${Math.abs(degrees)}° ${degrees < 0 ? negative : positive}`;

function own(geographic: CoordinateSystem, words: readonly string[], title: string): OwnProjection {
  const system: CoordinateSystem = {
    name: "the survey's own projection",
    title,
    kind: "projected",
    metresPerUnit: 1,
    datum: geographic.datum,
    definition: projectionDefinition(words, geographic.datum),
    notices: [],
  };
  const there = transformation(geographicOf(geographic), system);
  const back = transformation(system, geographicOf(geographic));
  return {system, project: there.apply, unproject: (x, y) => back.apply(x, y)};
}

/**
 * The transverse Mercator of a set of positions: metres from their mean position, scale one at its meridian.
 * @param longitudes degrees
 * @param latitudes degrees, as many
 * @param geographic the system that the positions are in; its ellipsoid is used
 * @throws {InputError} `crs/no-centre`, `crs/latitude-range`, `crs/longitude-range`
 */
export function ownMercator(
  longitudes: ArrayLike<number>,
  latitudes: ArrayLike<number>,
  geographic: CoordinateSystem,
): OwnProjection {
  const [longitude, latitude] = meanPosition(longitudes, latitudes);
  return own(
    geographic,
    ["tmerc", `lat_0=${latitude}`, `lon_0=${longitude}`],
    `transverse Mercator centred on ${compass(longitude, "E", "W")}, ${compass(latitude, "N", "S")}`,
  );
}

/**
 * The oblique Mercator (Hotine's, variant B) of a set of positions along a direction: x east and y north
 * at the mean position, scale one along the great circle through it at `azimuth`.
 * @param azimuth degrees clockwise from north; either sense of the line
 * @throws {InputError} as {@link ownMercator}
 */
export function ownObliqueMercator(
  longitudes: ArrayLike<number>,
  latitudes: ArrayLike<number>,
  geographic: CoordinateSystem,
  azimuth: number,
): OwnProjection {
  // Hotine's formulas fail at 0°, where the transverse one does as well; a tenth of a degree is 1.5e-6 in scale.
  const folded = ((azimuth % 180) + 180) % 180;
  if (folded < 0.1 || folded > 179.9) return ownMercator(longitudes, latitudes, geographic);
  const [longitude, latitude] = meanPosition(longitudes, latitudes);
  // proj4 makes NaN, or a jump of 0.2 m at the centre, of exactly 90° south of the equator.
  const along = Math.abs(folded - 90) < 0.01 ? 89.99 : Math.round(folded * 1e4) / 1e4;
  // Beyond 90° proj4 turns the map: at 132° its y axis points 84° from north. The same line is meant by −48°.
  const within = along > 90 ? along - 180 : along;
  return own(
    geographic,
    ["omerc", `lat_0=${latitude}`, `lonc=${longitude}`, `alpha=${within}`, `gamma=${within}`],
    `oblique Mercator centred on ${compass(longitude, "E", "W")}, ${compass(latitude, "N", "S")}, along azimuth ${along}°`,
  );
}
