/** The track of a line that is placed on an axis: chainage along it, and the offset from it as knots. */
import type {CoordinateSystem} from "../geometry/crs-definition.ts";
import type {Track} from "../geometry/track.ts";
import {type LineAxis, pointAt} from "../survey/line-axis.ts";
import type {TrackKnots} from "../survey/track-shape.ts";

/** @param system of the axis; @param unit metres in one unit of it */
export function axisTrack(
  axis: LineAxis,
  course: TrackKnots,
  system: CoordinateSystem | undefined,
  unit: number,
): Track {
  const knots = Array.from(course.chainage, (at, k) => pointAt(axis, at, course.value[k]!));
  const [alongX, alongY] = axis.along;
  return {
    system,
    chainage: course.chainage,
    x: Float64Array.from(knots, ([x]) => x / unit),
    y: Float64Array.from(knots, ([, y]) => y / unit),
    beyond: [(alongX - course.slope * alongY) / unit, (alongY + course.slope * alongX) / unit],
  };
}
