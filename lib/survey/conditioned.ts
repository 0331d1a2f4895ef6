/** A line made ready for the operator: heights above the boundary, one noise level, one channel. SI units; metres. */
import type {Notice} from "../notice.ts";
import type {SurveyLine} from "./line.ts";

export interface ConditionedLine {
  readonly line: SurveyLine;
  /** Height of each station above the boundary, m; all positive. */
  readonly height: Float64Array;
  /** Height of the ground above the boundary under each station, m; undefined where the ground is not known. */
  readonly groundHeight: Float64Array | undefined;
  /** The boundary in words, for report and record. */
  readonly boundary: string;
  /** Readings of the channel in use, SI. */
  readonly values: Float64Array;
  /** Standard deviation of the noise, SI, and where it came from. */
  readonly noise: number;
  readonly noiseFrom: "given" | "record";
  readonly notices: readonly Notice[];
}
