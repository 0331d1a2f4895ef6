/** A place on a track as the number of a station and the share of the way to the next: 3.25. */

/** Straight between the stations either side of a place. */
export function interpolated(column: Float64Array, at: number): number {
  const k = Math.min(Math.floor(at), column.length - 2);
  const share = at - k;
  // At a station its own value, also beside one that is not finite.
  if (share === 0) return column[k]!;
  return share === 1 ? column[k + 1]! : column[k]! + share * (column[k + 1]! - column[k]!);
}
