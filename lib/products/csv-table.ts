/** A table that is written as it grows: a header, then rows in blocks, so that a long line is never one string. */
import {csvLine} from "../formats/csv-text.ts";
import type {TextSink} from "./product.ts";

/** Characters gathered before they are handed on: large enough that a sink is called seldom. */
const BLOCK = 1 << 16;

export interface CsvTable {
  row(cells: readonly string[]): Promise<void>;
  /** Hands on what is still held; called at the end of a line, so that a sink is never far behind. */
  flush(): Promise<void>;
}

export function csvTable(sink: TextSink): CsvTable {
  let held = "";
  const flush = async (): Promise<void> => {
    if (held === "") return;
    const text = held;
    held = "";
    await sink.write(text);
  };
  return {
    row: async (cells) => {
      held += csvLine(cells);
      if (held.length >= BLOCK) await flush();
    },
    flush,
  };
}
