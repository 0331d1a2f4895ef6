/** Where the boundary of the half-plane lies, with every source at or below it. */

export type BoundarySetting =
  /** Flat, at this elevation above the height datum, m. */
  | {readonly kind: "elevation"; readonly elevation: number}
  /** Flat, this far below the lowest ground under the line, m. */
  | {readonly kind: "depth"; readonly depth: number}
  /** Following the ground, this far below it, m. */
  | {readonly kind: "ground"; readonly depth: number};
