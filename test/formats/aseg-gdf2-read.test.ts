import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {InputError} from "../../lib/errors.ts";
import {type Gdf2Table, openGdf2} from "../../lib/formats/aseg-gdf2-read.ts";
import {failure, memorySource} from "./memory.ts";

const open = (definition: string, data: string | Uint8Array): Promise<Gdf2Table> =>
  openGdf2({definition: memorySource(definition, "a.dfn"), data: memorySource(data, "a.dat")});

async function rowsOf(table: Gdf2Table): Promise<{rows: (readonly string[])[]; numbers: number[]}> {
  const rows: (readonly string[])[] = [];
  const numbers: number[] = [];
  for await (const block of table.blocks()) {
    rows.push(...block.rows);
    numbers.push(...block.rowNumbers);
  }
  return {rows, numbers};
}

const read = async (definition: string, data: string | Uint8Array) => {
  const table = await open(definition, data);
  return {table, ...(await rowsOf(table)), codes: table.notices.map(({code}) => code)};
};

/** A definition in the plainest of its spellings. */
const defn = (...fields: string[]): string =>
  `${fields.map((field, i) => `DEFN ${i + 1} ST=RECD,RT=;${field}\n`).join("")}DEFN ${fields.length + 1} ST=RECD,RT=;END DEFN\n`;

