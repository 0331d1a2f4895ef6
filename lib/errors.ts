/**
 * The class of an error says who acts, its code is for scripts, and its message
 * says what was found, what was needed and what to do. Anything else that is
 * thrown is a defect of the program.
 */

/** A place in an input; rows count from one, as editors do. */
export interface Place {
  readonly file: string;
  readonly row?: number;
  readonly column?: string;
}

export type ErrorCode = `${string}/${string}`;

export abstract class ReportableError extends Error {
  abstract readonly exitStatus: 2 | 3 | 4;
  readonly code: ErrorCode;
  readonly place: Place | undefined;
  constructor(code: ErrorCode, message: string, options: {place?: Place | undefined; cause?: unknown} = {}) {
    super(message, {cause: options.cause});
    this.name = new.target.name;
    this.code = code;
    this.place = options.place;
  }
}

/** A file, a setting or the environment is at fault: the user edits it. */
export class InputError extends ReportableError {
  readonly exitStatus = 2;
}

/** Sound input breaks a hypothesis of the theory: the user changes the model. */
export class ModelError extends ReportableError {
  readonly exitStatus = 3;
}

/** The method missed its promised accuracy: the method changes. */
export class NumericalError extends ReportableError {
  readonly exitStatus = 4;
}
