import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {openGdf2} from "../../lib/formats/aseg-gdf2-read.ts";
import {gdf2Writer, type WrittenField} from "../../lib/formats/aseg-gdf2-write.ts";
import {csvNumber} from "../../lib/formats/csv-text.ts";
import {parseCell} from "../../lib/formats/number-cell.ts";
import {memorySource, memoryStore} from "./memory.ts";

type Cell = string | number | undefined;
const FIELDS: readonly WrittenField[] = [
  {name: "LINE", kind: "text", longName: "Line"},
  {name: "A", kind: "number", unit: "nT", longName: "First, of two: the one"},
  {name: "B", kind: "number", longName: "Second"},
];

async function written(rows: readonly (readonly Cell[])[], fields = FIELDS) {
  const writer = gdf2Writer(fields, memoryStore());
  for (const row of rows) await writer.row(row);
  const [definition, data] = [memoryStore(), memoryStore()];
  await writer.finish({definition, data});
  return {
    definition: Buffer.from(definition.bytes()).toString("utf8"),
    data: Buffer.from(data.bytes()).toString("utf8"),
  };
}

async function readBack({definition, data}: {definition: string; data: string}) {
  const table = await openGdf2({
    definition: memorySource(definition, "a.dfn"),
    data: memorySource(data, "a.dat"),
  });
  const rows: (readonly string[])[] = [];
  for await (const block of table.blocks()) rows.push(...block.rows);
  return {table, rows};
}

describe("a written pair", () => {
  test("has the narrowest formats that hold every cell", async () => {
    const pair = await written([
      ["10.0", 1.25, 7],
      ["Höf", -12.5, undefined],
    ]);
    expect(pair.definition).toBe(
      [
        "DEFN   ST=RECD,RT=COMM;RT:A4;COMMENTS:A76",
        "DEFN 1 ST=RECD,RT=;LINE:A5:NAME=Line",
        "DEFN 2 ST=RECD,RT=;A:F7.2:UNIT=nT,NAME=First of two the one",
        "DEFN 3 ST=RECD,RT=;B:I7:NULL=-99999,NAME=Second",
        "DEFN 4 ST=RECD,RT=;END DEFN",
        "",
      ].join("\n"),
    );
    expect(pair.data).toBe(" 10.0   1.25      7\n Höf -12.50 -99999\n");
    expect((await readBack(pair)).rows).toEqual([
      ["10.0", "1.25", "7"],
      ["Höf", "-12.50", ""],
    ]);
  });

  test("keeps tabs and line breaks in a name from ending a cell, and a name from becoming a comment", async () => {
    const {rows} = await readBack(await written([["COMM\ta\nb", 1, 2]]));
    expect(rows).toEqual([["COMM a b", "1", "2"]]);
  });

  test("whatever the numbers: fits its own widths and reads back equal to twelve digits", async () => {
    const number = fc.oneof(
      fc.double({min: -1e300, max: 1e300, noNaN: true}),
      fc.double({min: -1e7, max: 1e7, noNaN: true}),
      fc.integer({min: -200_000, max: 200_000}),
      fc.constantFrom(undefined, Number.NaN, Number.POSITIVE_INFINITY, -0, 5e-324, -1e300, 1e12, -99999.5),
    );
    const text = fc.string({unit: fc.constantFrom("a", "7", ".", " ", "é", "à", "-", "線"), maxLength: 12});
    // Two rows and more: a single one whose cells are all missing is no row.
    const rows = fc.array(fc.tuple(text, number, number), {minLength: 2, maxLength: 12});
    await fc.assert(
      fc.asyncProperty(rows, async (cells) => {
        const all: Cell[][] = [["L", 1, 1], ...cells.map((row) => [`L${row[0]}`, row[1], row[2]])];
        const pair = await written(all);
        const widths = [...pair.definition.matchAll(/:[AIFE](\d+)/g)].slice(2).map((found) => Number(found[1]));
        const total = widths.reduce((sum, width) => sum + width, 0);
        for (const line of pair.data.trimEnd().split("\n")) expect(Buffer.byteLength(line)).toBe(total);
        const {table, rows: got} = await readBack(pair);
        expect(table.notices).toEqual([]);
        expect(got).toHaveLength(all.length);
        got.forEach((row, r) => {
          expect(row[0]).toBe(String(all[r]![0]).trim());
          for (const c of [1, 2]) {
            const wanted = csvNumber(all[r]![c] as number | undefined);
            if (wanted === "") expect(row[c]).toBe("");
            else expect(Number(row[c]!.replace("D", "E"))).toBe(Number(wanted));
            expect(parseCell(row[c]!, ".")).not.toBeUndefined();
          }
        });
      }),
      {seed: 20, numRuns: 200},
    );
  });

  test("is the same for the same rows, however many, without holding them", async () => {
    const rows = Array.from({length: 20_000}, (_, i): Cell[] => [`L${i % 7}`, Math.sin(i), i / 8]);
    const [one, two] = [await written(rows), await written(rows)];
    expect(two).toEqual(one);
    const {rows: got} = await readBack(one);
    expect(got).toHaveLength(20_000);
    expect(Number(got[19_999]![2])).toBe(19_999 / 8);
  });

  test("a number in a field of text is text; text in a field of numbers is a defect", async () => {
    await expect(written([["L", "1", 2]])).rejects.toThrow(RangeError);
    await expect(written([["L", 1]])).rejects.toThrow(RangeError);
    expect(() => gdf2Writer([{name: "A:B", kind: "text", longName: ""}], memoryStore())).toThrow(RangeError);
  });
});
