/** The demonstration survey: made anew it is the one in the folder, and what its README says of it is true. */
import {mkdtempSync, readFileSync, rmSync} from "node:fs";
import {tmpdir} from "node:os";
import {join} from "node:path";
import {afterAll, beforeAll, describe, expect, test} from "vitest";
import {makeSurvey} from "../data-demo/make.ts";
import {drawPicture, SM_05} from "../data-demo/picture.ts";
import {openSurvey} from "../lib/acquisition/catalogue.ts";
import {openRaster} from "../lib/formats/geotiff-read.ts";
import {totalLength} from "../lib/geometry/interval.ts";
import {MAGNETIC_LAYER} from "../lib/potential/source-law.ts";
import {studySurvey} from "../lib/study/survey-study.ts";
import {fileSource} from "./harness/file-source.ts";
import {parsedCsv} from "./harness/text-sink.ts";

const FOLDER = "data-demo";
let made: string;
beforeAll(async () => {
  made = mkdtempSync(join(tmpdir(), "groundward-demo-"));
  await makeSurvey(made);
});
afterAll(() => rmSync(made, {recursive: true, force: true}));

const truth = parsedCsv(readFileSync(join(FOLDER, "skelder-moor-truth.csv"), "utf8"));
const sheetsOf = (line: string) =>
  truth
    .filter((sheet) => sheet["line"] === line)
    .map((sheet) => ({
      body: sheet["body"],
      from: Number(sheet["from_m"]),
      to: Number(sheet["to_m"]),
      magnetisation: Number(sheet["magnetisation_A/m"]),
    }));

describe("made anew", () => {
  test.each([
    "skelder-moor-lines.csv",
    "skelder-moor-sm-05.csv",
    "skelder-moor-truth.csv",
    "skelder-moor-support.geojson",
  ])("%s has the same bytes", (name) => {
    expect(readFileSync(join(made, name), "utf8")).toBe(readFileSync(join(FOLDER, name), "utf8"));
  });

  test("the grid has the same pixels in the same place", async () => {
    // Not the same bytes: deflate may differ between versions of Node.
    const [there, here] = await Promise.all(
      [FOLDER, made].map((folder) => openRaster(fileSource(join(folder, "skelder-east-grid.tif")))),
    );
    expect([here!.width, here!.height]).toEqual([160, 64]);
    expect(here!.georeference).toEqual(there!.georeference);
    expect(here!.nodataText).toBe("-99999");
    const pixels = async (raster: typeof here) => {
      const rows: number[] = [];
      for await (const block of raster!.rowBlocks()) rows.push(...block.values);
      return rows;
    };
    const values = await pixels(here);
    expect(values).toHaveLength(160 * 64);
    expect(values.filter(Number.isNaN)).toHaveLength(30 * 16);
    expect(values).toEqual(await pixels(there));
  });

  test("the picture of README is what the program draws", async () => {
    expect(await drawPicture(made)).toBe(readFileSync(join(FOLDER, "skelder-moor-sm-05.svg"), "utf8"));
  });
});

describe("what the README says of it", () => {
  test("the bound of the demonstration lies above the truth of every line", () => {
    const length = totalLength(SM_05.model.support.flatMap((zone) => ("area" in zone ? [] : [zone])));
    const rms = [...new Set(truth.map((sheet) => sheet["line"]!))].map((line) => {
      const squares = sheetsOf(line).map(
        ({from, to, magnetisation}) => (magnetisation / MAGNETIC_LAYER.densityPerField) ** 2 * (to - from),
      );
      return 1e9 * Math.sqrt(squares.reduce((sum, square) => sum + square, 0) / length);
    });
    expect(rms).toHaveLength(12);
    expect(Math.max(...rms)).toBeLessThan(350);
    // And not by so much that the demonstration would show nothing.
    expect(Math.min(...rms)).toBeGreaterThan(175);
  });

  test("no source lies above the boundary, and every interval of the demonstration holds the truth", async () => {
    const survey = await openSurvey([fileSource(join(FOLDER, "skelder-moor-lines.csv"))], SM_05.acquisition);
    let held = 0;
    let asked = 0;
    for await (const outcome of studySurvey(survey, SM_05)) {
      if (!("study" in outcome)) throw outcome.failure;
      const {line, conditioned, strips} = outcome.study;
      const boundary = line.stations.elevation![0]! - conditioned.height[0]!;
      expect(boundary).toBeGreaterThanOrEqual(83.45);
      expect(boundary).toBeLessThan(83.45 + 0.305);
      for (const {strip, lower, upper} of strips) {
        const sheets = sheetsOf(line.id).filter(({body}) => body === strip.name);
        const total = sheets.reduce((sum, {from, to, magnetisation}) => sum + magnetisation * (to - from), 0);
        const mean = total / (strip.to - strip.from) / MAGNETIC_LAYER.densityPerField;
        ++asked;
        if (lower <= mean && mean <= upper) ++held;
      }
    }
    // 0.95 would be kept with 23 of 24 too; for this seed it is all.
    expect({held, asked}).toEqual({held: 24, asked: 24});
  });
});
