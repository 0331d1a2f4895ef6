/** The text of one cell as a number, or as "no value". */
import {InputError} from "../errors.ts";

/** What stands before the fraction in a number. */
export type DecimalMark = "." | ",";

/**
 * Words for "no value", in any case of letters: what spreadsheets, databases and
 * scripting languages write (common practice, no source).
 */
export const NULL_SPELLINGS: readonly string[] = ["", "*", "-", "na", "n/a", "#n/a", "null", "nan", "none"];

/**
 * Numbers that mean "no value" wherever they stand (common practice, no source).
 * None of them is a reading, a coordinate or a height on Earth, so nothing is lost.
 * Others, such as -999 or -9999, can be readings: they count only when declared.
 */
export const NULL_SENTINELS: readonly number[] = [-9999999.99, 9999999, -99999, 1e32, -1e32];

/** The same at the cost of one comparison for most readings. */
export const isNullSentinel = (value: number): boolean =>
  (value >= LEAST_SENTINEL || value <= -LEAST_SENTINEL) && NULL_SENTINELS.includes(value);
const LEAST_SENTINEL = Math.min(...NULL_SENTINELS.map(Math.abs));

const NUMBER = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eEdD][+-]?\d+)?$/;
const INFINITE = /^[+-]?inf(?:inity)?$/i;

/**
 * The number a cell holds.
 *
 * A Unicode minus and the exponent letter D are understood; separators of
 * thousands are not, since 1,234 would then have two readings.
 *
 * @param declaredNulls further numbers that mean "no value"
 * @returns NaN for "no value" (`NULL_SPELLINGS`, `NULL_SENTINELS`, `declaredNulls`),
 *   undefined when the text is not a finite number
 */
export function parseCell(
  text: string,
  decimal: DecimalMark,
  declaredNulls: readonly number[] = [],
): number | undefined {
  let plain = text.trim();
  if (decimal === ",") {
    // With a decimal comma a point can only separate thousands: not understood.
    if (plain.includes(".")) return NULL_SPELLINGS.includes(plain.toLowerCase()) ? NaN : undefined;
    plain = plain.replace(",", ".");
  }
  if (plain.startsWith("\u2212")) plain = `-${plain.slice(1)}`;
  if (!NUMBER.test(plain)) return NULL_SPELLINGS.includes(plain.toLowerCase()) ? NaN : undefined;
  const value = Number(/[dD]/.test(plain) ? plain.replace(/[dD]/, "e") : plain);
  if (!Number.isFinite(value)) return undefined;
  return isNullSentinel(value) || declaredNulls.includes(value) ? NaN : value;
}

/** Where a cell stands, for `requireNumber`. */
export interface CellPlace {
  readonly file: string;
  readonly row: number;
  readonly column: string;
}

/**
 * The number a cell holds, or NaN for "no value".
 * @throws {InputError} `table/infinite`, `table/text-in-number`, with file, row and column
 */
export function requireNumber(
  text: string,
  decimal: DecimalMark,
  place: CellPlace,
  declaredNulls: readonly number[] = [],
): number {
  const value = parseCell(text, decimal, declaredNulls);
  if (value !== undefined) return value;
  const where = `${place.file}, row ${place.row}, column "${place.column}"`;
  const plain = text.trim();
  const shown = plain.length > 40 ? `${plain.slice(0, 40)}…` : plain;
  const pointed = decimal === "," ? plain.replace(/\./g, "x").replace(",", ".") : plain;
  const looksInfinite = INFINITE.test(plain) || NUMBER.test(pointed);
  if (looksInfinite)
    throw new InputError(
      "table/infinite",
      `${where} holds ${shown}, which is infinite; a finite number was needed. Empty the cell if there is no value.`,
      {place},
    );
  const other = decimal === "." ? /^[+-]?\d+,\d+$/.test(plain) : /^[+-]?\d+\.\d+$/.test(plain);
  const cure = other
    ? `This file's decimal mark was taken to be "${decimal}": write the whole file with one mark.`
    : "Correct the cell, or empty it if there is no value.";
  throw new InputError(
    "table/text-in-number",
    `${where} holds "${shown}"; a number with decimal mark "${decimal}" was needed. ${cure}`,
    {place},
  );
}
