/**
 * An ASEG-GDF2 pair as a table: the definition (.dfn) names the columns, the data (.dat) is
 * read row by row. The whole data file is checked against its definition when it is opened,
 * so that a row that does not fit stops the work before it begins.
 */
import {InputError} from "../errors.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import {type Definition, DOS_END, type ProjectionEntry, parseDefinition} from "./aseg-gdf2-definition.ts";
import {isOverflow} from "./aseg-gdf2-format.ts";
import {cutRow, type Layout, layoutsOf, type Misfit} from "./aseg-gdf2-layout.ts";
import type {ByteSource} from "./byte-source.ts";
import {columnsOfRows} from "./column-block.ts";
import type {Table, TableBlock} from "./delimited.ts";
import {detectEncoding, type TextEncoding} from "./text-encoding.ts";
import {type TextRow, textRows} from "./text-rows.ts";

/** The files of one survey in this form; the first two are needed. */
export interface Gdf2Files {
  readonly definition: ByteSource;
  readonly data: ByteSource;
  /** Words about the data. */
  readonly description?: ByteSource | undefined;
  /** Its coordinate system, when that stands in a file of its own. */
  readonly projection?: ByteSource | undefined;
}

export interface Gdf2Table extends Table {
  readonly longNames: readonly (string | undefined)[];
  readonly units: readonly (string | undefined)[];
  /** The file that defines the columns. */
  readonly definition: string;
  readonly projection: readonly ProjectionEntry[];
  /** Words about the data; empty when there are none. */
  readonly description: string;
}

/** A definition of hundreds of fields takes some ten thousand bytes. */
const WORDS_LIMIT = 4 << 20;
/** Rows looked at to find how they are cut. */
const SAMPLE = 1000;

/**
 * @throws {InputError} `gdf2/row-does-not-fit`, `gdf2/no-row`, `gdf2/definition-too-large`, those of
 *   {@link parseDefinition}, and `table/empty-file`, `table/utf16`, `table/not-text`, `table/row-too-large`
 */
export async function openGdf2(files: Gdf2Files): Promise<Gdf2Table> {
  const projection = files.projection && {text: await wholeText(files.projection), file: files.projection.name};
  const definition = parseDefinition(await wholeText(files.definition), files.definition.name, projection);
  const {data} = files;
  const encoding = await detectEncoding(data);
  const layout = await layoutFor(definition, data, encoding);
  const reading: Reading = {definition, data, encoding, layout};
  const notices = await checkRows(reading);
  const {columns} = layout;
  return {
    name: data.name,
    header: columns.map(({name}) => name),
    longNames: columns.map(({field}) => field.longName),
    units: columns.map(({field}) => field.unit),
    decimal: ".",
    notices,
    blocks: () => blocks(reading),
    columns: (asked) => columnsOfRows(blocks(reading), ".", asked),
    definition: definition.file,
    projection: definition.projection,
    description: files.description === undefined ? "" : withoutRecordNames(await wholeText(files.description)),
  };
}

interface Reading {
  readonly definition: Definition;
  readonly data: ByteSource;
  readonly encoding: TextEncoding;
  readonly layout: Layout;
}

async function wholeText(source: ByteSource): Promise<string> {
  if (source.size > WORDS_LIMIT)
    throw new InputError(
      "gdf2/definition-too-large",
      `${source.name} holds ${source.size} bytes; a file of words about the data, of at most ${WORDS_LIMIT}, was needed. Check that data and definition were not exchanged.`,
      {place: {file: source.name}},
    );
  const {name, start} = await detectEncoding(source);
  return Buffer.from(await source.read(start, source.size - start)).toString(name);
}

/** Descriptions are lines "COMM some words". */
const withoutRecordNames = (text: string): string =>
  text
    .split(/\r\n|\n|\r/)
    .map((line) =>
      line
        .replace("\u001a", "")
        .replace(/^COMM\b/, "")
        .trim(),
    )
    .join("\n")
    .trim();

/** Rows of data: neither blank, nor of another record than the data. */
async function* dataRows(
  {otherRecords, fields, recordType}: Definition,
  data: ByteSource,
  encoding: TextEncoding,
): AsyncGenerator<readonly TextRow[]> {
  // Where a row may begin with text, "COMM" is a record only as a word of its own.
  const word = recordType === undefined && fields[0]!.format.kind === "A" ? "(?![A-Za-z0-9])" : "";
  const others = new RegExp(`^(?:${otherRecords.map(escaped).join("|")})${word}`, "i");
  for await (const bunch of textRows(data, encoding.start))
    yield bunch.filter(({text}) => !["", DOS_END].includes(text.trim()) && !others.test(text));
}

const escaped = (text: string): string => text.replaceAll(/[^A-Za-z0-9]/g, "\\$&");

/**
 * The first layout that fits half the rows of a sample, since a row may have outgrown its widths; else the
 * one that fits most. Where white space would do as well, a cut by width has the same cells: see the layout.
 */
