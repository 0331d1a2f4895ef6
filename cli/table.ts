/** A table of text: heads, a rule, aligned cells, at most as wide as asked. */
import {printable} from "./printable.ts";

export interface Column {
  /** With its unit: `noise nT`. */
  readonly head: string;
  /** Numbers stand right, words left; only words give way when the table is too wide. */
  readonly align: "left" | "right";
}

const GAP = "  ";
/** Below this a column of words says nothing. */
const LEAST_WORDS = 8;

const shortened = (text: string, width: number): string =>
  text.length <= width ? text : `${text.slice(0, width - 1)}…`;

/**
 * @param rows one text per column; control characters are made visible, line feeds become blanks
 * @param most characters in a line; numbers never give way, so a table of many numbers may be wider
 */
export function textTable(columns: readonly Column[], rows: readonly (readonly string[])[], most = 100): string {
  const cells = rows.map((row) => row.map((cell) => printable(cell, 200).replaceAll(/[\t\n]/g, " ")));
  const widths = columns.map(({head}, c) => cells.reduce((width, row) => Math.max(width, row[c]!.length), head.length));
  const total = () => widths.reduce((sum, width) => sum + width, GAP.length * (widths.length - 1));
  for (;;) {
    const over = total() - most;
    // The widest column of words gives way first.
    let widest = -1;
    columns.forEach(({align}, c) => {
      if (align === "left" && widths[c]! > LEAST_WORDS && (widest < 0 || widths[c]! > widths[widest]!)) widest = c;
    });
    if (over <= 0 || widest < 0) break;
    widths[widest] = Math.max(LEAST_WORDS, widths[widest]! - over);
  }
  const line = (row: readonly string[]): string =>
    columns
      .map(({align}, c) => {
        const text = shortened(row[c]!, widths[c]!);
        return align === "left" ? text.padEnd(widths[c]!) : text.padStart(widths[c]!);
      })
      .join(GAP)
      .trimEnd();
  const rule = widths.map((width) => "-".repeat(width)).join(GAP);
  return `${[line(columns.map(({head}) => head)), rule, ...cells.map(line)].join("\n")}\n`;
}

/** A number for the eye: `digits` significant ones, no exponent between 1e-4 and 1e7, blank where there is none. */
export function figure(value: number | undefined, digits = 4): string {
  if (value === undefined || !Number.isFinite(value)) return "";
  const rounded = Number(value.toPrecision(digits));
  const size = Math.abs(rounded);
  if (rounded === 0) return "0";
  if (size < 1e-4 || size >= 1e7) return value.toExponential(digits - 1);
  return rounded.toFixed(Math.max(0, digits - 1 - Math.floor(Math.log10(size))));
}
