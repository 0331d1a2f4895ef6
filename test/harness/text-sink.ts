/** Keeps what a product writes. */
import type {TextSink} from "../../lib/products/product.ts";

export interface KeptText extends TextSink {
  text(): string;
  /** Length of the longest piece written at once. */
  longest(): number;
}

export function keptText(): KeptText {
  let text = "";
  let longest = 0;
  return {
    write: (piece) => {
      text += piece;
      longest = Math.max(longest, piece.length);
      return Promise.resolve();
    },
    text: () => text,
    longest: () => longest,
  };
}

/** Cells by column name, of a CSV text of this project; quoted cells may hold commas, quotes and line breaks. */
export function parsedCsv(text: string): Record<string, string>[] {
  const rows: string[][] = [];
  let row: string[] = [];
  let cell = "";
  let quoted = false;
  for (let i = 0; i < text.length; ++i) {
    const c = text[i]!;
    if (quoted) {
      if (c !== '"') cell += c;
      else if (text[i + 1] === '"') {
        cell += '"';
        ++i;
      } else quoted = false;
    } else if (c === '"') quoted = true;
    else if (c === ",") {
      row.push(cell);
      cell = "";
    } else if (c === "\n") {
      row.push(cell);
      rows.push(row);
      row = [];
      cell = "";
    } else cell += c;
  }
  const [header, ...body] = rows;
  return body.map((cells) => {
    if (cells.length !== header!.length)
      throw new Error(`${cells.length} cells under ${header!.length} columns: ${cells.join("|")}`);
    return Object.fromEntries(header!.map((name, k) => [name, cells[k]!]));
  });
}
