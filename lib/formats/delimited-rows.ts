/**
 * Rows of a delimited text, a chunk of bytes at a time, on csv-parse (quoting as in
 * RFC 4180, strict). Memory: one chunk and the rows in it, whatever the file's size.
 */
import {type CsvError, parse} from "csv-parse";
import {InputError} from "../errors.ts";
import type {ByteSource} from "./byte-source.ts";
import type {TextEncoding} from "./text-encoding.ts";

/** A survey reading is tens of bytes; more than this in one cell is damage, not data. */
export const CELL_LIMIT = 64 * 1024;
/** Bytes in one row before the reader gives up: an unclosed quote swallows rows until then. */
export const ROW_LIMIT = 1 << 20;

export type Delimiter = "," | ";" | "\t" | "|";

export interface RawRow {
  /** As an editor counts: 1 is the first line of the file. */
  readonly row: number;
  readonly cells: readonly string[];
}

/** Where reading begins: a byte of the file, and the row that begins there. */
export interface RowStart {
  readonly offset: number;
  readonly row: number;
  /** Where the first piece read ends, so that the pieces are those of a reading from the beginning. */
  readonly chunkEnd: number;
}

/**
 * The rows of a text in bunches, header included, blank lines left out.
 *
 * @param chunkBytes bytes read at a time
 * @param from the beginning of a row; absent: of the text
 * @throws {InputError} `table/cell-too-large`, `table/row-too-large`, `table/quote`
 */
export async function* delimitedRows(
  source: ByteSource,
  encoding: TextEncoding,
  delimiter: Delimiter,
  chunkBytes: number,
  from: RowStart = {offset: encoding.start, row: 1, chunkEnd: encoding.start + chunkBytes},
): AsyncGenerator<readonly RawRow[]> {
  let rows: RawRow[] = [];
  const count = rowCounter(from.row);
  const parser = parse({
    delimiter,
    record_delimiter: ["\r\n", "\n", "\r"],
    relax_column_count: true,
    skip_empty_lines: true,
    trim: true,
    max_record_size: ROW_LIMIT,
  });
  // The rows are taken as they are pushed, so that the stream's own queue stays empty and one
  // finished write means one finished chunk. The option `on_record` would do the same at half
  // the speed: it copies all counters for every record.
  parser.push = (record: string[] | null) => {
    if (record !== null) rows.push({row: count(record, parser.info.lines, parser.info.empty_lines), cells: record});
    return true;
  };
  // Each failure also reaches the callback of the write that caused it.
  parser.on("error", () => undefined);
  try {
    let chunkEnd = Math.min(from.chunkEnd, source.size);
    for (let offset = from.offset; offset < source.size; offset = chunkEnd, chunkEnd += chunkBytes) {
      const bytes = await source.read(offset, Math.min(chunkEnd, source.size) - offset);
      // csv-parse keeps a view of the last bytes of a chunk; the source may reuse its buffer.
      await settle((done) => parser.write(asUtf8(bytes, encoding.name), done));
      if (rows.length > 0) {
        refuseLargeCells(rows, source.name);
        yield rows;
        rows = [];
      }
    }
    await settle((done) => parser.end(done));
    if (rows.length > 0) {
      refuseLargeCells(rows, source.name);
      yield rows;
    }
  } catch (error) {
    throw isCsvError(error) ? explained(error, source.name, delimiter, from.row) : error;
  } finally {
    parser.destroy();
  }
}

/**
 * A copy in UTF-8. csv-parse takes Latin-1, too, but then trims letters for white space that has no place there:
 * of "(12)" the opening bracket, whose byte is the last of U+2028.
 */
const asUtf8 = (bytes: Uint8Array, encoding: TextEncoding["name"]): Buffer =>
  encoding === "utf8" ? Buffer.from(bytes) : Buffer.from(Buffer.from(bytes).toString("latin1"), "utf8");

const settle = (start: (done: (error?: Error | null) => void) => void): Promise<void> =>
  new Promise((resolve, reject) => start((error) => (error ? reject(error) : resolve())));

/**
 * The line on which each record begins. csv-parse gives the line on which it ends and
 * counts CRLF inside quotes twice, so a record's own line breaks are counted here.
 */
function rowCounter(firstRow: number): (record: readonly string[], lines: number, emptyLines: number) => number {
  let next = firstRow;
  let lastLines = 0;
  let lastEmpty = 0;
  return (record, lines, emptyLines) => {
    const skipped = emptyLines - lastEmpty;
    const row = next + skipped;
    let breaks = 0;
    if (lines - lastLines !== 1 + skipped) for (const cell of record) breaks += cell.match(/\r\n|\r|\n/g)?.length ?? 0;
    next = row + 1 + breaks;
    lastLines = lines;
    lastEmpty = emptyLines;
    return row;
  };
}

function refuseLargeCells(rows: readonly RawRow[], file: string): void {
  for (const {row, cells} of rows)
    for (let i = 0; i < cells.length; ++i)
      if (cells[i]!.length > CELL_LIMIT)
        throw new InputError(
          "table/cell-too-large",
          `${file}, row ${row}, cell ${i + 1} holds ${cells[i]!.length} characters; at most ${CELL_LIMIT} are read. Remove the text, or look for a quote that is never closed.`,
          {place: {file, row}},
        );
}

const isCsvError = (error: unknown): error is CsvError =>
  error instanceof Error && "code" in error && "lines" in error && typeof error.code === "string";

function explained(error: CsvError, file: string, delimiter: Delimiter, firstRow: number): InputError {
  const row = Number(error["lines"]) + firstRow - 1;
  const cell = Number(error["index"]) + 1;
  const place = {file, row};
  const where = `${file}, row ${row}, cell ${cell}`;
  if (error.code === "CSV_MAX_RECORD_SIZE")
    return new InputError(
      "table/row-too-large",
      `${where}: the row runs past ${ROW_LIMIT} bytes, where rows of readings were needed. Remove the overlong cell, or close the quote that was opened and never closed.`,
      {place, cause: error},
    );
  const what =
    error.code === "CSV_QUOTE_NOT_CLOSED"
      ? "a quote is opened and never closed"
      : "a quote stands inside a cell, or something other than a delimiter follows a closing quote";
  return new InputError(
    "table/quote",
    `${where}: ${what}; a quoted cell needs a quote at both ends, and "" for a quote within (delimiter ${JSON.stringify(delimiter)}). Correct the quotes in that row.`,
    {place, cause: error},
  );
}
