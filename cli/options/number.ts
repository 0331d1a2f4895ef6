/** Numbers in options: decimal point, optional exponent, nothing else. */
import {InputError} from "../../lib/errors.ts";
import {shown} from "../printable.ts";

const NUMBER = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i;

/** What a number must be, in words, and the test; an example for the message. */
export interface Need {
  readonly words: string;
  readonly example: string;
  holds(value: number): boolean;
}

export const ANY_NUMBER: Need = {words: "a number", example: "12.5", holds: () => true};
export const POSITIVE: Need = {words: "a number above 0", example: "0.5", holds: (value) => value > 0};
export const NOT_NEGATIVE: Need = {words: "a number, 0 or above", example: "60", holds: (value) => value >= 0};

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
  if (!need.holds(value))
    throw new InputError("option/out-of-range", `${option} ${shown(text)} is out of range. ${cure}`);
  return value;
}
