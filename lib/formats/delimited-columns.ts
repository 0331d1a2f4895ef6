/**
 * Some columns of a delimited text: plain rows from their bytes, a chunk at a time; from the first chunk on with a
 * row that is not plain, the rows that csv-parse makes, so that whatever is unusual or wrong is read and refused alike.
 * Memory: two chunks.
 */
import {type AskedColumns, type ColumnBlock, columnsOfRows} from "./column-block.ts";
import type {DelimitedReading, TableBlock} from "./delimited.ts";
import type {RowStart} from "./delimited-rows.ts";
import {type PlainRows, plainForm, readPlainRows} from "./plain-rows.ts";

const LF = 10;
/** Of nothing; the header is read for its place alone. */
const NOTHING: AskedColumns = {numbers: [], texts: []};

/** @param rowsFrom the rows below the header, or from the beginning of a row on */
export async function* delimitedColumns(
  reading: DelimitedReading,
  asked: AskedColumns,
  rowsFrom: (reading: DelimitedReading, from?: RowStart) => AsyncIterable<TableBlock>,
): AsyncGenerator<ColumnBlock> {
  const {source, encoding, delimiter, width, mark, chunk} = reading;
  const otherwise = (from?: RowStart) => columnsOfRows(rowsFrom(reading, from), mark, asked);
  if (delimiter === mark || hasTwice(asked.numbers) || hasTwice(asked.texts)) {
    yield* otherwise();
    return;
  }
  const form = plainForm(encoding.name, delimiter, mark, width, asked);
  const headerForm = plainForm(encoding.name, delimiter, mark, width, NOTHING);
  // The rest of a row that a chunk cut, the chunk, and a line feed where the last row has none.
  const held = Buffer.allocUnsafe(2 * chunk + 1);
  let holds = 0;
  let below = false;
  let line = 1;
  let into: PlainRows | undefined;
  for (let offset = encoding.start; offset < source.size; offset += chunk) {
    const room = held.subarray(holds, holds + chunk);
    const bytes = await source.read(offset, Math.min(chunk, source.size - offset), room);
    const started = offset - holds;
    const chunkEnd = offset + bytes.length;
    if (bytes.buffer !== room.buffer || bytes.byteOffset !== room.byteOffset) held.set(bytes, holds);
    holds += bytes.length;
    if (chunkEnd >= source.size && held[holds - 1] !== LF) held[holds++] = LF;
    const end = held.subarray(0, holds).lastIndexOf(LF) + 1;
    let at = 0;
    if (!below) {
      const header = readPlainRows(roomFor(1, NOTHING), held, 0, end, line, 1, headerForm);
      if (header === undefined || header.count === 0) {
        yield* otherwise();
        return;
      }
      ({end: at, line} = header);
    }
    const most = Math.ceil((end - at) / width) + 1;
    if (into === undefined || into.rowNumbers.length < most) into = roomFor(most, asked);
    const read = readPlainRows(into, held, at, end, line, most, form);
    // A row that takes a whole chunk is for the others, too.
    if (read === undefined || holds - end > chunk) {
      yield* otherwise({offset: started + at, row: line, chunkEnd});
      return;
    }
    if (read.count > 0) yield {count: read.count, ...into, unread: read.unread};
    line = read.line;
    held.copyWithin(0, end, holds);
    holds -= end;
    below = true;
  }
}

const hasTwice = (columns: readonly number[]): boolean => new Set(columns).size < columns.length;

const roomFor = (rows: number, {numbers, texts}: AskedColumns): PlainRows => ({
  rowNumbers: new Float64Array(rows),
  numbers: numbers.map(() => new Float64Array(rows)),
  texts: texts.map(() => []),
});
