/** Some columns of a run of rows, numbers already read: what a walk over a large table takes of it. */
import type {TableBlock} from "./delimited.ts";
import {type DecimalMark, parseCell} from "./number-cell.ts";

/** Positions in the header, from zero. A column may stand in both. */
export interface AskedColumns {
  readonly numbers: readonly number[];
  readonly texts: readonly number[];
}

/** Arrays may be longer than `count`, and are written over when the next block is asked for. */
export interface ColumnBlock {
  readonly count: number;
  /** As an editor counts. */
  readonly rowNumbers: Float64Array;
  /** One array a column asked for; NaN: no value. */
  readonly numbers: readonly Float64Array[];
  readonly texts: readonly (readonly string[])[];
  /**
   * The first row, from zero in this block, with a cell among `numbers` that holds none; the numbers from there on
   * mean nothing. Undefined where all can be read. Whoever reads in order refuses it when they come to it.
   */
  readonly unread: {readonly at: number; readonly cells: readonly string[]} | undefined;
}

/** The columns out of rows of cells. */
export async function* columnsOfRows(
  blocks: AsyncIterable<TableBlock>,
  decimal: DecimalMark,
  asked: AskedColumns,
): AsyncGenerator<ColumnBlock> {
  for await (const {rowNumbers, rows} of blocks) {
    const numbers = asked.numbers.map(() => new Float64Array(rows.length));
    let unread: ColumnBlock["unread"];
    for (let r = 0; r < rows.length && unread === undefined; ++r)
      for (let c = 0; c < numbers.length; ++c) {
        const value = parseCell(rows[r]![asked.numbers[c]!]!, decimal);
        if (value === undefined) unread ??= {at: r, cells: asked.numbers.map((index) => rows[r]![index]!)};
        else numbers[c]![r] = value;
      }
    yield {
      count: rows.length,
      rowNumbers: Float64Array.from(rowNumbers),
      numbers,
      texts: asked.texts.map((index) => rows.map((cells) => cells[index]!)),
      unread,
    };
  }
}
