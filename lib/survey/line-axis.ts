/**
 * Projection on an axis: chainage along it, offset from it, and back.
 * Plane geometry in a metric system; azimuths in degrees clockwise from grid north.
 */

export interface LineAxis {
  readonly azimuth: number;
  /** Where chainage and offset are zero, m. */
  readonly origin: readonly [number, number];
  /** Unit vector of increasing chainage. */
  readonly along: readonly [number, number];
}

/** Exact for the four quarters, so that an axis along the grid adds no rounding. */
const direction = (azimuth: number): readonly [number, number] => {
  if (azimuth === 0) return [0, 1];
  if (azimuth === 90) return [1, 0];
  const angle = (azimuth * Math.PI) / 180;
  return [Math.sin(angle), Math.cos(angle)];
};

export const lineAxis = (azimuth: number, origin: readonly [number, number]): LineAxis => ({
  azimuth,
  origin,
  along: direction(azimuth),
});

export const chainageAt = (axis: LineAxis, x: number, y: number): number =>
  (x - axis.origin[0]) * axis.along[0] + (y - axis.origin[1]) * axis.along[1];

/** Positive to the left of increasing chainage. */
export const offsetAt = (axis: LineAxis, x: number, y: number): number =>
  (y - axis.origin[1]) * axis.along[0] - (x - axis.origin[0]) * axis.along[1];

export const pointAt = (axis: LineAxis, chainage: number, offset: number): readonly [number, number] => [
  axis.origin[0] + chainage * axis.along[0] - offset * axis.along[1],
  axis.origin[1] + chainage * axis.along[1] + offset * axis.along[0],
];

/** The same axis with its zero moved along by `chainage`. */
export const movedAlong = (axis: LineAxis, chainage: number): LineAxis => ({
  ...axis,
  origin: pointAt(axis, chainage, 0),
});
