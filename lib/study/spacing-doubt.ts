/** Where the resolution printed is finer than the stations stand apart. */
import type {Resolution} from "../inverse/nouns.ts";
import {type Notice, standingDoubt} from "../notice.ts";

/**
 * No line is singled out by it: it is in the spacing, the noise and the bound.
 * @param spacing median between neighbouring stations, m
 */
export function doubtsOfSpacing({length}: Resolution, spacing: number): Notice[] {
  if (!(length < spacing)) return [];
  return [
    standingDoubt(
      "resolution/finer-than-spacing",
      `The resolution, ${length.toPrecision(3)} m, is finer than the spacing of the stations, ${spacing.toPrecision(3)} m. That is not seen but concluded: from sources as strong as the bound allows, readings as exact as the noise says, and a boundary just where it was put. Unless you can vouch for all three, take nothing narrower than the spacing for resolved.`,
    ),
  ];
}
