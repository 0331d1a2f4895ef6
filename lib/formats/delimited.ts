/**
 * A delimited text file as a table: a header row, then rows of as many cells.
 * Encoding, delimiter and decimal mark are found out; what is doubtful is said in
 * `notices`; what cannot be read as one table is refused with its row.
 */
import {InputError} from "../errors.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import type {ByteSource} from "./byte-source.ts";
import type {AskedColumns, ColumnBlock} from "./column-block.ts";
import {delimitedColumns} from "./delimited-columns.ts";
import {type Delimiter, delimitedRows, type RawRow, type RowStart} from "./delimited-rows.ts";
import {decimalOf, delimiterOf} from "./dialect.ts";
import {type DecimalMark, parseCell} from "./number-cell.ts";
import {detectEncoding, type TextEncoding} from "./text-encoding.ts";

export interface TableBlock {
  /** Row numbers as an editor counts them, the header being 1; as many as `rows`. */
  readonly rowNumbers: readonly number[];
  /** Cells without surrounding white space, one for each name of the header. */
  readonly rows: readonly (readonly string[])[];
}

export interface Table {
  readonly name: string;
  readonly header: readonly string[];
  /** What a definition beside the table says of each column: a name in words, a unit; undefined where it says nothing. */
  readonly longNames?: readonly (string | undefined)[];
  readonly units?: readonly (string | undefined)[];
  readonly decimal: DecimalMark;
  readonly notices: readonly Notice[];
  /** The rows in order, from the beginning at every call. Rows in which every cell is empty are left out. */
  blocks(): AsyncIterable<TableBlock>;
  /** The same rows, of which only some columns are wanted: much faster, for tables of millions of rows. */
  columns(asked: AskedColumns): AsyncIterable<ColumnBlock>;
}

export interface DelimitedTable extends Table {
  readonly delimiter: Delimiter;
}

/** Bytes at a time: some thousand rows, so that neither memory nor the cost of a chunk counts. */
const CHUNK = 1 << 18;
/** The header must end within this; it is also what a look at the decimal mark costs. */
const HEADER_LIMIT = 1 << 20;
/** Rows looked at for the decimal mark. */
const SAMPLE = 1000;

/**
 * Opens a table: looks at the whole file for its encoding, at the first rows for the rest.
 *
 * @throws {InputError} `table/empty-file`, `table/utf16`, `table/not-text`, `table/json`,
 *   `table/header-only`, `table/no-header`, `table/duplicate-column`,
 *   `table/ragged-row`, `table/quote`, `table/cell-too-large`, `table/row-too-large`;
 *   `blocks()` throws the last four, too
 */
export async function openTable(source: ByteSource): Promise<DelimitedTable> {
  const encoding = await detectEncoding(source);
  const opening = await openingText(source, encoding);
  refuseJson(opening, source.name);
  const delimiter = delimiterOf(firstLineOf(opening));
  const notices: Notice[] = [];
  if (encoding.name === "latin1")
    notices.push(
      doubt(
        "table/latin1",
        `${source.name} is not valid UTF-8; it is read as Latin-1, so letters outside ASCII in names may be wrong. Save it as UTF-8 to be sure.`,
        {file: source.name},
      ),
    );
  const {headerRow, sample} = await firstRows(source, encoding, delimiter);
  const header = columnNames(headerRow, source.name, notices);
  const decimal = decimalOf(sample, delimiter, source.name);
  notices.push(...decimal.notices);
  const reading = {source, encoding, delimiter, width: header.length, mark: decimal.mark, chunk: CHUNK};
  return {
    name: source.name,
    header,
    delimiter,
    decimal: decimal.mark,
    notices,
    blocks: () => tableBlocks(reading),
    columns: (asked) => delimitedColumns(reading, asked, tableBlocks),
  };
}

/** A text as it was found to be written. */
export interface DelimitedReading {
  readonly source: ByteSource;
  readonly encoding: TextEncoding;
  readonly delimiter: Delimiter;
  /** Cells in a row. */
  readonly width: number;
  readonly mark: DecimalMark;
  /** Bytes read at a time. */
  readonly chunk: number;
}

/** @param from the beginning of a row below the header; absent: everything below the header */
export async function* tableBlocks(
  {source, encoding, delimiter, width, chunk}: DelimitedReading,
  from?: RowStart,
): AsyncGenerator<TableBlock> {
  let isHeader = from === undefined;
  for await (const bunch of delimitedRows(source, encoding, delimiter, chunk, from)) {
    const rowNumbers: number[] = [];
    const rows: (readonly string[])[] = [];
    for (const raw of bunch) {
      if (isHeader) {
        isHeader = false;
        continue;
      }
      if (isBlank(raw)) continue;
      requireWidth(raw, width, source.name, delimiter);
      rowNumbers.push(raw.row);
      rows.push(raw.cells);
    }
    if (rows.length > 0) yield {rowNumbers, rows};
  }
}

