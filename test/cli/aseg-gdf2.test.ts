/** ASEG-GDF2 pairs as files: one is named, the other found beside it; and the pair that --also gdf2 writes. */
import {readFileSync} from "node:fs";
import {join} from "node:path";
import {describe, expect, test} from "vitest";
import {parsedCsv} from "../harness/text-sink.ts";
import {contents, fileWith, gridBytes, run, surveyText, temporaryFolder} from "./harness.ts";

const DEFINITION = [
  "DEFN   ST=RECD,RT=COMM;RT:A4;COMMENTS:A76",
  "DEFN 1 ST=RECD,RT=;LINE:A4",
  "DEFN 2 ST=RECD,RT=;CHAINAGE:F8.1:UNIT=m",
  "DEFN 3 ST=RECD,RT=;CLEARANCE:F8.1:UNIT=m",
  "DEFN 4 ST=RECD,RT=;GRAVITY:F12.5:UNIT=mGal,NULL=-99.99999,NAME=Gravity anomaly",
  "DEFN 5 ST=RECD,RT=;END DEFN",
  "",
].join("\n");

/** The same numbers as the survey in CSV. */
const DATA = surveyText(["L1"])
  .split("\n")
  .slice(1, -1)
  .map((row) => {
    const [line, chainage, clearance, gravity] = row.split(",") as [string, string, string, string];
    return `${line.padEnd(4)}${Number(chainage).toFixed(1).padStart(8)}${Number(clearance).toFixed(1).padStart(8)}${gravity.padStart(12)}\n`;
  })
  .join("");

function pairIn(folder: string, [first, second] = ["lines.dfn", "lines.dat"]): [string, string] {
  return [fileWith(first!, DEFINITION, folder), fileWith(second!, DATA, folder)];
}
const SETTINGS = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:0.5", "--quiet"];
const levels = (out: string) =>
  parsedCsv(readFileSync(join(out, "levels.csv"), "utf8")).map(({row: _, ...rest}) => rest);

describe("a pair as survey", () => {
  test("gives the answers of the same survey in CSV, whichever of the two is named", async () => {
    const root = temporaryFolder();
    const [definition, data] = pairIn(root);
    const csv = fileWith("lines.csv", surveyText(["L1"]), root);
    for (const [name, ...paths] of [
      ["dfn", definition],
      ["dat", data],
      ["both", data, definition],
      ["csv", csv],
    ]) {
      const result = await run(["continue", ...paths, ...SETTINGS, "--out", join(root, name!)]);
      expect({status: result.status, err: result.err}).toEqual({status: 0, err: ""});
    }
    const wanted = levels(join(root, "csv"));
    expect(wanted).toHaveLength(60);
    for (const name of ["dfn", "dat", "both"]) expect(levels(join(root, name))).toEqual(wanted);
    const record = JSON.parse(readFileSync(join(root, "dat", "record.json"), "utf8"));
    expect(record.inputs.map(({file}: {file: string}) => file)).toEqual(["lines.dat", "lines.dfn"]);
  });

  test("is found under names in capitals, with its description", async () => {
    const root = temporaryFolder();
    const [definition] = pairIn(root, ["LINES.DFN", "LINES.DAT"]);
    fileWith("LINES.DES", "COMM Flown low\n", root);
    const result = await run(["inspect", definition, "--observable", "gravity"]);
    expect(result.status).toBe(0);
    expect(result.err.replaceAll(/\s+/g, " ")).toContain("What is told of LINES.DAT: Flown low");
    expect(result.err.replaceAll(/\s+/g, " ")).toContain("is read in mGal, its UNIT");
  });

  test("without an observable is inspected in the unit of its kind", async () => {
    const [definition] = pairIn(temporaryFolder());
    const result = await run(["inspect", definition]);
    expect(result.status).toBe(0);
    expect(result.err.replaceAll(/\s+/g, " ")).toContain("No --observable was given: readings stand in mGal");
  });

  test("with its data missing, or a data file without a definition, is refused", async () => {
    const lonely = fileWith("lines.dfn", DEFINITION);
    const missing = await run(["inspect", lonely]);
    expect(missing.status).toBe(2);
    expect(missing.err).toContain("[gdf2/no-data]");
    const data = await run(["inspect", fileWith("lines.dat", DATA)]);
    expect(data.status).toBe(2);
  });

  test("that does not fit is refused with file and row, and leaves nothing behind", async () => {
    const root = temporaryFolder();
    const [definition] = pairIn(root);
    fileWith("lines.dat", DATA.replace("30.0", "30.x"), root);
    const out = join(root, "out");
    const result = await run(["continue", definition, ...SETTINGS, "--out", out]);
    expect(result.status).toBe(2);
    expect(result.err.replaceAll(/\s+/g, " ")).toMatch(/lines\.dat, row 1 does not fit .*\[gdf2\/row-does-not-fit\]/);
    expect(contents(out)).toEqual([]);
  });

  test("with a unit other than the one asked for is refused", async () => {
    const [definition] = pairIn(temporaryFolder());
    const result = await run(["inspect", definition, "--observable", "gravity", "--unit", "um/s2"]);
    expect(result.status).toBe(2);
    expect(result.err).toContain("[unit/conflict]");
  });
});

