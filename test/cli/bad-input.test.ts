/**
 * Bad input, one case each: exit status, a message that names file, row, column and cure, no stack
 * trace, nothing on standard output and nothing left in the output folder.
 */
import {writeFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {doubles, longs, shorts} from "../../lib/formats/tiff-directory-write.ts";
import {TAG} from "../../lib/formats/tiff-tags.ts";
import {floatBytes, plainTags, tiffBytes} from "../formats/tiff-bytes.ts";
import {contents, fileWith, gridBytes, run, surveyText, temporaryFolder} from "./harness.ts";

interface Bad {
  readonly name: string;
  readonly file: string;
  readonly content: string | Uint8Array;
  /** After `--observable gravity --noise 0.02`; an option given here takes its place. */
  readonly options?: readonly string[];
  readonly status: 2 | 3;
  readonly code: string;
  readonly row?: number;
  readonly column?: string;
  /** What the message says to do, or what it found. */
  readonly says: RegExp;
}

const good = surveyText();
const withRow = (row: string): string => `${good}${row}\n`;
/** Rows of `good`, header included. */
const LAST = good.trimEnd().split("\n").length;
const rows = (...lines: readonly string[]): string => `line,chainage,clearance,gravity\n${lines.join("\n")}\n`;
const utf16 = (text: string): Uint8Array => new Uint8Array(Buffer.from(`\ufeff${text}`, "utf16le"));

const TABLES: readonly Bad[] = [
  {name: "empty file", file: "a.csv", content: "", status: 2, code: "table/empty-file", says: /a\.csv/},
  {
    name: "GeoJSON in place of a survey",
    file: "zones.geojson",
    content: '\n {\n  "type": "FeatureCollection", "features": []}',
    status: 2,
    code: "table/json",
    says: /error: zones\.geojson · The file is JSON \(it begins with \{\).*--support, --strips or --profiles\. \[/,
  },
  {name: "UTF-16 file", file: "a.csv", content: utf16(good), status: 2, code: "table/utf16", says: /UTF-8/},
  {
    name: "header only",
    file: "a.csv",
    content: "line,chainage,clearance,gravity\n",
    status: 2,
    code: "table/header-only",
    row: 1,
    says: /a\.csv/,
  },
  {
    name: "missing column",
    file: "a.csv",
    content: good.replace("gravity", "remarkable"),
    options: ["--column", "value=grav"],
    status: 2,
    code: "column/unknown",
    row: 1,
    says: /"grav".*remarkable|remarkable.*"grav"/,
  },
  {
    name: "no column for the values",
    file: "a.csv",
    content: good.replaceAll(/,[^,\n]+\n/g, "\n"),
    status: 2,
    code: "column/missing",
    row: 1,
    says: /--column value=/,
  },
  {
    name: "two columns for one role",
    file: "a.csv",
    content: good.replace(/,gravity\n/, ",gravity,Gravity\n").replaceAll(/(\d)\n/g, "$1,0\n"),
    status: 2,
    code: "column/ambiguous",
    row: 1,
    says: /--column value=/,
  },
  {
    name: "text in a number",
    file: "a.csv",
    content: withRow("L1,700,30,bad"),
    status: 2,
    code: "table/text-in-number",
    row: LAST + 1,
    column: "gravity",
    says: /"bad"/,
  },
  {
    name: "Infinity",
    file: "a.csv",
    content: withRow("L1,700,30,Infinity"),
    status: 2,
    code: "table/infinite",
    row: LAST + 1,
    column: "gravity",
    says: /Infinity/,
  },
  {
    name: "all stations at one place",
    file: "a.csv",
    content: rows("L1,5,30,1", "L1,5,30,2", "L1,5,30,1"),
    status: 2,
    code: "line/one-place",
    row: 2,
    says: /place|chainage/i,
  },
  {
    name: "one station",
    file: "a.csv",
    content: rows("L1,5,30,1"),
    status: 2,
    code: "line/one-station",
    row: 2,
    says: /one station|1 station/i,
  },
  {
    name: "station below the boundary",
    file: "a.csv",
    content: rows("L1,0,30,1", "L1,10,30,1.5", "L1,20,-2,1", "L1,30,30,0.5"),
    status: 3,
    code: "boundary/station-below",
    says: /row 4 of line L1 lies 2\.000 m below the boundary.*--boundary/,
  },
  {
    name: "support disjoint from the line",
    file: "a.csv",
    content: good,
    options: ["--support", "90000:91000"],
    status: 2,
    code: "support/disjoint",
    says: /runs from chainage 0\.0 to 590\.0 m. Give a support under the line/,
  },
  {
    name: "unknown EPSG code",
    file: "a.csv",
    content: good
      .replace("line,chainage", "line,x")
      .replace("clearance", "y,clearance")
      .replaceAll(/^(L1,\d+),/gm, "$1,0,"),
    options: ["--crs", "EPSG:999999"],
    status: 2,
    code: "crs/unknown-code",
    says: /999999/,
  },
  {
    name: "a coordinate system that is no EPSG code",
    file: "a.csv",
    content: good
      .replace("line,chainage", "line,x")
      .replace("clearance", "y,clearance")
      .replaceAll(/^(L1,\d+),/gm, "$1,0,"),
    options: ["--crs", "somewhere"],
    status: 2,
    code: "crs/unknown-name",
    says: /EPSG:/,
  },
  {
    name: "observed gravity",
    file: "a.csv",
    content: rows(...Array.from({length: 20}, (_, i) => `L1,${10 * i},30,${979_000 + (i % 3)}`)),
    status: 2,
    code: "value/not-an-anomaly",
    says: /normal gravity/,
  },
  {
    name: "total field",
    file: "a.csv",
    content: rows(...Array.from({length: 20}, (_, i) => `L1,${10 * i},30,${46_000 + (i % 3)}`)).replace(
      "gravity",
      "mag",
    ),
    options: ["--observable", "field-vertical", "--noise", "1", "--column", "value=mag"],
    status: 2,
    code: "value/not-an-anomaly",
    says: /reference field/,
  },
  {
    name: "5 MB in one cell",
    file: "a.csv",
    content: withRow(`L1,700,30,${"9x".repeat(2_500_000)}`),
    status: 2,
    code: "table/row-too-large",
    row: LAST + 1,
    says: /Remove the overlong cell/,
  },
  {
    name: "no height",
    file: "a.csv",
    content: good.replace("clearance", "weather"),
    status: 2,
    code: "height/none",
    row: 1,
    says: /--clearance|--elevation/,
  },
  {
    name: "unequal datums",
    file: "a.csv",
    content: good
      .replace("clearance", "elevation")
      .replaceAll(/,30,/g, ",30,")
      .replace("gravity", "gravity,ground")
      .replaceAll(/(\d)\n/g, "$1,0\n"),
    options: ["--elevation-datum", "ellipsoid", "--ground-datum", "geoid", "--boundary", "-5"],
    status: 2,
    code: "height/datums-differ",
    row: 1,
    says: /--geoid-offset/,
  },
];

const HUGE = tiffBytes(plainTags(8, 4), floatBytes(Array.from({length: 32}, () => 1)), [
  longs(TAG.imageWidth, 1_000_000),
  longs(TAG.imageLength, 1_000_000),
  longs(TAG.rowsPerStrip, 1_000_000),
]);
const GRID_OPTIONS = ["--observable", "field-vertical", "--clearance", "60", "--noise", "1"];
const GRIDS: readonly Bad[] = [
  {
    name: "truncated TIFF",
    file: "g.tif",
    content: gridBytes().subarray(0, 300),
    options: GRID_OPTIONS,
    status: 2,
    code: "raster/truncated",
    says: /g\.tif/,
  },
  {
    name: "TIFF that claims 10⁶ × 10⁶ pixels",
    file: "g.tif",
    content: HUGE,
    options: GRID_OPTIONS,
    status: 2,
    code: "raster/implausible-size",
    says: /1000000|1,000,000|1 000 000|1e6|10⁶/,
  },
  {
    name: "TIFF without a place",
    file: "g.tif",
    content: tiffBytes(plainTags(8, 4), floatBytes(Array.from({length: 32}, () => 1)), [
      doubles(TAG.modelPixelScale, []),
      doubles(TAG.modelTiepoint, []),
      shorts(TAG.geoKeyDirectory),
    ]),
    options: GRID_OPTIONS,
    status: 2,
    code: "raster/no-georeference",
    says: /g\.tif/,
  },
  {
    name: "grid with the noise of its record",
    file: "g.tif",
    content: gridBytes(),
    options: [...GRID_OPTIONS.slice(0, 4), "--noise", "record"],
    status: 2,
    code: "noise/grid-needs-number",
    says: /--noise S/,
  },
  {
    name: "grid without any height",
    file: "g.tif",
    content: gridBytes(),
    options: ["--observable", "field-vertical", "--noise", "1"],
    status: 2,
    code: "height/none",
    says: /--clearance|--elevation/,
  },
  {
    name: "text named as a grid",
    file: "g.tif",
    content: "II*\0 but no more",
    options: GRID_OPTIONS,
    status: 2,
    code: "raster/truncated",
    says: /g\.tif/,
  },
];

/** `options` after the defaults that they do not replace. */
function argumentsFor(path: string, out: string, options: readonly string[]): string[] {
  const defaults = [
    ["--observable", "gravity"],
    ["--noise", "0.02"],
  ].filter(([name]) => !options.includes(name!));
  return ["continue", path, ...defaults.flat(), ...options, "--out", out];
}

describe.each([...TABLES, ...GRIDS])("$name", ({file, content, options = [], status, code, row, column, says}) => {
  test("for people", async () => {
    const folder = temporaryFolder();
    const out = join(folder, "out");
    const result = await run(argumentsFor(fileWith(file, content), out, options));
    expect({status: result.status, out: result.out}).toEqual({status, out: ""});
    const err = result.err.replaceAll(/\s+/g, " ");
    expect(err).toMatch(/error: /);
    expect(err).toMatch(says);
    expect(err).not.toMatch(/defect|undefined|\[object| at .*\.ts:\d/);
    expect(result.err.length).toBeLessThan(4000);
    expect(contents(folder)).toEqual([]);
  });

  test("for scripts", async () => {
    const folder = temporaryFolder();
    const result = await run([...argumentsFor(fileWith(file, content), join(folder, "out"), options), "--json"]);
    expect({status: result.status, out: result.out}).toEqual({status, out: ""});
    const errors = result.err
      .trimEnd()
      .split("\n")
      .map((line) => JSON.parse(line));
    expect(errors).toHaveLength(1);
    expect(errors[0].code).toBe(code);
    if (row !== undefined) expect(errors[0]).toMatchObject({file, row});
    if (column !== undefined) expect(errors[0]).toMatchObject({column});
    expect(contents(folder)).toEqual([]);
  });
});

describe("bad options leave the folder alone", () => {
  const cases: readonly [string, string[], RegExp][] = [
    ["zero noise", ["--noise", "0"], /--noise "0" is out of range/],
    ["negative noise", ["--noise", "-1"], /--noise "-1" is out of range/],
    ["support end before start", ["--support", "900:400"], /ends at or before its start/],
    ["overlapping supports", ["--support", "0:300", "--support", "200:400"], /0:300 and 200:400 overlap/],
    ["negative bound", ["--bound", "rms:-1"], /not a positive bound/],
    ["bound 0", ["--bound", "norm:0"], /not a positive bound/],
    ["an unknown group", ["--support", "G7/0:300"], /G7/],
    ["no observable", ["--observable"], /--observable has no value: --out follows it/],
  ];
  test.each(cases)("%s", async (_, options, message) => {
    const folder = temporaryFolder();
    const result = await run(argumentsFor(fileWith("a.csv", good), join(folder, "out"), options));
    expect({status: result.status, out: result.out}).toEqual({status: 2, out: ""});
    expect(result.err.replaceAll(/\s+/g, " ")).toMatch(message);
    expect(contents(folder)).toEqual([]);
  });

  test("no file of that name", async () => {
    const folder = temporaryFolder();
    const result = await run(argumentsFor(join(folder, "no.csv"), join(folder, "out"), []));
    expect(result.status).toBe(2);
    expect(result.err).toMatch(/There is no .*no\.csv/s);
    expect(contents(folder)).toEqual([]);
  });

  test("an output folder below a file", async () => {
    const survey = fileWith("a.csv", good);
    const result = await run(argumentsFor(survey, join(survey, "out"), []));
    expect(result.status).toBe(2);
    expect(result.err).toMatch(/a file stands on the way/);
  });
});

describe("what is strange but sound goes through unharmed", () => {
  const HOSTILE = ["../../escape", "=cmd()", "<script>alert(1)</script>", "a\u001b[31mb"];

  test("line names with paths, formulas, markup and control characters", async () => {
    const folder = temporaryFolder();
    const out = join(folder, "out");
    const result = await run(argumentsFor(fileWith("a.csv", surveyText(HOSTILE)), out, []));
    expect(result.status).toBe(0);
    expect(contents(folder)).toEqual(["out"]);
    expect(contents(out)).toEqual([
      "bounds_assumed.csv",
      "levels.csv",
      "lines.csv",
      "record.json",
      "report.html",
      "source.csv",
      "strips.csv",
      "timing.json",
      "tradeoff.csv",
    ]);
    expect(result.out + result.err).not.toContain("\u001b");
    const {readFileSync} = await import("node:fs");
    for (const name of ["lines.csv", "levels.csv", "source.csv", "tradeoff.csv", "bounds_assumed.csv"])
      expect(readFileSync(join(out, name), "utf8")).not.toMatch(/^"?=/m);
    expect(readFileSync(join(out, "report.html"), "utf8")).not.toContain("<script>alert");
  });

  test("NaN is a reading that is missing", async () => {
    const folder = temporaryFolder();
    const path = fileWith("a.csv", withRow("L1,700,30,NaN"));
    const result = await run(argumentsFor(path, join(folder, "out"), []));
    expect(result.status).toBe(0);
    expect(result.out).toMatch(/^L1 +\w+ +60 /m);
  });

  test("a file changed between two runs into the same folder is noticed", async () => {
    const out = temporaryFolder();
    const path = fileWith("a.csv", good);
    expect((await run(argumentsFor(path, out, []))).status).toBe(0);
    writeFileSync(path, withRow("L1,700,30,0.1"));
    const again = await run(argumentsFor(path, out, []));
    expect(again.status).toBe(2);
    expect(again.err.replaceAll(/\s+/g, " ")).toMatch(/The folder holds another run/);
  });
});
