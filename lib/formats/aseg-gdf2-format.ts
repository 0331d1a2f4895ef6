/** Formats of fixed-width fields, written as Fortran writes them: A8, I10, 30F10.4, E15.6, D14.9. */
import {parseCell} from "./number-cell.ts";

export interface FieldFormat {
  readonly kind: "A" | "I" | "F" | "E" | "D";
  /** Fields of this format one after the other; 1 without a repeat count. */
  readonly count: number;
  /** Characters of one of them. */
  readonly width: number;
  readonly decimals: number | undefined;
}

/** More fields than this under one name, or characters in one, is a slip of the pen. */
const LARGEST = 100_000;

/** Undefined for what is no format. Letters of either case; blanks do not count. */
export function parseFormat(text: string): FieldFormat | undefined {
  const found = /^(\d*)([AIFED])(\d+)(?:\.(\d+))?$/i.exec(text.replaceAll(/\s+/g, ""));
  if (found === null) return undefined;
  const count = found[1] === "" ? 1 : Number(found[1]);
  const width = Number(found[3]);
  if (!(count >= 1 && count <= LARGEST && width >= 1 && width <= LARGEST)) return undefined;
  const kind = found[2]!.toUpperCase() as FieldFormat["kind"];
  return {kind, count, width, decimals: found[4] === undefined ? undefined : Number(found[4])};
}

export const formatText = ({kind, count, width, decimals}: FieldFormat): string =>
  `${count === 1 ? "" : count}${kind}${width}${decimals === undefined ? "" : `.${decimals}`}`;

/** What Fortran writes in place of a number too long for its field. */
export const isOverflow = (cell: string): boolean => cell.startsWith("*") && /^\*+$/.test(cell);

/**
 * Whether a cell without surrounding blanks can stand under a format. A number is taken as written:
 * one without a decimal point has no decimals, whatever the format says (no file seen means otherwise).
 */
export function fitsFormat(cell: string, {kind}: FieldFormat): boolean {
  if (kind === "A") return true;
  if (cell === "" || isOverflow(cell)) return true;
  // Most cells are plain; the rest is asked of the one who knows every spelling.
  if (/^[+-]?\d+(?:\.\d*)?$/.test(cell)) return kind !== "I" || Number.isInteger(Number(cell));
  const value = parseCell(cell, ".");
  return value !== undefined && (kind !== "I" || Number.isNaN(value) || Number.isInteger(value));
}

/** Whether a format says how many decimals each of its numbers has. */
export const promisesDecimals = ({kind, decimals}: FieldFormat): boolean =>
  kind !== "A" && kind !== "I" && decimals !== undefined;

/** Whether a cell holds as many decimals as its format promises: a number cut in two does not. */
export function isWhole(cell: string, format: FieldFormat): boolean {
  if (!promisesDecimals(format)) return true;
  const digits = /\.(\d*)/.exec(cell)?.[1];
  return digits === undefined ? isOverflow(cell) : digits.length === format.decimals;
}