describe("--also gdf2", () => {
  test("adds a pair that this program reads, the same bytes every time", async () => {
    const root = temporaryFolder();
    // With map coordinates, so that no column of the pair is empty.
    const text = surveyText(["L1", "L2"])
      .replaceAll(/^(\w+,\w+),/gm, "$1,5000,")
      .replace("chainage,5000", "x,y");
    const survey = fileWith("lines.csv", text, root);
    const [one, two] = [join(root, "one"), join(root, "two")];
    for (const out of [one, two]) {
      const args = ["continue", survey, ...SETTINGS, "--level", "0", "--level", "10", "--also", "gdf2", "--out", out];
      expect((await run(args)).status).toBe(0);
    }
    expect(contents(one)).toContain("levels.dfn");
    expect(contents(one)).toContain("levels.dat");
    for (const name of ["levels.dfn", "levels.dat", "record.json"])
      expect(readFileSync(join(two, name)).equals(readFileSync(join(one, name)))).toBe(true);
    const record = JSON.parse(readFileSync(join(one, "record.json"), "utf8"));
    expect(record.outputs.map(({file}: {file: string}) => file)).toContain("levels.dat");
    expect(record.settings.wanted.also).toEqual(["gdf2"]);
    const columns = ["--column", "value=FIELD", "--column", "clearance=LEVEL"];
    const read = await run(["inspect", join(one, "levels.dat"), "--observable", "gravity", ...columns, "--json"]);
    expect(read.status).toBe(0);
    const stations = JSON.parse(read.out).lines.map((line: {line: string; stations: number}) => line.stations);
    expect(stations).toEqual([120, 120]);
  });

  test("is refused for a grid, and in another word", async () => {
    const root = temporaryFolder();
    const grid = fileWith("grid.tif", gridBytes(), root);
    const out = join(root, "out");
    const asGrid = ["continue", grid, "--observable", "field-vertical", "--clearance", "60", "--noise", "1"];
    const refused = await run([...asGrid, "--also", "gdf2", "--out", out]);
    expect(refused.status).toBe(2);
    expect(refused.err).toContain("[option/lines-only]");
    expect(contents(out)).toEqual([]);
    const survey = fileWith("lines.csv", surveyText(), root);
    const unknown = await run(["continue", survey, ...SETTINGS, "--also", "gdf", "--out", out]);
    expect(unknown.status).toBe(2);
    expect(unknown.err).toContain("Give gdf2.");
  });

  test("does not write over a levels.dat of someone else's", async () => {
    const root = temporaryFolder();
    const survey = fileWith("lines.csv", surveyText(), root);
    const out = temporaryFolder();
    fileWith("levels.dat", "mine", out);
    const refused = await run(["continue", survey, ...SETTINGS, "--also", "gdf2", "--out", out]);
    expect(refused.err).toContain("[out/foreign-file]");
    expect(readFileSync(join(out, "levels.dat"), "utf8")).toBe("mine");
    expect((await run(["continue", survey, ...SETTINGS, "--out", out])).status).toBe(0);
  });
});
