/**
 * How true a projection is at a place: its scale in every direction and where its north points.
 *
 * Both come from the derivatives of x and y in longitude and latitude, set against the
 * ellipsoid's radii of curvature: the singular values of that matrix are the largest and the
 * smallest scale (Tissot's indicatrix; Snyder, Map Projections: A Working Manual, USGS 1395, §4).
 */
import {type CoordinateSystem, geographicOf} from "./crs-definition.ts";
import {curvatureRadii} from "./ellipsoid.ts";
import {transformation} from "./transformation.ts";

export interface ProjectionScale {
  /** Map length over true length, in the direction where it is largest. */
  readonly largest: number;
  /** The same where it is smallest; equal to the largest in a conformal projection. */
  readonly least: number;
  /** Degrees to add to a grid bearing to get the azimuth from true north. */
  readonly convergence: number;
}

const RADIANS = Math.PI / 180;
/** Degrees (about 110 m): the truncation of the central difference and its rounding both stay near 1e-10. */
const STEP = 1e-3;

/**
 * A function that gives a projected system's scale at a longitude and latitude of its own datum.
 * Good to about 1e-9; meaningless within {@link STEP} of a pole.
 */
export function projectionScale(system: CoordinateSystem): (longitude: number, latitude: number) => ProjectionScale {
  const {apply} = transformation(geographicOf(system), system);
  const unit = system.metresPerUnit ?? Number.NaN;
  return (longitude, latitude) => {
    const {meridian, primeVertical} = curvatureRadii(system.datum.ellipsoid, latitude);
    const [west, east] = [apply(longitude - STEP, latitude), apply(longitude + STEP, latitude)];
    const [south, north] = [apply(longitude, latitude - STEP), apply(longitude, latitude + STEP)];
    const perEast = unit / (2 * STEP * RADIANS * primeVertical * Math.cos(latitude * RADIANS));
    const perNorth = unit / (2 * STEP * RADIANS * meridian);
    const [a, c] = [(east[0] - west[0]) * perEast, (east[1] - west[1]) * perEast];
    const [b, d] = [(north[0] - south[0]) * perNorth, (north[1] - south[1]) * perNorth];
    // Singular values of [a b; c d] as the sum and difference of a rotation and a reflection.
    const sum = Math.hypot(a + d, c - b) / 2;
    const difference = Math.hypot(a - d, c + b) / 2;
    return {
      largest: sum + difference,
      least: Math.abs(sum - difference),
      convergence: -Math.atan2(b, d) / RADIANS,
    };
  };
}

/** The largest departure of a projection's scale from one, in any direction, at a longitude and latitude. */
export function scaleErrorAt(system: CoordinateSystem, longitude: number, latitude: number): number {
  const {largest, least} = projectionScale(system)(longitude, latitude);
  return Math.max(Math.abs(largest - 1), Math.abs(least - 1));
}

/**
 * The largest departure of a projection's scale from one along stations.
 * @param longitudes degrees, on the datum of the system
 * @param latitudes degrees, as many
 */
export function largestScaleError(
  system: CoordinateSystem,
  longitudes: ArrayLike<number>,
  latitudes: ArrayLike<number>,
): number {
  const at = projectionScale(system);
  let worst = 0;
  for (let i = 0; i < longitudes.length; ++i) {
    const {largest, least} = at(longitudes[i]!, latitudes[i]!);
    worst = Math.max(worst, Math.abs(largest - 1), Math.abs(least - 1));
  }
  return worst;
}

/** Degrees to add to a bearing of the grid at x, y (the system's own unit) to get the azimuth from true north. */
export function gridConvergence(system: CoordinateSystem, x: number, y: number): number {
  const [longitude, latitude] = transformation(system, geographicOf(system)).apply(x, y);
  return projectionScale(system)(longitude, latitude).convergence;
}
