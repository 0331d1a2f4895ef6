/** `crossings` from end to end. */
import {readFileSync, writeFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {type FlownLine, flownText} from "../harness/crossing-survey.ts";
import {parsedCsv} from "../harness/text-sink.ts";
import {contents, fileWith, run, surveyText, temporaryFolder} from "./harness.ts";

const LINES: readonly FlownLine[] = [
  {id: "L1", from: [0, 102.5], to: [1000, 102.5], step: 10, height: 40},
  {id: "L2", from: [0, 202.5], to: [1000, 202.5], step: 10, height: 40},
  {id: "T1", from: [402.5, 0], to: [402.5, 300], step: 10, height: 90},
  {id: "T2", from: [512.5, 0], to: [512.5, 300], step: 10, height: 90, shift: 9},
];
const SURVEY = flownText(LINES, {noise: 0.3});
const ASKED = ["--observable", "field-vertical", "--noise", "0.3", "--boundary", "0", "--regional", "none"] as const;

const lines = (text = SURVEY) => fileWith("lines.csv", text);

test("prints differences before and after, the worst crossings and lines", async () => {
  const {status, out, err} = await run(["crossings", lines(), ...ASKED]);
  expect(status).toBe(0);
  const [figures, worst, byLine] = out.split("\n\n");
  expect(figures).toMatch(/^difference nT +crossings +mean +rms +median size +robust sd +largest$/m);
  expect(figures).toMatch(/^as measured +4 /m);
  expect(figures).toMatch(/^at one height +4 /m);
  const after = /^at one height +4 +(\S+)/m.exec(figures!)!;
  // Two of four crossings are with the tie that reads 9 nT too much.
  expect(Number(after[1])).toBeGreaterThan(-5.3);
  expect(Number(after[1])).toBeLessThan(-3.7);
  expect(worst).toMatch(/^L[12] +5\d\d\.\d +T2 /m);
  expect(byLine).toMatch(/^T2 +2 /m);
  expect(byLine!.split("\n")[2]).toMatch(/^T2 /);
  expect(err).toMatch(/no reading was changed/);
});

test("writes tables, map and record; the same again is the same bytes", async () => {
  const out = join(temporaryFolder(), "out");
  const args = ["crossings", lines(), ...ASKED, "--crs", "EPSG:32633", "--out", out];
  expect((await run(args)).status).toBe(0);
  expect(contents(out)).toEqual([
    "crossing_lines.csv",
    "crossings.csv",
    "crossings.geojson",
    "record.json",
    "timing.json",
  ]);
  const read = (name: string): string => readFileSync(join(out, name), "utf8");
  const rows = parsedCsv(read("crossings.csv"));
  expect(rows.map((row) => `${row["line_a"]} ${row["line_b"]} ${row["x"]} ${row["y"]}`)).toEqual([
    "L1 T1 500402.5 5900102.5",
    "L1 T2 500512.5 5900102.5",
    "L2 T1 500402.5 5900202.5",
    "L2 T2 500512.5 5900202.5",
  ]);
  for (const row of rows) {
    expect([row["height_a_m"], row["height_b_m"], row["common_level_m"]]).toEqual(["40", "90", "90"]);
    // The higher line was not carried.
    expect(row["carried_b_nT"]).toBe(row["value_b_nT"]);
    // What is wrong with T2 alone is left of both.
    const wrong = row["line_b"] === "T2" ? 9 : 0;
    expect(Math.abs(Number(row["carried_difference_nT"]) + wrong)).toBeLessThan(1.7);
    expect(Math.abs(Number(row["difference_nT"]) + wrong)).toBeGreaterThan(10);
  }
  const record = JSON.parse(read("record.json"));
  expect(record.settings.crossings).toEqual({asMeasured: false, level: null});
  expect(record.outcomes).toEqual({done: 4, doubtful: 0, skipped: 0, failed: 0});
  expect(record.outputs.map(({file}: {file: string}) => file)).toEqual([
    "crossings.csv",
    "crossing_lines.csv",
    "crossings.geojson",
  ]);
  const before = ["crossings.csv", "crossing_lines.csv", "crossings.geojson"].map(read);
  expect((await run(args)).status).toBe(0);
  expect(["crossings.csv", "crossing_lines.csv", "crossings.geojson"].map(read)).toEqual(before);
  const other = await run([...args, "--as-measured"]);
  expect(other.status).toBe(2);
  expect(other.err).toMatch(/out\/other-run/);
});

test("nothing in the survey's file is changed, and no file is written without --out", async () => {
  const path = lines();
  await run(["crossings", path, ...ASKED]);
  expect(readFileSync(path, "utf8")).toBe(SURVEY);
  expect(contents(join(path, ".."))).toEqual(["lines.csv"]);
});

test("as JSON: figures, worst, lines and files", async () => {
  const out = join(temporaryFolder(), "out");
  const {status, out: text, err} = await run(["crossings", lines(), ...ASKED, "--json", "--out", out]);
  expect({status, err}).toEqual({status: 0, err: ""});
  const told = JSON.parse(text);
  expect(told.crossings).toBe(4);
  expect(told.heights).toBe("elevation");
  expect(told.as_measured.crossings).toBe(4);
  expect(Math.abs(told.as_measured.rms_nT)).toBeGreaterThan(30);
  expect(Math.abs(told.at_one_height.rms_nT)).toBeLessThan(8);
  expect(told.lines[0]).toMatchObject({line: "T2"});
  // The system of x, y was not given.
  expect(told.files).toEqual(["crossings.csv", "crossing_lines.csv", "record.json", "timing.json"]);
});

test("--as-measured estimates nothing: not even a boundary is needed", async () => {
  const {status, out} = await run(["crossings", lines(), "--observable", "field-vertical", "--as-measured"]);
  expect(status).toBe(0);
  expect(out).toMatch(/^as measured +4 /m);
  expect(out).not.toMatch(/at one height/);
});

test("--level carries every reading there", async () => {
  const {out} = await run(["crossings", lines(), ...ASKED, "--level", "120", "--json"]);
  for (const {common_level_m} of JSON.parse(out).worst) expect(common_level_m).toBe(120);
});

test("a job file of continue lends what was measured and assumed; its levels and its folder are not meant", async () => {
  const folder = temporaryFolder();
  writeFileSync(join(folder, "lines.csv"), SURVEY);
  const job = fileWith(
    "survey.toml",
    'survey = "lines.csv"\nobservable = "field-vertical"\nnoise = 0.3\nboundary = 0\nlevel = [0, 10]\nout = "out"\n[strip]\nbody = [480, 540]\n',
    folder,
  );
  const {status, out} = await run(["crossings", "--job", job]);
  expect(status).toBe(0);
  expect(out).toMatch(/^at one height +4 /m);
  expect(contents(folder)).toEqual(["lines.csv", "survey.toml"]);
});

describe("lines that cannot be carried", () => {
  test("some: status 5, and the reason stands beside the crossing", async () => {
    const out = join(temporaryFolder(), "out");
    // With the strike given a line along it has no section; T1 is now below the traverses.
    const text = flownText(
      LINES.map((line) => (line.id === "T1" ? {...line, height: 30} : line)),
      {noise: 0.3},
    );
    const {status, err} = await run(["crossings", lines(text), ...ASKED, "--strike", "0", "--out", out]);
    expect(status).toBe(5);
    expect(err).toMatch(/strike\/too-oblique/);
    const rows = parsedCsv(readFileSync(join(out, "crossings.csv"), "utf8"));
    expect(rows.map((row) => row["reason"])).toEqual([
      "T1 has no source (strike/too-oblique)",
      "",
      "T1 has no source (strike/too-oblique)",
      "",
    ]);
  });

  test("all alike: their status, and nothing is written", async () => {
    const out = join(temporaryFolder(), "out");
    const {status, out: text, err} = await run(["crossings", lines(), "--observable", "field-vertical", "--out", out]);
    expect(status).toBe(2);
    expect(text).toBe("");
    expect(err).toMatch(/boundary\/not-given/);
    expect(contents(out)).toEqual([]);
  });
});

test.each([
  ["chainage alone", surveyText(["A", "B"]), ["--observable", "gravity"], "crossings/no-coordinates"],
  ["a component along the lines", SURVEY, ["--observable", "field-along"], "crossings/along-component"],
  ["a level that is not used", SURVEY, [...ASKED, "--as-measured", "--level", "9"], "option/level-unused"],
])("%s is refused", async (_, text, args, code) => {
  const {status, out, err} = await run(["crossings", lines(text), ...args, "--json"]);
  expect({status, out}).toEqual({status: 2, out: ""});
  expect(JSON.parse(err).code).toBe(code);
});

test("lines that do not cross are said not to", async () => {
  const {status, out, err} = await run(["crossings", lines(flownText(LINES.slice(0, 2), {noise: 0.3})), ...ASKED]);
  expect({status, out}).toEqual({status: 0, out: "No two of 2 lines cross.\n"});
  // Nothing was carried, so nothing is said of how it was.
  expect(err).not.toContain("is carried by its own line's source");
});

test("a file of someone else in the folder is left alone", async () => {
  const out = temporaryFolder();
  writeFileSync(join(out, "crossings.csv"), "mine");
  const {status, err} = await run(["crossings", lines(), ...ASKED, "--out", out]);
  expect(status).toBe(2);
  expect(err).toMatch(/out\/foreign-file/);
  expect(readFileSync(join(out, "crossings.csv"), "utf8")).toBe("mine");
});
