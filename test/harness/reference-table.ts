/** Tables of check values in test/reference: comma-separated, `#` comments with the source, one header row. */
import {readFileSync} from "node:fs";

export type ReferenceRow = Readonly<Record<string, string>>;

/** Rows of test/reference/`name`.csv, cells as text. Throws when the table is empty or a row is ragged. */
export function referenceTable(name: string): ReferenceRow[] {
  const text = readFileSync(new URL(`../reference/${name}.csv`, import.meta.url), "utf8");
  const lines = text.split("\n").filter((line) => line !== "" && !line.startsWith("#"));
  const header = (lines.shift() ?? "").split(",");
  if (lines.length === 0) throw new Error(`reference table ${name} has no rows`);
  return lines.map((line) => {
    const cells = line.split(",");
    if (cells.length !== header.length) throw new Error(`reference table ${name}: row "${line}" is ragged`);
    return Object.fromEntries(header.map((key, i) => [key, cells[i]]));
  });
}

/** The same with every cell a number. Throws on a cell that is none. */
export function numericTable(name: string): Readonly<Record<string, number>>[] {
  return referenceTable(name).map((row) =>
    Object.fromEntries(
      Object.entries(row).map(([key, cell]) => {
        const value = Number(cell);
        if (cell === "" || Number.isNaN(value)) throw new Error(`reference table ${name}: "${cell}" is no number`);
        return [key, value];
      }),
    ),
  );
}