const isBlank = (raw: RawRow): boolean => raw.cells.every((cell) => cell === "");

function requireWidth({row, cells}: RawRow, width: number, file: string, delimiter: Delimiter): void {
  if (cells.length === width) return;
  const hint =
    delimiter === "," && cells.length > width
      ? ' A comma inside a cell needs quotes around the cell; decimal commas need ";" or a tab as delimiter.'
      : "";
  throw new InputError(
    "table/ragged-row",
    `${file}, row ${row} has ${cells.length} cells, while the header has ${width} (delimiter ${JSON.stringify(delimiter)}); as many were needed. Complete or remove that row.${hint}`,
    {place: {file, row}},
  );
}

/** From the first character on that is not blank. */
async function openingText(source: ByteSource, encoding: TextEncoding): Promise<string> {
  const bytes = await source.read(encoding.start, Math.min(HEADER_LIMIT, source.size - encoding.start));
  return Buffer.from(bytes).toString("latin1").trimStart();
}

/** A bracket and what JSON lets follow it: a header such as `[m]` is none. */
const JSON_OPENING = /^(?:\{\s*["}]|\[\s*[[{"\]\d-])/;

function refuseJson(opening: string, file: string): void {
  if (!JSON_OPENING.test(opening)) return;
  throw new InputError(
    "table/json",
    `The file is JSON (it begins with ${opening[0]}), and a survey is a CSV table with a header row, an ASEG-GDF2 pair or a GeoTIFF. Areas and transects in GeoJSON belong to --support, --strips or --profiles.`,
    {place: {file}},
  );
}

/** For the delimiter; quoted line breaks cut it short, which does no harm. */
function firstLineOf(text: string): string {
  const end = text.search(/[\r\n]/);
  return end < 0 ? text : text.slice(0, end);
}

/** The header and the cells of the first rows. */
async function firstRows(source: ByteSource, encoding: TextEncoding, delimiter: Delimiter) {
  let headerRow: RawRow | undefined;
  const sample: (readonly string[])[] = [];
  for await (const bunch of delimitedRows(source, encoding, delimiter, CHUNK)) {
    for (const raw of bunch) {
      if (headerRow === undefined) {
        headerRow = raw;
        refuseNumbers(headerRow, source.name);
        continue;
      }
      if (isBlank(raw)) continue;
      requireWidth(raw, headerRow.cells.length, source.name, delimiter);
      if (sample.push(raw.cells) >= SAMPLE) return {headerRow, sample};
    }
  }
  if (headerRow === undefined)
    throw new InputError(
      "table/empty-file",
      `${source.name} holds nothing but blank lines; a header row and rows of data were needed.`,
      {place: {file: source.name}},
    );
  if (sample.length === 0)
    throw new InputError(
      "table/header-only",
      `${source.name} has a header (row ${headerRow.row}) and no row of data below it; at least one was needed. Check that the file was saved or copied whole.`,
      {place: {file: source.name, row: headerRow.row}},
    );
  return {headerRow, sample};
}

/** A row of numbers is data: the header was forgotten. */
function refuseNumbers({row, cells}: RawRow, file: string): void {
  const filled = cells.filter((cell) => cell !== "");
  if (
    filled.length > 0 &&
    filled.every((cell) => parseCell(cell, ".") !== undefined || parseCell(cell, ",") !== undefined)
  )
    throw new InputError(
      "table/no-header",
      `${file}, row ${row} holds numbers where the names of the columns were needed. Add a header row above the data.`,
      {place: {file, row}},
    );
}

/** The names of the columns; one without a name is called by its position. */
function columnNames(headerRow: RawRow, file: string, notices: Notice[]): readonly string[] {
  const names = headerRow.cells.map((cell, index) => {
    if (cell !== "") return cell;
    const name = `column ${index + 1}`;
    notices.push(
      remark(
        "table/unnamed-column",
        `${file}: the header leaves column ${index + 1} without a name; it is called "${name}".`,
        {
          file,
          row: headerRow.row,
          column: name,
        },
      ),
    );
    return name;
  });
  const seen = new Map<string, number>();
  names.forEach((name, index) => {
    const first = seen.get(name);
    if (first !== undefined)
      throw new InputError(
        "table/duplicate-column",
        `${file}, row ${headerRow.row}: columns ${first + 1} and ${index + 1} are both named "${name}"; each name may stand once. Rename one of them.`,
        {place: {file, row: headerRow.row, column: name}},
      );
    seen.set(name, index);
  });
  return names;
}
