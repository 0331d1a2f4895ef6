/** The field carried to a level. */
import type {Dimension} from "../quantities.ts";

/** Metres above the boundary, or above the ground under each station. */
export type LevelSetting =
  | {readonly kind: "above-boundary"; readonly height: number}
  | {readonly kind: "above-ground"; readonly height: number};

/** How a level is written in files and headings: `10` or `ground+10`. */
export const levelLabel = (level: LevelSetting): string =>
  level.kind === "above-boundary" ? `${level.height}` : `ground+${level.height}`;

/** Field at every station of a line, in the order of the stations; SI, m. */
export interface LevelProfile {
  readonly setting: LevelSetting;
  /** Name of what is given, and its dimension. */
  readonly quantity: string;
  readonly dimension: Dimension;
  /** Above the boundary, m. */
  readonly height: Float64Array;
  readonly value: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  /** NaN for a value at a point above the boundary; on it, the length that the interval averages over, m. */
  readonly averagedOver: Float64Array;
}