describe("every spelling of a definition that occurs", () => {
  test("ST=RECORD and RECD, RT empty and DATA, both separators, both cases, COMM records, any numbering", async () => {
    const definition = [
      "DEFN   ST=RECD,RT=COMM;RT:A4;COMMENTS:A76",
      "DEFN 0 ST=RECORD,RT=DATA;LINE:I6:NAME=Flight line",
      "DEFN 1 ST=RECORD,RT=DATA;EAST_MGA:f11.2:UNIT=METRES,NULL=-99999.00,NAME=Easting, to the antenna",
      "defn ST=RECD,RT=;LAT:F12.6:NULL=-999.999999:UNIT=dega:NAME=GDA_LAT",
      "DEFN 3 ST=RECD,RT=; COUNT : e12.4 : COMMENT=as counted",
      "DEFN 4 ST=RECD,RT=;CLASS:a3",
      "DEFN 5 ST=RECD,RT=;END DEFN",
      "",
    ].join("\r\n");
    const data = [
      "COMM a comment in the data",
      "  1001  500000.25  -33.123456  1.2345E+02 ab",
      "  1001  -99999.00 -999.999999 -1.0000D-03  c",
      "",
    ].join("\r\n");
    const {table, rows, numbers, codes} = await read(definition, data);
    expect(table.header).toEqual(["LINE", "EAST_MGA", "LAT", "COUNT", "CLASS"]);
    expect(table.longNames).toEqual(["Flight line", "Easting", "GDA_LAT", undefined, undefined]);
    expect(table.units).toEqual([undefined, "METRES", "dega", undefined, undefined]);
    expect(rows).toEqual([
      ["1001", "500000.25", "-33.123456", "1.2345E+02", "ab"],
      ["1001", "", "", "-1.0000D-03", "c"],
    ]);
    expect(numbers).toEqual([2, 3]);
    expect(codes).toEqual([]);
  });

  test("repeat counts make columns NAME.1, NAME.2 …", async () => {
    const {table, rows} = await read(defn("L:I3", "EM:3F7.2:UNIT=nT:NULL=-9.99"), "  1   1.25  -9.99   3.50\n");
    expect(table.header).toEqual(["L", "EM.1", "EM.2", "EM.3"]);
    expect(table.units).toEqual([undefined, "nT", "nT", "nT"]);
    expect(rows).toEqual([["1", "1.25", "", "3.50"]]);
  });

  const packed = "DEFN 1 ST=RECD,RT=DATA;RT:A4;FLTLINE:F10.1\nDEFN 2 ST=RECD,RT=DATA;Z:F8.2\n";
  test("a record type in the definition, and in the data", async () => {
    const {table, rows, codes} = await read(packed, "DATA    1001.0    1.25\nDATA    1001.0    2.25\n");
    expect(table.header).toEqual(["FLTLINE", "Z"]);
    expect(rows).toEqual([
      ["1001.0", "1.25"],
      ["1001.0", "2.25"],
    ]);
    expect(codes).toEqual([]);
  });

  test("a record type in the definition, but not in the data", async () => {
    const {rows, codes} = await read(packed, "    1001.0    1.25\n    1001.0    2.25\n");
    expect(rows).toEqual([
      ["1001.0", "1.25"],
      ["1001.0", "2.25"],
    ]);
    expect(codes).toEqual(["gdf2/no-record-type"]);
  });

  test("a data record of another name, with rows of other records left out", async () => {
    const definition = "DEFN 1 ST=RECD,RT=GRAV;RT:A4;G:F8.2\nDEFN ST=RECD,RT=COMM;RT:A4;COMMENTS:A76\n";
    const {rows} = await read(definition, "GRAV    1.25\nCOMM   99.00\nGRAV    2.25\n");
    expect(rows).toEqual([["1.25"], ["2.25"]]);
  });

  test("PROJ records with values in NAME=, or in a PROJ line, or in a file beside", async () => {
    const fields = "DEFN 1 ST=RECD,RT=PROJ;RT:A4\nDEFN 2 ST=RECD,RT=PROJ;COORDSYS:A40";
    const axis = "DEFN 3 ST=RECD,RT=PROJ;MAJ_AXIS:D12.1:UNIT=m";
    const named = `${fields}:NAME=GDA94 / MGA zone 53, Projection name\n${axis},NAME=6378137.0, Major axis\n${defn("Z:F6.1")}`;
    const expected = [
      {name: "COORDSYS", value: "GDA94 / MGA zone 53"},
      {name: "MAJ_AXIS", value: "6378137.0"},
    ];
    expect((await open(named, "   1.0\n")).projection).toEqual(expected);
    const line = `PROJ${"GDA94 / MGA zone 53".padEnd(40)}${"6378137.0".padStart(12)}\n`;
    expect((await open(`${fields}\n${axis}\n${line}${defn("Z:F6.1")}`, "   1.0\n")).projection).toEqual(expected);
    const beside = await openGdf2({
      definition: memorySource(defn("Z:F6.1"), "a.dfn"),
      data: memorySource("   1.0\n", "a.dat"),
      projection: memorySource(`${fields}\n${axis}\n${line}`, "a.prj"),
      description: memorySource("COMM Flown in two days\nCOMM by night\n", "a.des"),
    });
    expect(beside.projection).toEqual(expected);
    expect(beside.description).toBe("Flown in two days\nby night");
  });

  test("letters outside ASCII, whether widths count bytes or letters, and whatever the encoding", async () => {
    const definition = defn("NAME:A6", "Z:F6.1");
    // In UTF-8 six bytes hold "Höfà", of which the last is 0xA0, a space in Latin-1.
    expect((await read(definition, "Höfà   1.0\n")).rows).toEqual([["Höfà", "1.0"]]);
    expect((await read(definition, "Höfà     1.0\n")).rows).toEqual([["Höfà", "1.0"]]);
    expect((await read(definition, Buffer.from("Höfà     1.0\n", "latin1"))).rows).toEqual([["Höfà", "1.0"]]);
  });
});

