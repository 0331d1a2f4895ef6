import {expect, test} from "vitest";
import {paragraph} from "../../cli/paragraph.ts";
import {figure, textTable} from "../../cli/table.ts";

const COLUMNS = [
  {head: "line", align: "left"},
  {head: "noise nT", align: "right"},
] as const;

test("words stand left, numbers right, under heads and a rule", () => {
  const table = textTable(COLUMNS, [
    ["7-101", "0.5"],
    ["L", "12.25"],
  ]);
  expect(table).toBe("line   noise nT\n-----  --------\n7-101       0.5\nL         12.25\n");
});

test("a table fits the width by shortening words, never numbers", () => {
  const table = textTable(COLUMNS, [["x".repeat(300), "123456.789"]], 40);
  for (const line of table.trimEnd().split("\n")) expect(line.length).toBeLessThanOrEqual(40);
  expect(table).toContain("123456.789");
  expect(table).toContain("…");
  const numbers = textTable([COLUMNS[1]], [["1".repeat(60)]], 40);
  expect(numbers).toContain("1".repeat(60));
});

test("no cell can move the cursor, break the row or reorder the text", () => {
  const table = textTable(COLUMNS, [["a\u001b[2Jb\nc\u202ed\u009b", "1"]]);
  expect(table).toContain("a\ufffd[2Jb c\ufffdd\ufffd");
  expect(table.split("\n")).toHaveLength(4);
});

test("figures", () => {
  const cases: [number | undefined, number, string][] = [
    [0, 4, "0"],
    [-0, 4, "0"],
    [1.23456, 4, "1.235"],
    [-0.00012344, 3, "-0.000123"],
    [123456, 3, "123000"],
    [0.99996, 4, "1.000"],
    [9.9999e-5, 3, "0.000100"],
    [9.9e-5, 3, "9.90e-5"],
    [2.5e7, 3, "2.50e+7"],
    [Number.NaN, 4, ""],
    [Number.POSITIVE_INFINITY, 4, ""],
    [undefined, 4, ""],
  ];
  for (const [value, digits, text] of cases) expect(figure(value, digits)).toBe(text);
});

test("paragraphs break between words and keep long ones whole", () => {
  const text = paragraph("doubt: ", "one two three four five", 14);
  expect(text).toBe("doubt: one two\n  three four\n  five\n");
  expect(paragraph("", "y".repeat(50), 20)).toBe(`${"y".repeat(50)}\n`);
});
