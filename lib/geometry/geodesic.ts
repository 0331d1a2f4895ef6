/**
 * The shortest way between two points of an ellipsoid.
 *
 * Source: T. Vincenty, Direct and inverse solutions of geodesics on the ellipsoid with
 * application of nested equations, Survey Review 23 (1975) 88–93, inverse formula.
 * Its series end at the fourth power of the flattening: below 0.1 mm at any distance.
 */
import {NumericalError} from "../errors.ts";
import {type Ellipsoid, flattening, semiMinorAxis} from "./ellipsoid.ts";

export interface Geodesic {
  /** Metres. */
  readonly distance: number;
  /** Degrees clockwise from north at the first point, towards the second; 0 for one point twice. */
  readonly azimuth: number;
}

const RADIANS = Math.PI / 180;
const MOST_ROUNDS = 200;

/**
 * The geodesic from one point to another; degrees throughout.
 * @throws {NumericalError} `geometry/antipodal` for points on opposite sides of the Earth, where the iteration fails
 */
export function geodesic(
  ellipsoid: Ellipsoid,
  longitude1: number,
  latitude1: number,
  longitude2: number,
  latitude2: number,
): Geodesic {
  const f = flattening(ellipsoid);
  const b = semiMinorAxis(ellipsoid);
  const turn = longitude2 - longitude1;
  const L = (turn - 360 * Math.round(turn / 360)) * RADIANS;
  const U1 = Math.atan2((1 - f) * Math.sin(latitude1 * RADIANS), Math.cos(latitude1 * RADIANS));
  const U2 = Math.atan2((1 - f) * Math.sin(latitude2 * RADIANS), Math.cos(latitude2 * RADIANS));
  const [sinU1, cosU1, sinU2, cosU2] = [Math.sin(U1), Math.cos(U1), Math.sin(U2), Math.cos(U2)];
  // sin U1 sin U2 + cos U1 cos U2 cos λ and cos U1 sin U2 − sin U1 cos U2 cos λ, free of cancellation for near points.
  const sinDU = Math.sin(U2 - U1);
  const cosDU = Math.cos(U2 - U1);
  let λ = L;
  for (let round = 0; round < MOST_ROUNDS; ++round) {
    const sinλ = Math.sin(λ);
    const versine = 2 * Math.sin(λ / 2) ** 2;
    const east = cosU2 * sinλ;
    const north = sinDU + sinU1 * cosU2 * versine;
    const sinσ = Math.hypot(east, north);
    const cosσ = cosDU - cosU1 * cosU2 * versine;
    if (sinσ === 0 && cosσ > 0) return {distance: 0, azimuth: 0};
    const σ = Math.atan2(sinσ, cosσ);
    const sinα = (cosU1 * cosU2 * sinλ) / sinσ;
    const cos2α = 1 - sinα * sinα;
    const cos2σm = cos2α > 0 ? cosσ - (2 * sinU1 * sinU2) / cos2α : 0;
    const C = (f / 16) * cos2α * (4 + f * (4 - 3 * cos2α));
    const next = L + (1 - C) * f * sinα * (σ + C * sinσ * (cos2σm + C * cosσ * (2 * cos2σm * cos2σm - 1)));
    const moved = Math.abs(next - λ);
    λ = next;
    if (!(Math.abs(λ) <= Math.PI)) break;
    if (moved > 1e-14) continue;
    const u2 = (cos2α * (ellipsoid.semiMajorAxis ** 2 - b * b)) / (b * b);
    const A = 1 + (u2 / 16384) * (4096 + u2 * (-768 + u2 * (320 - 175 * u2)));
    const B = (u2 / 1024) * (256 + u2 * (-128 + u2 * (74 - 47 * u2)));
    const Δσ =
      B *
      sinσ *
      (cos2σm +
        (B / 4) *
          (cosσ * (2 * cos2σm * cos2σm - 1) - (B / 6) * cos2σm * (4 * sinσ * sinσ - 3) * (4 * cos2σm * cos2σm - 3)));
    const azimuth = Math.atan2(east, north) / RADIANS;
    return {distance: b * A * (σ - Δσ), azimuth: azimuth < 0 ? azimuth + 360 : azimuth};
  }
  throw new NumericalError(
    "geometry/antipodal",
    `The distance from (${longitude1}, ${latitude1}) to (${longitude2}, ${latitude2}) did not settle: the points lie on opposite sides of the Earth. Check the positions.`,
  );
}

/** The distance alone, metres. */
export const geodesicDistance = (
  ellipsoid: Ellipsoid,
  longitude1: number,
  latitude1: number,
  longitude2: number,
  latitude2: number,
): number => geodesic(ellipsoid, longitude1, latitude1, longitude2, latitude2).distance;
