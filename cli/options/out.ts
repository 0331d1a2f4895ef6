/** The folder of the files, which no command chooses by itself. */
import {InputError} from "../../lib/errors.ts";

/** @throws {InputError} `option/missing` */
export function requiredOut(out: string | undefined): string {
  if (out !== undefined) return out;
  throw new InputError(
    "option/missing",
    "--out is missing: there is no folder for the files. Give one, for example --out out/.",
  );
}
