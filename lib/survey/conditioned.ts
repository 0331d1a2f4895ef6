/** A line made ready for the operator: heights above the boundary, one noise level a channel. SI units; metres. */
import type {BoundaryLine} from "../geometry/boundary-line.ts";
import type {Notice} from "../notice.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import type {Response} from "../potential/kernel.ts";
import type {Channel, SurveyLine} from "./line.ts";

export interface ConditionedChannel {
  readonly channel: Channel;
  readonly response: Response;
  /** Height of the sensor above the datum of the section, m; above a flat boundary itself. */
  readonly z: Float64Array;
  /** Standard deviation of the noise, SI, and where it came from. */
  readonly noise: number;
  readonly noiseFrom: "given" | "record";
  /** Length over which it is correlated, m; 0: it is white. */
  readonly noiseLength: number;
}

export interface ConditionedLine {
  readonly line: SurveyLine;
  /** Height of the first channel's sensor above the boundary under it, m; all positive. */
  readonly height: Float64Array;
  /** The boundary where it follows the ground, heights above the datum of the section; undefined when flat. */
  readonly boundaryLine: BoundaryLine | undefined;
  /** Height of the ground above the boundary under each station, m; undefined where the ground is not known. */
  readonly groundHeight: Float64Array | undefined;
  /** Elevation of the datum of the section; less the depth of the boundary where heights count from ground taken as flat, m. */
  readonly datum: number;
  /** The boundary in words, for report and record. */
  readonly boundary: string;
  /** At least one; the first is `value`. */
  readonly channels: readonly ConditionedChannel[];
  /** Where an observable needs it. */
  readonly direction: EffectiveDirection | undefined;
  readonly notices: readonly Notice[];
}
