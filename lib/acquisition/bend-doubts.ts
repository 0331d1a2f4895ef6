/** A line that departs from straight by more than its station spacing can bear. */
import type {Place} from "../errors.ts";
import {doubt, type Notice} from "../notice.ts";
import {bendOf, type TrackKnots} from "../survey/track-shape.ts";

/** @param course offset from the axis; @param spacing of the stations, m */
export function bendDoubts(course: TrackKnots, spacing: number, place: Place): Notice[] {
  const {excess, departure} = bendOf(course);
  if (!(excess > spacing)) return [];
  return [
    doubt(
      "line/bends",
      `The line departs up to ${departure.toPrecision(3)} m from straight, so that the distance flown exceeds its chainage by ${excess.toPrecision(3)} m, more than its station spacing of ${spacing.toPrecision(3)} m. Features are displaced by as much; split the line where it bends, or give its chainage.`,
      place,
    ),
  ];
}
