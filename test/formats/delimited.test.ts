import fc from "fast-check";
import {describe, expect, test} from "vitest";
import type {ByteSource} from "../../lib/formats/byte-source.ts";
import {csvCell, csvLine} from "../../lib/formats/csv-text.ts";
import {openTable, type Table} from "../../lib/formats/delimited.ts";
import {CELL_LIMIT, ROW_LIMIT} from "../../lib/formats/delimited-rows.ts";
import {failure, memorySource} from "./memory.ts";

const open = (content: string | Uint8Array) => openTable(memorySource(content));
async function contents(table: Table) {
  const rowNumbers: number[] = [];
  const rows: (readonly string[])[] = [];
  for await (const block of table.blocks()) {
    for (const row of block.rowNumbers) rowNumbers.push(row);
    for (const cells of block.rows) rows.push(cells);
  }
  return {rowNumbers, rows};
}
const codes = (table: Table) => table.notices.map((notice) => notice.code);

describe("what is found out", () => {
  for (const [name, delimiter] of [
    ["comma", ","],
    ["semicolon", ";"],
    ["tab", "\t"],
    ["bar", "|"],
  ] as const)
    for (const [end, newline] of [
      ["LF", "\n"],
      ["CRLF", "\r\n"],
      ["CR", "\r"],
    ] as const)
      test(`${name} and ${end}`, async () => {
        const text = [
          ["x", "value", "line"],
          ["1", "2.5", "L 1"],
          ["2", "", "L 1"],
        ]
          .map((cells) => cells.join(delimiter) + newline)
          .join("");
        const table = await open(text);
        expect([table.header, table.delimiter, table.decimal]).toEqual([["x", "value", "line"], delimiter, "."]);
        expect(await contents(table)).toEqual({
          rowNumbers: [2, 3],
          rows: [
            ["1", "2.5", "L 1"],
            ["2", "", "L 1"],
          ],
        });
      });

  test("a byte-order mark is no part of the first name", async () => {
    expect((await open("\ufeffx,y\n1,2\n")).header).toEqual(["x", "y"]);
  });
  test("a delimiter inside quotes does not count", async () => {
    const table = await open('"a;b;c;d",y\n1,2\n');
    expect([table.delimiter, table.header]).toEqual([",", ["a;b;c;d", "y"]]);
  });
  test("one column", async () => {
    expect(await contents(await open("value\n1\n2\n"))).toEqual({rowNumbers: [2, 3], rows: [["1"], ["2"]]});
  });
  test("blank lines, rows of empty cells and a missing last newline", async () => {
    const table = await open("\n\nx,y\n\n1,2\n,\n\n3,4");
    expect(await contents(table)).toEqual({
      rowNumbers: [5, 8],
      rows: [
        ["1", "2"],
        ["3", "4"],
      ],
    });
  });
  test("white space around cells", async () => {
    expect((await contents(await open(' x , y \n 1 , " b "\n'))).rows).toEqual([["1", " b "]]);
    expect((await contents(await open("x\ty\tz\n1\t\t 3\n"))).rows).toEqual([["1", "", "3"]]);
  });
  for (const newline of ["\n", "\r\n"])
    test(`rows are numbered by the line they begin on (${JSON.stringify(newline)})`, async () => {
      const table = await open(["a,b", '"one', 'two",1', "", "x,2", ""].join(newline));
      expect(await contents(table)).toEqual({
        rowNumbers: [2, 5],
        rows: [
          [`one${newline}two`, "1"],
          ["x", "2"],
        ],
      });
    });
  test("a decimal comma", async () => {
    const table = await open("x;y\n1,5;2\n");
    expect([table.decimal, codes(table)]).toEqual([",", []]);
  });
  test("both decimal marks raise a doubt and the commoner one is taken", async () => {
    const table = await open("x;y\n1,5;2.25\n1,25;7\n");
    expect([table.decimal, codes(table)]).toEqual([",", ["table/mixed-decimal"]]);
  });
  test("commas that could separate thousands raise a doubt", async () => {
    const table = await open("x;y\n1,234;2\n");
    expect([table.decimal, codes(table)]).toEqual([",", ["table/comma-or-thousands"]]);
  });
  test("Latin-1 is read, with a doubt", async () => {
    const table = await open(Buffer.from("Höhe,wert\n1,é\n", "latin1"));
    expect([table.header, codes(table)]).toEqual([["Höhe", "wert"], ["table/latin1"]]);
    expect((await contents(table)).rows).toEqual([["1", "é"]]);
  });
  test("a cell in Latin-1 keeps the brackets and strokes it begins with", async () => {
    const table = await open(Buffer.from("a,b,c,d\n(12),_3,/4,é\n", "latin1"));
    expect((await contents(table)).rows).toEqual([["(12)", "_3", "/4", "é"]]);
  });
  test("Latin-1 far behind the header is found, too", async () => {
    const table = await open(
      Buffer.concat([Buffer.from("a\n"), Buffer.alloc(3 << 20, "abc\n"), Buffer.from("é\n", "latin1")]),
    );
    expect(codes(table)).toEqual(["table/latin1"]);
  });
  test("UTF-8 characters across chunk borders stay whole", async () => {
    // 1.2 MB: more than one chunk of either pass; the shift moves the border through the characters.
    const rows = 120_000;
    for (const shift of ["", "a", "ab"]) {
      const table = await open(`${shift}h\n${"é€😀\n".repeat(rows)}`);
      expect(codes(table)).toEqual([]);
      let count = 0;
      for await (const block of table.blocks()) {
        count += block.rows.length;
        expect(block.rows.every((cells) => cells[0] === "é€😀")).toBe(true);
      }
      expect(count).toBe(rows);
    }
  });
  test("a column without a name is called by its position", async () => {
    const table = await open(",y\n1,2\n");
    expect([table.header, codes(table)]).toEqual([["column 1", "y"], ["table/unnamed-column"]]);
  });
  test("blocks can be read again, and reading can stop early", async () => {
    const table = await open(`x\n${"1\n".repeat(150_000)}`);
    for await (const block of table.blocks()) {
      expect(block.rows.length).toBeLessThan(150_000);
      break;
    }
    const again = await contents(table);
    expect([again.rows.length, again.rowNumbers.at(-1)]).toEqual([150_000, 150_001]);
  });
});

