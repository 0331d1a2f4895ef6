/** Closed intervals of chainage and unions of them. */
import {InputError} from "../errors.ts";

export interface Interval {
  readonly from: number;
  readonly to: number;
}

/** Disjoint intervals in increasing order: where sources may be, on the boundary. Lengths in m. */
export type Support = readonly Interval[];

export const lengthOf = (interval: Interval): number => interval.to - interval.from;

export const totalLength = (support: Support): number => support.reduce((sum, part) => sum + lengthOf(part), 0);

/**
 * Intervals in order, touching ones joined.
 * @throws {InputError} `support/empty`, `support/not-finite`, `support/end-before-start`, `support/overlap`
 */
export function supportOf(intervals: readonly Interval[]): Support {
  if (intervals.length === 0)
    throw new InputError("support/empty", "No support was given. Give --support A:B in metres of chainage.");
  for (const {from, to} of intervals) {
    if (!(Number.isFinite(from) && Number.isFinite(to)))
      throw new InputError(
        "support/not-finite",
        `Support ${from}:${to} is not a pair of finite numbers. Give A:B in metres of chainage.`,
      );
    if (!(from < to))
      throw new InputError(
        "support/end-before-start",
        `Support ${from}:${to} ends at or before its start. Give the smaller chainage first, for example ${to}:${from}.`,
      );
  }
  const sorted = [...intervals].sort((a, b) => a.from - b.from);
  const joined: Interval[] = [];
  for (const next of sorted) {
    const last = joined.at(-1);
    if (last === undefined || next.from > last.to) joined.push(next);
    else if (next.from === last.to) joined[joined.length - 1] = {from: last.from, to: next.to};
    else
      throw new InputError(
        "support/overlap",
        `Supports ${last.from}:${last.to} and ${next.from}:${next.to} overlap. Give disjoint intervals, or one that covers both.`,
      );
  }
  return joined;
}

/** The parts of `interval` inside `support`; empty when they are disjoint. */
export function clip(interval: Interval, support: Support): Interval[] {
  const parts: Interval[] = [];
  for (const part of support) {
    const from = Math.max(part.from, interval.from);
    const to = Math.min(part.to, interval.to);
    if (from < to) parts.push({from, to});
  }
  return parts;
}
