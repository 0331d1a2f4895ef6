/** Where the boundary of the half-plane lies: flat, with every source at or below it. */

export type BoundarySetting =
  /** At this elevation above the height datum, m. */
  | {readonly kind: "elevation"; readonly elevation: number}
  /** Flat, this far below the lowest ground under the line, m. */
  | {readonly kind: "depth"; readonly depth: number};
