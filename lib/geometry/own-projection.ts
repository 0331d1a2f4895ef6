/**
 * The projection in which distances along lines stay true, for coordinates in longitude and latitude.
 *
 * The transverse Mercator serves where its scale is true enough. A long line that runs east and
 * west leaves its meridian (a 1,333 km line is stretched by 0.5 % at its ends); the oblique
 * Mercator along the line then takes its place, if it is the truer one.
 */
import type {CoordinateSystem} from "./crs-definition.ts";
import {type OwnProjection, ownMercator, ownObliqueMercator} from "./own-mercator.ts";
import {largestScaleError} from "./projection-scale.ts";

export interface ChosenProjection {
  readonly projection: OwnProjection;
  /** The largest departure of its scale from one among the positions. */
  readonly scaleError: number;
}

/**
 * A scale this true is left alone: a metre in ten kilometres, under the error of most navigation
 * along a line. A heuristic, not derived.
 */
const TRUE_ENOUGH = 1e-4;
/** Positions at which the scale is looked at, besides the four extreme ones. A heuristic: scale varies slowly. */
const LOOKS = 256;

/** Some of the positions, evenly strided, and the ones farthest east, west, north and south. */
function sample(longitudes: ArrayLike<number>, latitudes: ArrayLike<number>): [number[], number[]] {
  const n = longitudes.length;
  const chosen = new Set<number>();
  for (let i = 0; i < n; i += Math.max(1, Math.floor(n / LOOKS))) chosen.add(i);
  for (const values of [longitudes, latitudes]) {
    let [least, most] = [0, 0];
    for (let i = 1; i < n; ++i) {
      if (values[i]! < values[least]!) least = i;
      if (values[i]! > values[most]!) most = i;
    }
    chosen.add(least).add(most);
  }
  const places = [...chosen];
  return [places.map((i) => longitudes[i]!), places.map((i) => latitudes[i]!)];
}

/**
 * Chooses between the transverse and the oblique Mercator of a set of positions.
 * @param longitudes degrees
 * @param latitudes degrees, as many
 * @param azimuth direction of the lines, degrees clockwise from north, either sense
 * @throws {InputError} as {@link ownMercator}
 */
export function ownProjection(
  longitudes: ArrayLike<number>,
  latitudes: ArrayLike<number>,
  geographic: CoordinateSystem,
  azimuth: number,
): ChosenProjection {
  const transverse = ownMercator(longitudes, latitudes, geographic);
  const [east, north] = sample(longitudes, latitudes);
  const transverseError = largestScaleError(transverse.system, east, north);
  if (transverseError <= TRUE_ENOUGH) return {projection: transverse, scaleError: transverseError};
  const oblique = ownObliqueMercator(longitudes, latitudes, geographic, azimuth);
  const obliqueError = largestScaleError(oblique.system, east, north);
  return obliqueError < transverseError
    ? {projection: oblique, scaleError: obliqueError}
    : {projection: transverse, scaleError: transverseError};
}
