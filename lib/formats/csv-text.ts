/**
 * The text of a CSV file: UTF-8, comma, LF, decimal point; an empty cell means "no value".
 * Quoting follows RFC 4180.
 */

/** A spreadsheet takes a cell that begins like this for a formula (OWASP, "CSV Injection"). */
const FORMULA = /^[=+\-@\t\r]/;
const NEEDS_QUOTES = /[",\r\n]|^\s|\s$/;

/** A text as a cell; a leading apostrophe keeps a spreadsheet from running it as a formula. */
export function csvCell(text: string): string {
  const inert = FORMULA.test(text) ? `'${text}` : text;
  return NEEDS_QUOTES.test(inert) ? `"${inert.replaceAll('"', '""')}"` : inert;
}

/**
 * A number as a cell: the shortest text that reads back as the number rounded to
 * 12 significant digits. What is not finite has no value and leaves the cell empty.
 */
export function csvNumber(value: number | undefined): string {
  if (value === undefined || !Number.isFinite(value)) return "";
  // `+ 0` turns -0 into 0; the text of an integer below 1e12 needs no rounding.
  if (Number.isInteger(value) && Math.abs(value) < 1e12) return String(value + 0);
  return String(Number(value.toPrecision(12)) + 0);
}

/** One line of the file from cells that are already text of this format. */
export const csvLine = (cells: readonly string[]): string => `${cells.join(",")}\n`;
