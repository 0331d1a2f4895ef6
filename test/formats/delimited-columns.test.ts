import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {type AskedColumns, type ColumnBlock, columnsOfRows} from "../../lib/formats/column-block.ts";
import {openTable, tableBlocks} from "../../lib/formats/delimited.ts";
import {delimitedColumns} from "../../lib/formats/delimited-columns.ts";
import type {Delimiter} from "../../lib/formats/delimited-rows.ts";
import type {DecimalMark} from "../../lib/formats/number-cell.ts";
import {failure, memorySource} from "./memory.ts";

interface Read {
  readonly rows: readonly (readonly (number | string)[])[];
  /** How the reading ended, where not at the end of the file. */
  readonly ended: unknown;
}

/** As a walk in order meets them: nothing of a row that cannot be read, or beyond. */
async function readAll(blocks: AsyncIterable<ColumnBlock>): Promise<Read> {
  const rows: (number | string)[][] = [];
  try {
    for await (const {count, rowNumbers, numbers, texts, unread} of blocks)
      for (let r = 0; r < count; ++r) {
        if (r === unread?.at) return {rows, ended: [rowNumbers[r], ...unread.cells.map((cell) => cell.trim())]};
        rows.push([rowNumbers[r]!, ...numbers.map((column) => column[r]!), ...texts.map((column) => column[r]!)]);
      }
  } catch (error) {
    return {rows, ended: await failure(() => Promise.reject(error))};
  }
  return {rows, ended: undefined};
}

interface Written {
  readonly text: string;
  readonly delimiter: Delimiter;
  readonly mark: DecimalMark;
  readonly asked: AskedColumns;
  readonly chunk: number;
  readonly latin1: boolean;
}

/** The same text read from its bytes and by way of rows of cells. */
async function bothWays({text, delimiter, mark, asked, chunk, latin1}: Written): Promise<readonly [Read, Read]> {
  const source = memorySource(Buffer.from(text, latin1 ? "latin1" : "utf8"));
  const encoding = {name: latin1 ? ("latin1" as const) : ("utf8" as const), start: 0};
  const reading = {source, encoding, delimiter, width: WIDTH, mark, chunk};
  return [
    await readAll(delimitedColumns(reading, asked, tableBlocks)),
    await readAll(columnsOfRows(tableBlocks(reading), mark, asked)),
  ];
}

const WIDTH = 4;
const digits = (most: number) => fc.string({unit: fc.constantFrom(..."0123456789"), maxLength: most});
const number = fc
  .tuple(fc.constantFrom("", "", "-", "+"), digits(18), fc.constantFrom("", ".", "."), digits(18), exponent())
  .map((parts) => parts.join(""));
function exponent() {
  return fc.oneof(
    {weight: 3, arbitrary: fc.constant("")},
    fc.tuple(fc.constantFrom("e", "E", "e-", "e+", "D"), digits(3)).map((parts) => parts.join("")),
  );
}
const SOUND = [
  "L 10",
  "*",
  "nan",
  "N/A",
  "-99999",
  "9999999",
  "-9999999.99",
  "1e32",
  "\u2212" + "4.5",
  "",
  "  ",
  "é",
  "Łódź",
  "🧲",
];
const DAMAGED = [
  '"',
  'a"b',
  '"a"b',
  '"a""b"',
  '"a\nb"',
  '"a\r\nb"',
  '"open',
  '"a" x',
  '"a,b;c"',
  '"1,5"',
  "\r",
  "\n",
  "a\rb",
  "\f1",
  "\u00a0x",
  "1\u00a0",
  "\t",
  "1,2",
  "1;2",
  "1.2.3",
  "- 1",
  "1 2",
  "--1",
  ".",
  "e5",
  "1e",
  "Infinity",
  "1e400",
  "0x10",
  "1_000",
  "\u0001",
];
const plainCell = fc.oneof(
  {weight: 6, arbitrary: number},
  {weight: 3, arbitrary: fc.double({noDefaultInfinity: true, noNaN: true}).map(String)},
  {weight: 3, arbitrary: fc.constantFrom(...SOUND)},
);
const dressed = fc
  .tuple(plainCell, fc.constantFrom("", "", "", " ", "  "), fc.constantFrom("", "", "", " "), fc.boolean())
  .map(([cell, before, after, quoted]) => before + (quoted && !cell.includes("\n") ? `"${cell}"` : cell) + after);
const row = (cell: fc.Arbitrary<string>) => fc.array(cell, {minLength: WIDTH, maxLength: WIDTH});
const asking = fc.constantFrom<AskedColumns>(
  {numbers: [1, 2], texts: [0]},
  {numbers: [3, 1], texts: []},
  {numbers: [0], texts: [2, 3]},
  {numbers: [], texts: [0]},
  {numbers: [0, 1, 2, 3], texts: []},
);

