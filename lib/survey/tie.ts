/** A reading at a known point that the answer must meet. SI units; metres. */
import type {Place} from "../errors.ts";
import type {Observable} from "../potential/observable.ts";

export interface Tie {
  readonly line: string;
  /** On the line's axis, or delivered coordinates. */
  readonly at: {readonly chainage: number} | {readonly x: number; readonly y: number};
  /** Above the height datum; above the ground where only the clearance of the line is known. */
  readonly elevation: number;
  /** Of the sources alone, without regional. */
  readonly value: number;
  /** Standard deviation; 0: exactly. */
  readonly tolerance: number;
  readonly observable: Observable;
  readonly place: Place;
}