describe("what is refused", () => {
  const cases: readonly (readonly [string, string | Uint8Array, string, number | undefined, RegExp])[] = [
    ["an empty file", "", "table/empty-file", undefined, /lines\.csv is empty/],
    ["only a byte-order mark", "\ufeff", "table/empty-file", undefined, /byte-order mark/],
    ["only blank lines", "\n\n \n", "table/empty-file", undefined, /blank lines/],
    ["a header only", "x,y\n", "table/header-only", 1, /row 1.*at least one/],
    ["UTF-16 with a mark", Buffer.from("\ufeffx,y\n1,2\n", "utf16le"), "table/utf16", undefined, /CSV UTF-8.*iconv/],
    ["UTF-16 without a mark", Buffer.from("x,y\n1,2\n", "utf16le"), "table/utf16", undefined, /UTF-16/],
    ["UTF-16, big end first", Buffer.from("x,y\n1,2\n", "utf16le").swap16(), "table/utf16", undefined, /UTF-16/],
    ["zero bytes", "x,y\n1,\0\n", "table/not-text", undefined, /zero byte at byte 6/],
    ["a row too short", "x,y\n1,2\n3\n", "table/ragged-row", 3, /row 3 has 1 cells.*header has 2.*Complete or remove/],
    ["a row too long", "x,y\n1,2,3\n", "table/ragged-row", 2, /row 2 has 3 cells.*decimal commas/],
    ["duplicate names", "x,y,x\n1,2,3\n", "table/duplicate-column", 1, /columns 1 and 3 are both named "x".*Rename/],
    ["no header", "1,2\n3,4\n", "table/no-header", 1, /row 1 holds numbers.*Add a header/],
    ["no header, decimal commas", "1,5;2\n3;4\n", "table/no-header", 1, /Add a header/],
    ["a quote within a cell", 'x,y\n1,2\n3,5" pipe\n', "table/quote", 3, /row 3, cell 2.*Correct the quotes/],
    ["text after a closing quote", 'x,y\n"a"b,2\n', "table/quote", 2, /row 2, cell 1/],
    ["a quote never closed", 'x,y\n1,"2\n3,4\n', "table/quote", undefined, /never closed/],
    [
      "a large cell",
      `x,y\n1,2\n3,${"a".repeat(CELL_LIMIT + 1)}\n`,
      "table/cell-too-large",
      3,
      /row 3, cell 2 holds 65537/,
    ],
    ["5 MB in one cell", `x,y\n1,2\n3,${"a".repeat(5_000_000)}\n`, "table/row-too-large", 3, /row 3, cell 2.*overlong/],
    [
      "a quote that swallows rows",
      `x,y\n1,"2\n${"3,4\n".repeat(ROW_LIMIT)}`,
      "table/row-too-large",
      undefined,
      /quote/,
    ],
  ];
  for (const [name, content, code, row, message] of cases)
    test(name, async () => {
      const found = await failure(async () => contents(await open(content)));
      expect(found.code).toBe(code);
      expect(found.message).toMatch(message);
      if (row !== undefined) expect(found.row).toBe(row);
    });

  test.each(['{"type": "Feature"}', "\ufeff\n {\r\n  }", "[\n{}]", "[[1, 2], [3, 4]]", "[]"])(
    "JSON: %j",
    async (text) => {
      expect((await failure(() => open(text))).code).toBe("table/json");
    },
  );

  test("but not a header in brackets", async () => {
    expect((await open("[m],{nT}\n1,2\n")).header).toEqual(["[m]", "{nT}"]);
  });

  test("a ragged row far down is refused when it is reached", async () => {
    const table = await open(`x,y\n${"1,2\n".repeat(80_000)}3\n`);
    const found = await failure(() => contents(table));
    expect([found.code, found.row]).toEqual(["table/ragged-row", 80_002]);
  });
  test("a cell of 64 MB is given up after the limit, not read to its end", async () => {
    const header = new TextEncoder().encode("x,y\n1,");
    const filler = new Uint8Array(1 << 20).fill(97);
    let bytesAsked = 0;
    const source: ByteSource = {
      name: "huge.csv",
      size: 1 << 26,
      read: (offset, length) => {
        bytesAsked += length;
        if (offset === 0) {
          const bytes = filler.slice(0, length);
          bytes.set(header.subarray(0, length));
          return Promise.resolve(bytes);
        }
        return Promise.resolve(filler.slice(0, length));
      },
    };
    expect((await failure(() => openTable(source))).code).toBe("table/row-too-large");
    // One look at the whole for the encoding, one at the first line, then no more than the limit and a chunk.
    expect(bytesAsked).toBeLessThan(source.size + 4 * ROW_LIMIT);
  });
});

test("what is written is read back", async () => {
  // Carriage returns, tabs and formula signs apart: they are changed on purpose, and surrounding space is trimmed.
  const cell = fc
    .string({unit: fc.constantFrom("a", "ß", '"', ",", ";", "\n", " ", "1", "."), maxLength: 8})
    .map((text) => `x${text}x`);
  await fc.assert(
    fc.asyncProperty(fc.array(fc.tuple(cell, cell), {minLength: 1, maxLength: 20}), async (rows) => {
      const text = csvLine(["first", "second"]) + rows.map((row) => csvLine(row.map(csvCell))).join("");
      expect((await contents(await open(text))).rows).toEqual(rows);
    }),
    {seed: 20_240_611, numRuns: 200},
  );
});
