/** A doubt: it does not stop the work, it travels with the result. */
import type {ErrorCode, Place} from "./errors.ts";

export interface Notice {
  readonly code: ErrorCode;
  /** What was found, what it means for the answer, what to do. */
  readonly message: string;
  /** The line it belongs to; absent for the survey as a whole. */
  readonly line?: string;
  readonly place?: Place;
  /** Only a doubt lowers a line from `done` to `doubtful`; a remark does not. */
  readonly weight: "doubt" | "remark";
}

export const doubt = (code: ErrorCode, message: string, place?: Place): Notice =>
  place === undefined ? {code, message, weight: "doubt"} : {code, message, weight: "doubt", place};

export const remark = (code: ErrorCode, message: string, place?: Place): Notice =>
  place === undefined ? {code, message, weight: "remark"} : {code, message, weight: "remark", place};
