/** Lines of a text file, a chunk of bytes at a time; memory: one chunk and the lines in it. */
import {InputError} from "../errors.ts";
import type {ByteSource} from "./byte-source.ts";

/** Bytes at a time, as for delimited text. */
const CHUNK = 1 << 18;
/** More than this in one line is damage, not data. */
const LINE_LIMIT = 1 << 20;

export interface TextRow {
  /** As an editor counts: 1 is the first line of the file. */
  readonly row: number;
  /** Without the line break. One character a byte. */
  readonly text: string;
  /** False for a last line that no line break ends. */
  readonly ended: boolean;
}

/**
 * Every line in bunches, blank ones included; CR LF, LF and CR end a line. Each byte becomes the
 * character of the same code, so that a place in a line is a place in the file whatever the encoding.
 *
 * @param start bytes to skip, a byte-order mark
 * @throws {InputError} `table/row-too-large`
 */
export async function* textRows(source: ByteSource, start: number): AsyncGenerator<readonly TextRow[]> {
  let row = 1;
  let held = "";
  for (let offset = start; offset < source.size; offset += CHUNK) {
    const bytes = await source.read(offset, Math.min(CHUNK, source.size - offset));
    const last = offset + CHUNK >= source.size;
    let text = held + Buffer.from(bytes).toString("latin1");
    // A CR at the end of a chunk may be half of a CR LF.
    const halved = !last && text.endsWith("\r");
    if (halved) text = text.slice(0, -1);
    const lines = text.split(/\r\n|\n|\r/);
    held = lines.pop()! + (halved ? "\r" : "");
    if (held.length > LINE_LIMIT)
      throw new InputError(
        "table/row-too-large",
        `${source.name}, row ${row + lines.length}: the row runs past ${LINE_LIMIT} bytes, where rows of readings were needed. Check that the file is the one that was meant.`,
        {place: {file: source.name, row: row + lines.length}},
      );
    const rows = lines.map((line, i): TextRow => ({row: row + i, text: line, ended: true}));
    row += lines.length;
    if (last && held !== "") rows.push({row, text: held, ended: false});
    if (rows.length > 0) yield rows;
  }
}