function tables(rows: fc.Arbitrary<string[]>): fc.Arbitrary<Written> {
  return fc
    .record({
      rows: fc.array(fc.oneof({weight: 9, arbitrary: rows}, fc.constantFrom([""], ["", "", "", ""], ["", ""], [" "])), {
        maxLength: 30,
      }),
      delimiter: fc.constantFrom<Delimiter>(",", ";", "\t", "|"),
      comma: fc.boolean(),
      newline: fc.constantFrom("\n", "\n", "\r\n", "\r"),
      last: fc.boolean(),
      asked: asking,
      chunk: fc.constantFrom(16, 50, 100, 1 << 12),
      latin1: fc.boolean(),
    })
    .map(({rows, delimiter, comma, newline, last, asked, chunk, latin1}) => {
      const mark: DecimalMark = comma && delimiter !== "," ? "," : ".";
      const lines = [["a", '"b c"', "d", "é"], ...rows].map((cells) =>
        cells.map((cell) => (mark === "," ? cell.replace(".", ",") : cell)).join(delimiter),
      );
      return {text: lines.join(newline) + (last ? newline : ""), delimiter, mark, asked, chunk, latin1};
    });
}

describe("columns from bytes are those of the rows of cells", () => {
  test("numbers of every length, blanks, quotes and letters", async () => {
    await fc.assert(
      fc.asyncProperty(tables(row(dressed)), async (written) => {
        const [bytes, cells] = await bothWays(written);
        expect(bytes).toEqual(cells);
      }),
      {seed: 11, numRuns: 1500},
    );
  });
  test("one damaged row among sound ones", async () => {
    const sound = row(fc.constantFrom("1", "2.5", '"3"', "L1"));
    const damage = fc.tuple(
      tables(sound),
      fc.array(fc.oneof(plainCell, fc.constantFrom(...DAMAGED)), {minLength: 1, maxLength: WIDTH + 2}),
      fc.nat(),
    );
    await fc.assert(
      fc.asyncProperty(damage, async ([written, cells, place]) => {
        const lines = written.text.split("\n");
        lines.splice(1 + (place % lines.length), 0, cells.join(written.delimiter));
        const [bytes, whole] = await bothWays({...written, chunk: 1 << 12, text: lines.join("\n")});
        expect(bytes).toEqual(whole);
      }),
      {seed: 12, numRuns: 3000},
    );
  });
});

describe("the fast way itself", () => {
  /** Rows are never asked for by way of csv-parse. */
  const refused = (): never => {
    throw new Error("csv-parse was asked");
  };
  const fast = (text: string, asked: AskedColumns, width: number) => {
    const source = memorySource(text);
    const encoding = {name: "utf8" as const, start: 0};
    const reading = {source, encoding, delimiter: "," as const, width, mark: "." as const, chunk: 64};
    return readAll(delimitedColumns(reading, asked, refused));
  };
  test("takes plain rows, quoted names, blank lines and letters outside ASCII", async () => {
    const text = ['"Linie",x,"größe"', '"L,1",1.5,-2e-3', "", 'Ö2, 2 ,"3"', ',,""', "nach,,*"].join("\r\n");
    expect(await fast(text, {numbers: [2, 1], texts: [0]}, 3)).toEqual({
      rows: [
        [2, -2e-3, 1.5, "L,1"],
        [4, 3, 2, "Ö2"],
        [6, NaN, NaN, "nach"],
      ],
      ended: undefined,
    });
  });
  test("reads each number as the nearest double", async () => {
    const near = fc.tuple(fc.double({noDefaultInfinity: true, noNaN: true}), fc.integer({min: 1, max: 17}));
    const texts = fc.array(
      near
        .map(([value, places]) => (places < 17 ? value.toPrecision(places) : `${value}`))
        .filter((cell) => Number.isFinite(Number(cell))),
      {minLength: 1, maxLength: 40},
    );
    await fc.assert(
      fc.asyncProperty(texts, async (cells) => {
        const {rows} = await fast(`x\n${cells.join("\n")}\n`, {numbers: [0], texts: []}, 1);
        for (const [k, cell] of cells.entries()) expect(Object.is(rows[k]![1], Number(cell))).toBe(true);
      }),
      {seed: 13, numRuns: 300},
    );
  });
});

test("a table gives the columns asked for", async () => {
  const table = await openTable(memorySource("line,x,y\nL1,1,2\nL2,3,x\n"));
  expect(await readAll(table.columns({numbers: [1, 2], texts: [0]}))).toEqual({
    rows: [[2, 1, 2, "L1"]],
    ended: [3, "3", "x"],
  });
});
