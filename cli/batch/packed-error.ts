/** An error as plain data, so that class, code, place and cause survive the way between threads and runs. */
import {type ErrorCode, InputError, ModelError, NumericalError, type Place, ReportableError} from "../../lib/errors.ts";

export interface PackedError {
  readonly kind: string;
  readonly code: ErrorCode;
  readonly message: string;
  readonly place: Place | undefined;
  /** Of an error that is not ours only the message is kept. */
  readonly cause: PackedError | {readonly message: string} | undefined;
}

const KINDS = {InputError, ModelError, NumericalError};

export function packedError(error: ReportableError): PackedError {
  const {code, message, place, cause} = error;
  const kind = Object.entries(KINDS).find(([, made]) => error instanceof made)?.[0];
  if (kind === undefined) throw new Error(`an error of class ${error.name} cannot be kept`);
  return {
    kind,
    code,
    message,
    place,
    cause:
      cause instanceof ReportableError
        ? packedError(cause)
        : cause instanceof Error
          ? {message: cause.message}
          : undefined,
  };
}

export function unpackedError({kind, code, message, place, cause}: PackedError): ReportableError {
  const Kind = KINDS[kind as keyof typeof KINDS];
  const under = cause === undefined ? undefined : "code" in cause ? unpackedError(cause) : new Error(cause.message);
  return new Kind(code, message, {place, cause: under});
}
