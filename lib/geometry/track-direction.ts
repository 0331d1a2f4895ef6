/** Which way a line runs over the Earth, and where its middle lies. */
import {geographicOf} from "./crs-definition.ts";
import {WGS84} from "./ellipsoid.ts";
import {geodesic} from "./geodesic.ts";
import type {Track} from "./track.ts";
import {transformation} from "./transformation.ts";

export interface TrackDirection {
  /** Of increasing chainage, degrees clockwise from true north. */
  readonly azimuth: number;
  /** Degrees; undefined where the system of the coordinates is not known and north is that of the map. */
  readonly middle: readonly [longitude: number, latitude: number] | undefined;
}

/** From the first knot to the last, at the middle between them. */
export function trackDirection({system, x, y}: Track): TrackDirection {
  const last = x.length - 1;
  if (system === undefined) {
    const azimuth = (Math.atan2(x[last] - x[0], y[last] - y[0]) * 180) / Math.PI;
    return {azimuth: (azimuth + 360) % 360, middle: undefined};
  }
  const toDegrees =
    system.kind === "geographic"
      ? (a: number, b: number): readonly [number, number] => [a, b]
      : (
          (way) => (a: number, b: number) =>
            way.apply(a, b)
        )(transformation(system, geographicOf(system)));
  const middle = toDegrees(0.5 * (x[0] + x[last]), 0.5 * (y[0] + y[last]));
  const end = toDegrees(x[last], y[last]);
  const {azimuth} = geodesic(WGS84, middle[0], middle[1], end[0], end[1]);
  return {azimuth: (azimuth + 360) % 360, middle};
}
