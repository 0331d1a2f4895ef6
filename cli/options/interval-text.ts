/** `A:B` and `G2/A:B` on the chainage of a group of lines. */
import {InputError} from "../../lib/errors.ts";
import type {ChainageZone} from "../../lib/study/settings.ts";
import {shown} from "../printable.ts";
import {NUMBER_PATTERN, numberIn} from "./number.ts";

/** Source of a regular expression for the texts that `intervalFor` takes, but for the order of the ends. */
export const INTERVAL_PATTERN = `\\s*(G\\d+/)?\\s*${NUMBER_PATTERN}\\s*:\\s*${NUMBER_PATTERN}\\s*`;
const SHAPE = /^(?:(G\d+)\/)?([^:/]+):([^:/]+)$/;

/**
 * @param option as it stands in the message, with what precedes the interval: `--strip dyke=`
 * @throws {InputError} `option/not-an-interval`, `option/end-before-start`
 */
export function intervalFor(option: string, text: string): ChainageZone {
  const parts = SHAPE.exec(text.trim());
  const from = numberIn(parts?.[2]?.trim() ?? "");
  const to = numberIn(parts?.[3]?.trim() ?? "");
  if (parts === null || from === undefined || to === undefined)
    throw new InputError(
      "option/not-an-interval",
      `${option}${shown(text)} is not an interval of chainage. Give A:B in metres, for example ${option}400:900, or with a group of lines ${option}G2/400:900.`,
    );
  if (!(from < to))
    throw new InputError(
      "option/end-before-start",
      `${option}${shown(text)} ends at or before its start. Give the smaller chainage first${from === to ? ", and a length above 0" : `: ${option}${to}:${from}`}.`,
    );
  return {from, to, group: parts[1]};
}
