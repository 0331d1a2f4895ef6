/** Columns of numbers from a table without quotes, for comparing answers. */
import {readFileSync} from "node:fs";

/** NaN where a cell is empty or spelt nan. */
export function columnsOf(file: string, names: readonly string[]): readonly Float64Array[] {
  const [header, ...rows] = readFileSync(file, "utf8")
    .trimEnd()
    .split("\n")
    .map((row) => row.split(","));
  return names.map((name) => {
    const place = header!.indexOf(name);
    if (place < 0) throw new Error(`${file} has no column ${name}`);
    return Float64Array.from(rows, (row) => (row[place] === "" ? Number.NaN : Number(row[place])));
  });
}

/** The largest |a − b| over the largest |b|; Infinity where lengths or empty cells differ. */
export function relativeDifference(a: Float64Array, b: Float64Array): number {
  if (a.length !== b.length) return Infinity;
  let most = 0;
  let scale = 0;
  for (let i = 0; i < a.length; ++i) {
    if (Number.isNaN(a[i]) !== Number.isNaN(b[i])) return Infinity;
    if (Number.isNaN(a[i])) continue;
    most = Math.max(most, Math.abs(a[i] - b[i]));
    scale = Math.max(scale, Math.abs(b[i]));
  }
  return most === 0 ? 0 : most / scale;
}
