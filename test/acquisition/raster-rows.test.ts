import {describe, expect, test} from "vitest";
import {openSurvey} from "../../lib/acquisition/catalogue.ts";
import {EMPTY_ROW, openRasterSurvey} from "../../lib/acquisition/raster-rows.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {shorts} from "../../lib/formats/tiff-directory-write.ts";
import {TAG} from "../../lib/formats/tiff-tags.ts";
import {failure, memorySource} from "../formats/memory.ts";
import {floatBytes, plainTags, tiffBytes} from "../formats/tiff-bytes.ts";
import {failuresOf, linesOf, settingsWith} from "./settings.ts";

const NO = Number.NaN;
/** 4 columns × 3 rows from (500000, 7000000), pixels 50 m wide and 25 m high; mGal. */
const GRID = [1, NO, 3, 4, NO, NO, NO, 8, 9, 10, 11, 12];
const grid = (values = GRID, changes: Parameters<typeof tiffBytes>[2] = []) =>
  memorySource(tiffBytes(plainTags(4, 3), floatBytes(values), changes), "grid.tif");
const open = (own: Partial<AcquisitionSettings> = {}, source = grid()) => openRasterSurvey(source, settingsWith(own));

describe("a grid by rows", () => {
  test("has a line for each row, with the columns of its pixels", async () => {
    const survey = await open();
    expect(survey).toMatchObject({
      kind: "grid",
      lineCount: 3,
      delivered: "EPSG:32755",
      grid: {width: 4, height: 3, orientation: "rows", step: 50, spacing: 25},
    });
    expect(survey.axes).toMatchObject([{group: "G1", azimuth: 90, origin: [500025, 6999987.5]}]);
    const records = [];
    for await (const record of survey.lines()) records.push(record);
    const [first, second, third] = records;
    expect(second).toMatchObject({id: "row-2", failure: {code: EMPTY_ROW}});
    if (!("line" in first!) || !("line" in third!)) throw new Error("rows 1 and 3 are lines");
    const {stations} = first.line;
    expect([...stations.row]).toEqual([1, 3, 4]);
    expect([...stations.chainage]).toEqual([0, 100, 150]);
    expect([...stations.x!]).toEqual([500025, 500125, 500175]);
    expect([...stations.y!]).toEqual([6999987.5, 6999987.5, 6999987.5]);
    expect([...stations.clearance!]).toEqual([10, 10, 10]);
    expect([...first.line.channels[0]!.values]).toEqual([1e-5, 3 * 1e-5, 4 * 1e-5]);
    expect(first.line.omitted).toBe(1);
    // South of the first row is to the right of east.
    expect([...third.line.stations.offset]).toEqual([-50, -50, -50, -50]);
    expect(third.line.locate!(-25)).toEqual([500000, 6999937.5]);
  });

  test("by columns runs north, row numbers from the top", async () => {
    const survey = await open({profiles: "columns"});
    expect(survey.axes).toMatchObject([{azimuth: 0, origin: [500025, 6999937.5]}]);
    expect(survey.grid).toMatchObject({step: 25, spacing: 50});
    expect(await failuresOf(survey)).toEqual(new Map([["column-2", EMPTY_ROW]]));
    for await (const record of survey.lines()) {
      if (!("line" in record) || record.line.id !== "column-4") continue;
      const {stations, direction, locate} = record.line;
      expect([...stations.row]).toEqual([1, 2, 3]);
      expect([...stations.chainage]).toEqual([50, 25, 0]);
      expect([...stations.offset]).toEqual([-150, -150, -150]);
      expect(direction).toBe(-1);
      expect(locate!(50)).toEqual([500175, 6999987.5]);
    }
  });
});

describe("a grid is refused", () => {
  const noise = (given: number | "record" | undefined) => ({
    channels: [{role: "value", observable: "gravity", unit: undefined, noise: given}],
  });

  test("without noise in numbers, unless it is only looked at", async () => {
    for (const given of [undefined, "record"] as const) {
      const found = await failure(() => open(noise(given)));
      expect(found.code).toBe("noise/grid-needs-number");
      expect(found.message).toMatch(/interpolated.*--noise S/);
    }
    expect(
      (
        await linesOf(
          await open({...noise(undefined), inspecting: true}, grid([1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12])),
        )
      ).length,
    ).toBe(3);
  });

  test("in degrees", async () => {
    const degrees = shorts(TAG.geoKeyDirectory, 1, 1, 0, 3, 1024, 0, 1, 2, 1025, 0, 1, 1, 2048, 0, 1, 4326);
    const found = await failure(() => open({}, grid(GRID, [degrees])));
    expect(found.code).toBe("grid/geographic");
    expect(found.message).toMatch(/gdalwarp/);
  });

  test("without a height, without a pixel, with columns, with two channels", async () => {
    const high = await failure(() => open({clearance: undefined}));
    expect(high.code).toBe("height/none");
    expect(high.message).toMatch(/Give --clearance H .* or --elevation Z/);
    expect(high.message).not.toMatch(/column/);
    expect((await failure(() => open({}, grid(GRID.map(() => NO))))).code).toBe("grid/empty");
    expect((await failure(() => open({columns: new Map([["value", "a"]])}))).code).toBe("grid/columns-asked");
    const two = [...settingsWith().channels, {role: "value.2", observable: "gravity", unit: undefined, noise: 1}];
    expect((await failure(() => open({channels: two}))).code).toBe("grid/one-channel");
  });

  test("when it holds whole readings", async () => {
    const found = await failure(() => open({}, grid(GRID.map((v) => v + 979000))));
    expect(found.code).toBe("value/not-an-anomaly");
  });
});

describe("the kind of a source", () => {
  const table = memorySource("x,y,value\n0,0,1\n1,0,2\n", "grid-like-name.tif");

  test("is told by content, not by name", async () => {
    expect((await openSurvey([table], settingsWith())).kind).toBe("lines");
    expect((await openSurvey([grid()], settingsWith())).kind).toBe("grid");
  });

  test("must be one", async () => {
    const mixed = await failure(() => openSurvey([table, grid()], settingsWith()));
    expect(mixed.code).toBe("survey/mixed-kinds");
    expect(mixed.message).toMatch(/grid-like-name\.tif is a table, grid\.tif a GeoTIFF grid/);
    expect((await failure(() => openSurvey([grid(), grid()], settingsWith()))).code).toBe("survey/several-grids");
    expect((await failure(() => openSurvey([], settingsWith()))).code).toBe("survey/no-file");
  });
});
