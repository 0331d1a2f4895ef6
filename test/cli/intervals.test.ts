/** `--intervals simultaneous` from the command line to every file. */
import {readFileSync} from "node:fs";
import {join} from "node:path";
import {expect, test} from "vitest";
import {parsedCsv} from "../harness/text-sink.ts";
import {fileWith, gridBytes, run, surveyText, temporaryFolder} from "./harness.ts";

const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--strip", "dyke=200:260"];
const flat = (text: string): string => text.replaceAll(/\s+/g, " ");

async function continued(more: readonly string[]) {
  const out = join(temporaryFolder(), "out");
  const survey = fileWith("lines.csv", surveyText(["L1"]));
  const result = await run(["continue", survey, ...SETTINGS, "--level", "0", "--level", "10", ...more, "--out", out]);
  expect(result.status).toBe(0);
  const text = (name: string): string => readFileSync(join(out, name), "utf8");
  return {...result, text, table: (name: string) => parsedCsv(text(name))};
}

test("a simultaneous band is told as such wherever intervals are described, and is wider", async () => {
  const single = await continued([]);
  const band = await continued(["--intervals", "simultaneous", "--also", "gdf2"]);
  const promise = /Simultaneous band: holds for all numbers of the line at once at 95.%/;
  const report = flat(band.text("report.html"));
  expect(report).toMatch(promise);
  expect(report).toMatch(/95.% simultaneous band of the mean/);
  expect(report).toMatch(/<dt>Intervals<\/dt><dd>simultaneous band: holds for all numbers of the line at once at 95.%/);
  expect(report).toMatch(/On the boundary a point has no bound at all/);
  expect(report).not.toMatch(/95.% interval/);
  expect(flat(band.err)).toMatch(promise);
  expect(flat(band.err)).toMatch(/On the boundary a point has no bound at all/);
  expect(band.out).toMatch(/95 % band/);
  const record = JSON.parse(band.text("record.json"));
  expect(record.settings.wanted.intervals).toBe("simultaneous");
  expect(record.intervals["given-bound"]).toMatch(promise);
  expect(band.text("levels.dfn")).toMatch(/95 % simultaneous band/);
  const [one] = single.table("strips.csv");
  const [all] = band.table("strips.csv");
  const width = (row: Readonly<Record<string, string>> | undefined): number =>
    Number(row?.["upper_kg/m2"]) - Number(row?.["lower_kg/m2"]);
  expect(width(all)).toBeGreaterThan(width(one));
  expect(all?.["interval_basis"]).toBe("given-bound");
  // The columns are the same.
  expect(Object.keys(all ?? {})).toEqual(Object.keys(one ?? {}));
  // The strip's own 0.6 mGal: 0.6e-5 / (2πG) kg/m².
  const truth = 0.6e-5 / (2 * Math.PI * 6.6743e-11);
  expect(Number(all?.["lower_kg/m2"])).toBeLessThan(truth);
  expect(Number(all?.["upper_kg/m2"])).toBeGreaterThan(truth);
});

test("single intervals make no such promise", async () => {
  const {err, text} = await continued([]);
  expect(`${err}${text("report.html")}${text("record.json")}`).not.toMatch(/[Ss]imultaneous/);
  expect(JSON.parse(text("record.json")).settings.wanted.intervals).toBe("single");
});

test("a folder of the other kind is told from this run by the option", async () => {
  const out = join(temporaryFolder(), "out");
  const survey = fileWith("lines.csv", surveyText(["L1"]));
  const args = ["continue", survey, ...SETTINGS, "--out", out];
  expect((await run(args)).status).toBe(0);
  const {status, err} = await run([...args, "--intervals", "simultaneous"]);
  expect(status).not.toBe(0);
  expect(flat(err)).toMatch(/--intervals was "?single"? and is "?simultaneous"?/);
});

test("a grid is refused", async () => {
  const grid = fileWith("grid.tif", gridBytes());
  const out = join(temporaryFolder(), "out");
  const given = ["--observable", "field-vertical", "--noise", "1", "--clearance", "60", "--elevation", "100"];
  const {status, err} = await run(["continue", grid, ...given, "--intervals", "simultaneous", "--out", out]);
  expect(status).not.toBe(0);
  expect(flat(err)).toMatch(/--intervals simultaneous makes a band for all numbers of one line.*\[intervals\/grid\]/);
});
