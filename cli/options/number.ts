/** Numbers in options: decimal point, optional exponent, nothing else. */
import {InputError} from "../../lib/errors.ts";
import {shown} from "../printable.ts";

/** Source of a regular expression, for patterns that hold a number. */
export const NUMBER_PATTERN = "[+-]?(\\d+\\.?\\d*|\\.\\d+)([eE][+-]?\\d+)?";
const NUMBER = new RegExp(`^${NUMBER_PATTERN}$`);

/** What a number must be: in words, with an example for messages, and its limits. */
export interface Need {
  readonly words: string;
  readonly example: string;
  /** Greater than. */
  readonly above?: number;
  /** At least. */
  readonly least?: number;
  /** Less than. */
  readonly below?: number;
  /** At most. */
  readonly most?: number;
  readonly whole?: true;
}

export const ANY_NUMBER: Need = {words: "a number", example: "12.5"};
export const POSITIVE: Need = {words: "a number above 0", example: "0.5", above: 0};
export const NOT_NEGATIVE: Need = {words: "a number, 0 or above", example: "60", least: 0};

const meets = (value: number, {above, least, below, most, whole}: Need): boolean =>
  (above === undefined || value > above) &&
  (least === undefined || value >= least) &&
  (below === undefined || value < below) &&
  (most === undefined || value <= most) &&
  (whole === undefined || Number.isInteger(value));

/** The number spelt `text`; undefined for any other text, NaN and Infinity among them. */
export function numberIn(text: string): number | undefined {
  if (!NUMBER.test(text)) return undefined;
  const value = Number(text);
  return Number.isFinite(value) ? value : undefined;
}

/**
 * The value of a numeric option.
 * @param option as it stands in the message: `--noise`
 * @throws {InputError} `option/not-a-number`, `option/out-of-range`
 */
export function numberFor(option: string, text: string, need: Need): number {
  const value = numberIn(text);
  const cure = `Give ${need.words}, for example ${option} ${need.example}.`;
  if (value === undefined)
    throw new InputError("option/not-a-number", `${option} ${shown(text)} is not a number. ${cure}`);
  if (!meets(value, need))
    throw new InputError("option/out-of-range", `${option} ${shown(text)} is out of range. ${cure}`);
  return value;
}
