/**
 * The direction of the Earth's field seen along a line: what of it lies in the plane of the line.
 *
 * With inclination I, declination D and the azimuth A of increasing chainage,
 *   β = hypot(cos I cos(A − D), sin I),  I′ = atan2(sin I, cos I cos(A − D)).
 * Source: Blakely, Potential Theory in Gravity and Magnetic Applications (1995), §9.3 (from memory).
 */
import {ModelError} from "../errors.ts";

export interface EffectiveDirection {
  readonly beta: number;
  /** I′, degrees. */
  readonly inclination: number;
}

/** Below this the reading is mostly what a two-dimensional source cannot make. A heuristic: noise is amplified twentyfold. */
const LEAST_BETA = 0.05;

/**
 * @param inclination, declination, azimuth degrees; declination and azimuth clockwise from true north
 * @throws {ModelError} `direction/along-strike` where the field is horizontal and along strike
 */
export function effectiveDirection(inclination: number, declination: number, azimuth: number): EffectiveDirection {
  const radian = Math.PI / 180;
  const along = Math.cos(inclination * radian) * Math.cos((azimuth - declination) * radian);
  const down = Math.sin(inclination * radian);
  const beta = Math.hypot(along, down);
  if (!(beta >= LEAST_BETA))
    throw new ModelError(
      "direction/along-strike",
      `The field (inclination ${inclination}°, declination ${declination}°) is nearly horizontal and square to the line (azimuth ${azimuth.toFixed(1)}°): of the sources' field only β = ${beta.toPrecision(2)} reaches a total-field sensor, and at least ${LEAST_BETA} is needed. Use lines that run closer to the field, or a component sensor.`,
    );
  return {beta, inclination: Math.atan2(down, along) / radian};
}