async function layoutFor(definition: Definition, data: ByteSource, encoding: TextEncoding): Promise<Layout> {
  const layouts = layoutsOf(definition);
  const fitting = layouts.map(() => 0);
  let rows = 0;
  sampling: for await (const bunch of dataRows(definition, data, encoding))
    for (const {text} of bunch) {
      layouts.forEach((layout, i) => {
        if (cutRow(text, layout, []) === undefined) fitting[i]!++;
      });
      if (++rows === SAMPLE) break sampling;
    }
  if (rows === 0)
    throw new InputError(
      "gdf2/no-row",
      `${data.name} holds no row of data; at least one was needed. Check that the file was saved or copied whole.`,
      {place: {file: data.name}},
    );
  const half = fitting.findIndex((count) => 2 * count >= rows);
  return layouts[half < 0 ? fitting.indexOf(Math.max(...fitting)) : half]!;
}

/** Cuts a row by the layout of its file; by white space where a number outgrew its width. */
function cellsOf(
  {text, row, ended}: TextRow,
  {definition, data, encoding, layout}: Reading,
): {readonly cells: string[]; readonly by: Layout["by"]} {
  const cells: string[] = [];
  let misfit = cutRow(text, layout, cells);
  let by = layout.by;
  if (misfit !== undefined && layout.by === "width") {
    // Widths count bytes; a file whose widths count letters is read as well, if its rows then fit.
    const letters = encoding.name === "utf8" && HIGH.test(text) ? cutRow(utf8(text), layout, cells) : misfit;
    if (letters === undefined) return {cells, by};
    // The last row of a file that was cut off has fewer digits, not other widths.
    if (ended && cutRow(text, {...layout, by: "white space"}, cells) === undefined) {
      misfit = undefined;
      by = "white space";
    }
  }
  if (misfit !== undefined) throw unfit(misfit, {row, file: data.name}, definition, ended);
  if (encoding.name === "utf8" && HIGH.test(text))
    for (let c = 0; c < cells.length; ++c) if (HIGH.test(cells[c]!)) cells[c] = utf8(cells[c]!);
  return {cells, by};
}

const HIGH = /[\u0080-\u00ff]/;
const utf8 = (text: string): string => Buffer.from(text, "latin1").toString("utf8");

function unfit(
  {found, needed, field}: Misfit,
  place: {file: string; row: number},
  {file}: Definition,
  ended: boolean,
): InputError {
  const where = field === undefined ? file : `${file}, row ${field.row}`;
  const cut = ended ? "" : " It is the last row, and no line break ends it: the file may have been cut off.";
  return new InputError(
    "gdf2/row-does-not-fit",
    `${place.file}, row ${place.row} does not fit its definition: ${found} where ${where} asks for ${needed}; nor do its words between white space fit.${cut} Correct the widths in ${file}, or that row.`,
    {place: field === undefined ? place : {...place, column: field.name}},
  );
}

async function* blocks(reading: Reading): AsyncGenerator<TableBlock> {
  const {definition, data, encoding} = reading;
  for await (const bunch of dataRows(definition, data, encoding)) {
    const rowNumbers: number[] = [];
    const rows: (readonly string[])[] = [];
    for (const textRow of bunch) {
      const {cells} = cellsOf(textRow, reading);
      if (cells.every((cell) => cell === "")) continue;
      rowNumbers.push(textRow.row);
      rows.push(cells);
    }
    if (rows.length > 0) yield {rowNumbers, rows};
  }
}

/** Walks every row once; what is odd but can be read is told. */
async function checkRows(reading: Reading): Promise<Notice[]> {
  const {definition, data, encoding, layout} = reading;
  let outgrown = 0;
  let firstOutgrown = 0;
  let overflowed = 0;
  let firstOverflowed = 0;
  for await (const bunch of dataRows(definition, data, encoding))
    for (const textRow of bunch) {
      const {by} = cellsOf(textRow, reading);
      if (by !== layout.by && outgrown++ === 0) firstOutgrown = textRow.row;
      if (textRow.text.includes("*") && textRow.text.split(/\s+/).some(isOverflow) && overflowed++ === 0)
        firstOverflowed = textRow.row;
    }
  const notices: Notice[] = [];
  if (layout.by === "white space")
    notices.push(
      doubt(
        "gdf2/widths-differ",
        `${data.name}: the widths in ${definition.file} are not those of the rows, which are cut at white space instead; every row has as many words as there are fields, and each fits its format. Correct the widths to be sure.`,
        {file: definition.file},
      ),
    );
  if (outgrown > 0)
    notices.push(
      doubt(
        "gdf2/outgrown",
        `${data.name}: ${outgrown} rows (the first is row ${firstOutgrown}) do not keep the widths of ${definition.file} and are cut at white space instead. Look at them to be sure.`,
        {file: data.name, row: firstOutgrown},
      ),
    );
  if (overflowed > 0)
    notices.push(
      remark(
        "gdf2/overflow",
        `${data.name}: ${overflowed} rows (the first is row ${firstOverflowed}) hold asterisks in place of a number too long for its field; that is no value.`,
        {file: data.name, row: firstOverflowed},
      ),
    );
  if (definition.recordType !== undefined && layout.recordType === undefined)
    notices.push(
      remark(
        "gdf2/no-record-type",
        `${definition.file} begins each row with a record type (${definition.recordType.name}); the rows of ${data.name} are without it.`,
        {file: definition.file, row: definition.recordType.row},
      ),
    );
  return notices;
}