describe("widths are verified", () => {
  test("numbers side by side without a blank are cut by width", async () => {
    const {rows, codes} = await read(defn("A:F6.2", "B:F7.1"), "123.45-9999.9\n  1.25    2.5\n");
    expect(rows).toEqual([
      ["123.45", "-9999.9"],
      ["1.25", "2.5"],
    ]);
    expect(codes).toEqual([]);
  });

  test.each([
    ["the first too narrow by one", defn("A:F7.2", "B:F8.2", "C:F8.2")],
    ["the first too wide by one", defn("A:F9.2", "B:F8.2", "C:F8.2")],
    ["the middle too narrow", defn("A:F8.2", "B:F6.2", "C:F8.2")],
    ["all too narrow", defn("A:F5.2", "B:F5.2", "C:F5.2")],
    ["the last too narrow", defn("A:F8.2", "B:F8.2", "C:F6.2")],
    ["the last too wide", defn("A:F8.2", "B:F8.2", "C:F9.2")],
  ])("widths that are off fall back to white space: %s", async (_, definition) => {
    const {rows, codes} = await read(definition, "    1.25   23.50 -999.75\n  123.25 1234.50   99.75\n");
    expect(rows).toEqual([
      ["1.25", "23.50", "-999.75"],
      ["123.25", "1234.50", "99.75"],
    ]);
    expect(codes).toEqual(["gdf2/widths-differ"]);
  });

  test("an integer is not cut in two by a width that is off by one", async () => {
    const {rows, codes} = await read(defn("L:I5", "NAME:A4", "Z:F7.2"), " 10012 ab    1.25\n 10013 cd    2.25\n");
    expect(rows).toEqual([
      ["10012", "ab", "1.25"],
      ["10013", "cd", "2.25"],
    ]);
    expect(codes).toEqual(["gdf2/widths-differ"]);
  });

  test("a single row that outgrew its widths is read, with a doubt", async () => {
    const {rows, codes, table} = await read(defn("A:F6.2", "B:F6.2"), "  1.25  2.50\n12345.25  2.50\n  3.25  4.50\n");
    expect(rows[1]).toEqual(["12345.25", "2.50"]);
    expect(codes).toEqual(["gdf2/outgrown"]);
    expect(table.notices[0]!.place).toEqual({file: "a.dat", row: 2});
  });

  test("blank cells, asterisks and the field's own null are no value; other nulls are numbers", async () => {
    const data = "  1.25      \n******  2.50\n -9.90  3.50\n -9.90 -9.90\n";
    const {rows, codes} = await read(defn("A:F6.2:NULL=-9.9", "B:F6.2"), data);
    expect(rows).toEqual([
      ["1.25", ""],
      ["", "2.50"],
      ["", "3.50"],
      ["", "-9.90"],
    ]);
    expect(codes).toEqual(["gdf2/overflow"]);
  });

  test.each<[string, string, string, Awaited<ReturnType<typeof failure>>["row"], RegExp]>([
    [
      "text in a number",
      defn("A:F6.2", "B:F6.2"),
      "  1.25  2.50\n  1.25   abc\n",
      2,
      /"abc" in characters 7 to 12 where a\.dfn, row 2 asks for B as F6\.2/,
    ],
    ["too few fields", defn("A:F6.2", "B:F6.2"), "  1.25  2.50\n  1.25\n", 2, /the row ends after 6 characters/],
    [
      "too many fields",
      defn("A:F6.2", "B:F6.2"),
      "  1.25  2.50  3.50\n",
      1,
      /"3\.50" after character 12 .* widths add up to 12/,
    ],
    ["a real in an integer", defn("A:I6", "B:F6.2"), "  1.25  2.50\n", 1, /"1\.25" in characters 1 to 6 .* A as I6/],
    ["a last row cut off", defn("A:F6.2", "B:F6.2"), "  1.25  2.50\n  1.25  2.5", 2, /may have been cut off/],
  ])("a row that does not fit is refused by name: %s", async (_, definition, data, row, words) => {
    const refused = await failure(() => open(definition, data));
    expect(refused).toMatchObject({code: "gdf2/row-does-not-fit", row});
    expect(refused.message).toMatch(words);
    expect(refused.message).toMatch(new RegExp(`^a\\.dat, row ${row} `));
  });

  test("a row deep in a long file is checked on opening, across chunks and line ends", async () => {
    const line = (i: number) => `${String(i).padStart(8)}${(i / 4).toFixed(2).padStart(12)}\r\n`;
    const lines = Array.from({length: 30_000}, (_, i) => line(i));
    const {rows, numbers} = await read(defn("N:I8", "Z:F12.2"), lines.join(""));
    expect(rows).toHaveLength(30_000);
    expect(rows[29_999]).toEqual(["29999", "7499.75"]);
    expect(numbers[29_999]).toBe(30_000);
    lines[29_500] = "   29500     bad\r\n";
    expect(await failure(() => open(defn("N:I8", "Z:F12.2"), lines.join("")))).toMatchObject({row: 29_501});
  });
});

