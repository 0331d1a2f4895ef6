/** Values of a TOML file and the places they were written at. */
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {readToml} from "../../lib/formats/toml.ts";

const source = (content: string | Uint8Array) => {
  const bytes = typeof content === "string" ? new TextEncoder().encode(content) : content;
  return {
    name: "a.toml",
    size: bytes.length,
    read: async (offset: number, length: number) => bytes.subarray(offset, offset + length),
  };
};
const lines = (...rows: readonly string[]): string => `${rows.join("\n")}\n`;

/** Statements that go over lines, texts that look like keys, and tables in every spelling. */
const WILD = lines(
  "# noise = 1",
  "",
  'a = "b = 2 # no comment"',
  "  c = [",
  "    1, # one ]",
  "    2,",
  "  ]",
  'd = """',
  "e = 3",
  '[f]"""',
  "g = '''",
  "h = 1'''",
  'i.j = {k = 1, "l m" = [2]}',
  "date = 2024-02-29",
  "[n] # section",
  "a = 10",
  "",
  "'o p' = 11",
  '[q."r s"]',
  "t = 12",
  "[[u]]",
  "v = 13",
);

describe.each([
  ["line feeds", WILD],
  ["carriage returns", WILD.replaceAll("\n", "\r\n")],
  ["a byte-order mark", `\ufeff${WILD}`],
  ["no end of the last line", WILD.trimEnd()],
])("with %s", (_, text) => {
  test("places are those of the statements", async () => {
    const {values, placeOf} = await readToml(source(text));
    expect(values).toMatchObject({a: "b = 2 # no comment", c: [1, 2], date: "2024-02-29", u: [{v: 13}]});
    const at = (...path: string[]) => {
      const {row, column} = placeOf(path);
      return [row, column];
    };
    expect(at("a")).toEqual([3, "1"]);
    expect(at("c")).toEqual([4, "3"]);
    expect(at("d")).toEqual([8, "1"]);
    expect(at("g")).toEqual([11, "1"]);
    expect(at("i")).toEqual([13, "1"]);
    expect(at("i", "j", "l m")).toEqual([13, "1"]);
    expect(at("date")).toEqual([14, "1"]);
    expect(at("n")).toEqual([15, "1"]);
    expect(at("n", "a")).toEqual([16, "1"]);
    expect(at("n", "o p")).toEqual([18, "1"]);
    expect(at("q")).toEqual([19, "1"]);
    expect(at("q", "r s", "t")).toEqual([20, "1"]);
    expect(at("u")).toEqual([21, "1"]);
    // In a text and in a comment, so no keys.
    for (const key of ["e", "f", "h", "noise"]) expect(placeOf([key])).toEqual({file: "a.toml"});
  });
});

test.each([
  ["a text without quotes", lines("a = 1", "  b = gravity"), "toml/syntax", 2, "7"],
  ["a key twice", lines("a = 1", "b = 2", "a = 3"), "toml/syntax", 3, "1"],
  ["a list without end", lines("a = 1", "b = [1,"), "toml/syntax", 3, "1"],
  ["no value", lines("a ="), "toml/syntax", 1, "4"],
  ["a table deeper than any setting", `a = ${"[".repeat(40)}${"]".repeat(40)}\n`, "toml/syntax", 1, undefined],
  ["Latin-1", new Uint8Array([0x61, 0x3d, 0x22, 0xe9, 0x22]), "toml/not-utf8", undefined, undefined],
  ["the data in place of the settings", new Uint8Array(300_000), "toml/too-large", undefined, undefined],
])("%s is refused with its place", async (_, content, code, row, column) => {
  const error = await readToml(source(content)).catch((thrown: unknown) => thrown);
  expect(error).toMatchObject({code, exitStatus: 2, place: {file: "a.toml"}});
  const {place, message} = error as {place: {row?: number; column?: string}; message: string};
  if (row !== undefined) expect(place.row).toBe(row);
  if (column !== undefined) expect(place.column).toBe(column);
  expect(message).not.toMatch(/\n/);
});

test("names that objects have of their own are keys like any other", async () => {
  const {values, placeOf} = await readToml(source(lines("__proto__ = 1", "constructor = 2", "a = 3")));
  expect(Object.keys(values)).toEqual(["__proto__", "constructor", "a"]);
  expect(placeOf(["constructor"])).toEqual({file: "a.toml", row: 2, column: "1"});
  expect(placeOf(["toString"])).toEqual({file: "a.toml"});
});

test("places hold in whatever order statements stand, and whatever stands between them", async () => {
  const STATEMENTS = [
    ["a", "a = 1"],
    ["b", "b = [ # ]\n  1,\n\n  2 ]"],
    ["c", 'c = """\na = 2\n[b]\n""" # """'],
    ["d", "d = '''\\\n'''"],
    ["e", 'e = {a = "}", b = []}'],
    ["f", "f.a.b = [[1], [\n2]]"],
    ["g", '"g" = "#"'],
  ] as const;
  const between = fc.constantFrom("", "\n", "# a = 3\n", "   \n# [b]\n");
  await fc.assert(
    fc.asyncProperty(
      fc.shuffledSubarray([...STATEMENTS], {minLength: 1}),
      fc.array(between, {minLength: 7, maxLength: 7}),
      async (chosen, gaps) => {
        let text = "";
        const rows = chosen.map(([key, statement], i) => {
          text += gaps[i]!;
          const row = text.split("\n").length;
          text += `${statement}\n`;
          return [key, row] as const;
        });
        const {placeOf} = await readToml(source(text));
        expect(rows.map(([key]) => [key, placeOf([key]).row])).toEqual(rows);
      },
    ),
    {seed: 31, numRuns: 200},
  );
});

test("a key behind a value of thousands of lines has no row, and the search for it an end", async () => {
  const {placeOf} = await readToml(source(`a = 1\nb = [\n${"1,\n".repeat(8000)}]\nc = 2\n`));
  expect(placeOf(["a"]).row).toBe(1);
  expect(placeOf(["c"])).toEqual({file: "a.toml"});
});
