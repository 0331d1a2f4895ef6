import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {csvCell, csvLine, csvNumber} from "../../lib/formats/csv-text.ts";
import {NULL_SENTINELS, NULL_SPELLINGS, parseCell, requireNumber} from "../../lib/formats/number-cell.ts";
import {failure} from "./memory.ts";

describe("a cell as a number", () => {
  const cases: readonly (readonly [string, "." | ",", number | undefined])[] = [
    ["1", ".", 1],
    [" -12.5 ", ".", -12.5],
    ["+.5", ".", 0.5],
    ["5.", ".", 5],
    ["1e3", ".", 1000],
    ["1.5D-3", ".", 0.0015],
    ["\u22122.5", ".", -2.5],
    ["1,5", ",", 1.5],
    ["-0,25", ",", -0.25],
    ["7", ",", 7],
    ["1.5", ",", undefined],
    ["1.234,5", ",", undefined],
    ["1,5", ".", undefined],
    ["1,234.5", ".", undefined],
    ["12abc", ".", undefined],
    ["0x10", ".", undefined],
    ["1 2", ".", undefined],
    ["--1", ".", undefined],
    [".", ".", undefined],
    ["e5", ".", undefined],
    ["Infinity", ".", undefined],
    ["-inf", ".", undefined],
    ["1e400", ".", undefined],
    ["-999", ".", -999],
    ["-9999", ".", -9999],
  ];
  test.each(cases)("%j with %j", (text, mark, value) => expect(parseCell(text, mark)).toBe(value));

  test("every spelling and sentinel of no value", () => {
    for (const mark of [".", ","] as const) {
      for (const text of NULL_SPELLINGS) {
        expect(parseCell(text, mark)).toBeNaN();
        expect(parseCell(` ${text.toUpperCase()} `, mark)).toBeNaN();
      }
      for (const value of NULL_SENTINELS) expect(parseCell(String(value).replace(".", mark), mark)).toBeNaN();
    }
    expect(parseCell("-99999.00", ".")).toBeNaN();
    expect(parseCell("1.0E+32", ".")).toBeNaN();
  });
  test("a declared sentinel", () => {
    expect(parseCell("-9999.00", ".", [-9999])).toBeNaN();
    expect(parseCell("-9998", ".", [-9999])).toBe(-9998);
  });
  test("any finite number survives writing with all its digits", () => {
    fc.assert(
      fc.property(fc.double({noNaN: true, noDefaultInfinity: true}), (value) => {
        fc.pre(!NULL_SENTINELS.includes(value));
        expect(parseCell(String(value), ".")).toBe(value + 0 === 0 ? 0 : value);
        expect(parseCell(String(value).replace(".", ","), ",")).toBe(value + 0 === 0 ? 0 : value);
      }),
      {seed: 7},
    );
  });

  const place = {file: "a.csv", row: 7, column: "value"};
  test.each([
    ["12abc", ".", "table/text-in-number", /a\.csv, row 7, column "value" holds "12abc".*Correct the cell/],
    ["1,5", ".", "table/text-in-number", /decimal mark was taken to be "\."/],
    ["1.5", ",", "table/text-in-number", /decimal mark was taken to be ","/],
    ["Infinity", ".", "table/infinite", /row 7, column "value".*infinite.*Empty the cell/],
    ["1e999", ".", "table/infinite", /infinite/],
    ["x".repeat(5000), ".", "table/text-in-number", /^.{0,300}$/],
  ] as const)("%j with %j is refused with its place", async (text, mark, code, message) => {
    const found = await failure(() => requireNumber(text, mark, place));
    expect([found.code, found.row, found.column]).toEqual([code, 7, "value"]);
    expect(found.message).toMatch(message);
  });
});

describe("a number as a cell", () => {
  test.each([
    [0, "0"],
    [-0, "0"],
    [1.5, "1.5"],
    [0.1 + 0.2, "0.3"],
    [1 / 3, "0.333333333333"],
    [-123456789.123456, "-123456789.123"],
    [123456789012, "123456789012"],
    [1e-9, "1e-9"],
    [Number.NaN, ""],
    [Number.POSITIVE_INFINITY, ""],
    [undefined, ""],
  ])("%d", (value, text) => expect(csvNumber(value)).toBe(text));
  test("twelve significant digits are kept", () => {
    fc.assert(
      fc.property(fc.double({noNaN: true, min: -1e30, max: 1e30}), (value) => {
        // Rounding to 12 digits is off by at most half a unit of the twelfth.
        expect(Math.abs(Number(csvNumber(value)) - value)).toBeLessThanOrEqual(5.001e-12 * Math.abs(value));
        expect(csvNumber(value)).not.toMatch(/^-0$/);
      }),
      {seed: 11},
    );
  });
});

describe("a text as a cell", () => {
  test.each([
    ["plain", "plain"],
    ["a,b", '"a,b"'],
    ['say "x"', '"say ""x"""'],
    ["two\nlines", '"two\nlines"'],
    [" edge", '" edge"'],
    ["=cmd|' /C calc'!A0", "'=cmd|' /C calc'!A0"],
    ["+1", "'+1"],
    ["-L1", "'-L1"],
    ["@SUM(1,2)", '"\'@SUM(1,2)"'],
    ["\tx", "'\tx"],
    ["\rx", '"\'\rx"'],
    ["", ""],
  ])("%j", (text, cell) => expect(csvCell(text)).toBe(cell));
  test("a line", () => expect(csvLine(["a", "", "b"])).toBe("a,,b\n"));
});