describe("whatever the files hold", () => {
  const kinds = fc.constantFrom("F", "I", "E", "A");
  const field = fc.record({kind: kinds, gap: fc.integer({min: 1, max: 3}), off: fc.integer({min: -2, max: 2})});

  test("widths that are off give the cells as they stand, or a refusal, never a number cut in two", async () => {
    const rows = fc.array(
      fc.array(fc.option(fc.integer({min: -99_999, max: 99_999}), {freq: 6}), {minLength: 5, maxLength: 5}),
      {
        minLength: 1,
        maxLength: 6,
      },
    );
    let accepted = 0;
    await fc.assert(
      fc.asyncProperty(fc.array(field, {minLength: 5, maxLength: 5}), rows, async (fields, numbers) => {
        const text = (kind: string, value: number | null): string =>
          value === null
            ? ""
            : kind === "F"
              ? (value / 100).toFixed(2)
              : kind === "I"
                ? `${value}`
                : kind === "E"
                  ? value.toExponential(3).toUpperCase()
                  : `n${value}`;
        // A text may hold blanks: beside a blank cell it could be two cells, and nothing would show.
        const texts = fields.some(({kind}) => kind === "A");
        const cells = numbers.map((row) => row.map((value, c) => text(fields[c]!.kind, texts ? (value ?? 7) : value)));
        // Something in every row and column: a blank row is none, a blank column has no place.
        fc.pre(cells.every((row) => row.some((cell) => cell !== "")));
        fc.pre(fields.every((_, c) => cells.some((row) => row[c] !== "")));
        const widths = fields.map(({gap}, c) => gap + Math.max(...cells.map((row) => row[c]!.length)));
        const data = cells.map((row) => `${row.map((cell, c) => cell.padStart(widths[c]!)).join("")}\n`).join("");
        const definition = defn(
          ...fields.map(({kind, off}, c) => {
            const decimals = kind === "F" ? ".2" : kind === "E" ? ".3" : "";
            return `F${c}:${kind}${Math.max(1, widths[c]! + off)}${decimals}`;
          }),
        );
        try {
          const {rows: got} = await read(definition, data);
          ++accepted;
          expect(got).toEqual(cells);
        } catch (error) {
          if (!(error instanceof InputError)) throw error;
        }
      }),
      {seed: 41, numRuns: 2000},
    );
    expect(accepted).toBeGreaterThan(500);
  });

  test("damage is refused or read, and is never a defect", async () => {
    const definition = defn("L:I4", "NAME:A6", "Z:3F8.2:UNIT=nT,NULL=-99.99").replace("RT=;L", "RT=;RT:A4;L");
    const data = "DATA   1 ab       1.25    2.50  -99.99\nDATA   2 cd       1.25    2.50    3.50\n";
    const damage = fc.array(
      fc.tuple(fc.nat(200), fc.constantFrom("", ":", ";", ",", "=", " ", "9", "\n", "é", "*", "DEFN")),
      {
        minLength: 1,
        maxLength: 4,
      },
    );
    const damaged = (text: string, changes: [number, string][]): string =>
      changes.reduce((now, [at, put]) => now.slice(0, at % now.length) + put + now.slice((at % now.length) + 1), text);
    let refused = 0;
    await fc.assert(
      fc.asyncProperty(damage, damage, fc.boolean(), async (first, second, both) => {
        try {
          await read(damaged(definition, first), both ? damaged(data, second) : data);
        } catch (error) {
          if (!(error instanceof InputError)) throw error;
          ++refused;
        }
      }),
      {seed: 43, numRuns: 2000},
    );
    expect(refused).toBeGreaterThan(500);
  });
});

describe("a definition that is none", () => {
  test.each([
    ["a table", "line,x,y\n1,2,3\n", "gdf2/not-a-definition", 1],
    ["an unknown format", defn("A:Q6"), "gdf2/format", 1],
    ["a field without a format", defn("A:I6", "FLTLINE"), "gdf2/format", 2],
    ["a width of zero", defn("A:I0"), "gdf2/format", 1],
    ["a name twice", defn("A:I6", "A:I6"), "gdf2/duplicate-field", 2],
    ["no field", "DEFN 1 ST=RECD,RT=;END DEFN\n", "gdf2/no-field", undefined],
    ["two kinds of record", "DEFN 1 ST=RECD,RT=ONE;A:I6\nDEFN 1 ST=RECD,RT=TWO;A:I6\n", "gdf2/several-records", 2],
  ])("%s", async (_, definition, code, row) => {
    expect(await failure(() => open(definition, "     1\n"))).toMatchObject({code, row});
  });

  test("no row of data", async () => {
    expect(await failure(() => open(defn("A:I6"), "COMM nothing\n\n"))).toMatchObject({code: "gdf2/no-row"});
  });
});
