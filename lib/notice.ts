/** A doubt: it does not stop the work, it travels with the result. */
import type {ErrorCode, Place} from "./errors.ts";

export interface Notice {
  readonly code: ErrorCode;
  /** What was found, what it means for the answer, what to do. */
  readonly message: string;
  /** The line it belongs to; absent for the survey as a whole. */
  readonly line?: string;
  /** Lines that a doubt about the survey as a whole speaks of. */
  readonly lines?: readonly string[];
  readonly place?: Place;
  readonly weight: "doubt" | "remark";
  /** True of every line measured like this one, so that it singles none out. */
  readonly everywhere?: boolean;
}

export const doubt = (code: ErrorCode, message: string, place?: Place): Notice =>
  place === undefined ? {code, message, weight: "doubt"} : {code, message, weight: "doubt", place};

export const remark = (code: ErrorCode, message: string, place?: Place): Notice =>
  place === undefined ? {code, message, weight: "remark"} : {code, message, weight: "remark", place};

/** A doubt about every line alike, from how the survey was measured. */
export const standingDoubt = (code: ErrorCode, message: string): Notice => ({
  code,
  message,
  weight: "doubt",
  everywhere: true,
});

/** Whether a line is `doubtful` rather than `done`: a doubt that is its own. */
export const isDoubtful = (notices: readonly Notice[]): boolean =>
  notices.some(({weight, everywhere}) => weight === "doubt" && everywhere !== true);
