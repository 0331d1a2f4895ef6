/**
 * Where the fields of a definition stand in a row of data, found out from the rows themselves:
 * by the widths, with the record type or without it, or between white space where the widths
 * are off. A cut by width is believed only when every piece fits its format and no number is cut in two.
 * What cannot be seen: widths that are off next to a text field, in rows that also have a blank cell.
 */
import type {DefinedField, Definition} from "./aseg-gdf2-definition.ts";
import {type FieldFormat, fitsFormat, formatText, isOverflow, isWhole, promisesDecimals} from "./aseg-gdf2-format.ts";

/** One column of the table; a field with a repeat count has several. */
interface Column {
  readonly name: string;
  readonly field: DefinedField;
  /** Of one column: no repeat count. */
  readonly format: FieldFormat;
  /** NaN where the field has no number that means "no value". */
  readonly nullNumber: number;
}

/** How the rows of a file are cut. */
export interface Layout {
  readonly by: "width" | "white space";
  readonly columns: readonly Column[];
  /** The record type before the columns, which is no column of the table; undefined where the data has none. */
  readonly recordType: FieldFormat | undefined;
}

/** Why a row does not fit, to be said after naming file and row. */
export interface Misfit {
  readonly found: string;
  readonly needed: string;
  readonly field: DefinedField | undefined;
}

/** EMX:30F10.4 becomes EMX.1 to EMX.30. */
function columnsOf({fields}: Definition): Column[] {
  return fields.flatMap((field) =>
    Array.from({length: field.format.count}, (_, i) => ({
      name: field.format.count === 1 ? field.name : `${field.name}.${i + 1}`,
      field,
      format: {...field.format, count: 1},
      nullNumber: field.nullText === undefined || field.nullText === "" ? Number.NaN : numberOf(field.nullText),
    })),
  );
}

/** In the order tried. */
export function layoutsOf(definition: Definition): Layout[] {
  const columns = columnsOf(definition);
  const recordType = definition.recordType?.format;
  const starts = recordType === undefined ? [undefined] : [recordType, undefined];
  return (["width", "white space"] as const).flatMap((by) =>
    starts.map((start): Layout => ({by, columns, recordType: start})),
  );
}

/**
 * Cuts one row.
 * @param text the row without its line break
 * @param cells receives one cell a column, without surrounding blanks and empty for "no value"
 * @returns undefined when the row fits
 */
export function cutRow(text: string, layout: Layout, cells: string[]): Misfit | undefined {
  return layout.by === "width" ? cutByWidth(text, layout, cells) : cutByWhiteSpace(text, layout, cells);
}

function cutByWidth(text: string, layout: Layout, cells: string[]): Misfit | undefined {
  const {columns, recordType} = layout;
  let at = recordType?.width ?? 0;
  // Digits here belong to the next field: the data is without the record type.
  const type = text.slice(0, at);
  if (recordType !== undefined && !/^[A-Z ]*$/i.test(type))
    return {found: `"${type}" in characters 1 to ${at}`, needed: "a record type", field: undefined};
  let previous: Column | undefined;
  for (let c = 0; c < columns.length; ++c) {
    const column = columns[c]!;
    const {format} = column;
    const start = at;
    at += format.width;
    const piece = text.slice(start, at);
    const cell = trimmed(piece);
    if (piece.length < format.width && format.kind !== "A")
      return misfitAt(column, start, `the row ends after ${text.length} characters,`);
    if (!fitsFormat(cell, format)) return misfitAt(column, start, `"${cell}"`);
    if (previous !== undefined && !isBlankAt(text, start - 1) && !isBlankAt(text, start)) {
      const before = cells[c - 1]!;
      // Where white space cuts the row into fields that fit, it is the width that is wrong.
      if (cutByWhiteSpace(text, layout, []) === undefined)
        return misfitAt(column, start, `"${before}" next to "${cell}"`);
      if (!isWhole(before, previous.format)) return misfitAt(column, start, `"${before}" cut off before "${cell}"`);
      // Side by side stand fields of which one needs its full width, or a text after all the decimals of a number.
      const full = cell.length === format.width;
      const fullBefore = before.length === previous.format.width || promisesDecimals(previous.format);
      if (!full && !(format.kind === "A" && fullBefore))
        return misfitAt(column, start, `"${piece}", which belongs to what stands before it,`);
    }
    cells[c] = cell;
    previous = column;
  }
  const rest = trimmed(text.slice(at));
  if (rest !== "")
    return {
      found: `"${shortened(rest)}" after character ${at}`,
      needed: `the end of the row, since the widths add up to ${at}`,
      field: undefined,
    };
  for (let c = 0; c < columns.length; ++c) cells[c] = withoutNull(cells[c]!, columns[c]!);
  return undefined;
}

const misfitAt = ({name, format, field}: Column, start: number, found: string): Misfit => ({
  found: `${found} in characters ${start + 1} to ${start + format.width}`,
  needed: `${name} as ${formatText(format)}`,
  field,
});

function cutByWhiteSpace(text: string, {columns, recordType}: Layout, cells: string[]): Misfit | undefined {
  const words = trimmed(text).split(/[ \t]+/);
  const skipped = recordType === undefined ? 0 : 1;
  if (words.length !== columns.length + skipped)
    return {
      found: `${words.length} words between white space`,
      needed: `${columns.length + skipped}, one a field`,
      field: undefined,
    };
  if (skipped === 1 && !/^[A-Z]+$/i.test(words[0]!))
    return {found: `"${words[0]}" as the first word`, needed: "a record type", field: undefined};
  for (let c = 0; c < columns.length; ++c) {
    const column = columns[c]!;
    const word = words[c + skipped]!;
    if (!fitsFormat(word, column.format))
      return {
        found: `"${shortened(word)}" as word ${c + skipped + 1}`,
        needed: `${column.name} as ${formatText(column.format)}`,
        field: column.field,
      };
    cells[c] = withoutNull(word, column);
  }
  return undefined;
}

function withoutNull(cell: string, {format, nullNumber, field}: Column): string {
  if (cell === "" || cell === field.nullText) return "";
  if (format.kind === "A") return cell;
  if (isOverflow(cell) || (!Number.isNaN(nullNumber) && numberOf(cell) === nullNumber)) return "";
  return cell;
}

const numberOf = (text: string): number => Number(/[dD]/.test(text) ? text.replace(/[dD]/, "e") : text);

/** Blanks and tabs only: a byte of a letter outside ASCII may look like another kind of space. */
function trimmed(text: string): string {
  let [start, end] = [0, text.length];
  while (start < end && isBlankAt(text, start)) ++start;
  while (end > start && isBlankAt(text, end - 1)) --end;
  return text.slice(start, end);
}
function isBlankAt(text: string, at: number): boolean {
  const code = text.charCodeAt(at);
  // NaN beyond the end.
  return code === 0x20 || code === 0x09 || Number.isNaN(code);
}
const shortened = (text: string): string => (text.length > 40 ? `${text.slice(0, 40)}…` : text);
