import {describe, expect, test} from "vitest";
import {openSurvey} from "../../lib/acquisition/catalogue.ts";
import {openRasterSurvey} from "../../lib/acquisition/raster-rows.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {OFF_GRID} from "../../lib/acquisition/transects.ts";
import {parseGeoJson} from "../../lib/formats/geojson.ts";
import {doubles, shorts} from "../../lib/formats/tiff-directory-write.ts";
import {TAG} from "../../lib/formats/tiff-tags.ts";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {transformation} from "../../lib/geometry/transformation.ts";
import {inspectSurvey} from "../../lib/survey/inspection.ts";
import {failure, memorySource} from "../formats/memory.ts";
import {floatBytes, plainTags, tiffBytes} from "../formats/tiff-bytes.ts";
import {failuresOf, linesOf, settingsWith} from "./settings.ts";

/** Columns and rows of pixels of 50 × 25 m; the centre of the first is (500025, 6999987.5) in EPSG:32755. */
const [WIDTH, HEIGHT] = [12, 20];
const NO = Number.NaN;
const gridOf = (value: (column: number, row: number) => number, changes: Parameters<typeof tiffBytes>[2] = []) => {
  const values = Array.from({length: WIDTH * HEIGHT}, (_, i) => value(i % WIDTH, Math.floor(i / WIDTH)));
  return memorySource(tiffBytes(plainTags(WIDTH, HEIGHT), floatBytes(values), changes), "grid.tif");
};
const plane = (column: number, row: number): number => 8 * column + 3 * row;

const degrees = transformation(coordinateSystem("EPSG:32755"), coordinateSystem("EPSG:4326"));
/** A position by column and row of the grid, whole numbers at the centres of pixels. */
const at = (column: number, row: number) => degrees.apply(500025 + 50 * column, 6999987.5 - 25 * row);
const lines = (...features: (readonly [name: string | undefined, ...positions: (readonly [number, number])[]])[]) =>
  parseGeoJson(
    JSON.stringify({
      type: "FeatureCollection",
      features: features.map(([name, ...positions]) => ({
        type: "Feature",
        properties: name === undefined ? null : {name},
        geometry: {type: "LineString", coordinates: positions.map(([column, row]) => at(column, row))},
      })),
    }),
    "transects.geojson",
  );
const open = (
  profiles: AcquisitionSettings["profiles"],
  grid = gridOf(plane),
  own: Partial<AcquisitionSettings> = {},
) => openRasterSurvey(grid, settingsWith({profiles, ...own}));
const column = (x: number) => (x - 500025) / 50;
const row = (y: number) => (6999987.5 - y) / 25;

describe("a transect", () => {
  test("reads a plane exactly at the pixel spacing, from its first position on", async () => {
    for (const sampling of ["bilinear", "cubic"] as const) {
      const survey = await open(lines(["A", [9, 16], [2, 4]]), gridOf(plane), {sampling});
      expect(survey).toMatchObject({kind: "lines", grid: undefined, lineCount: 1, delivered: "EPSG:32755"});
      expect(survey.files).toEqual(["grid.tif", "transects.geojson"]);
      const [line] = await linesOf(survey);
      const {stations, channels, direction, omitted} = line!;
      const length = Math.hypot(7 * 50, 12 * 25);
      expect(line!.id).toBe("A");
      expect({count: stations.count, direction, omitted}).toEqual({
        count: Math.floor(length / 25) + 1,
        direction: 1,
        omitted: 0,
      });
      for (let i = 0; i < stations.count; ++i) {
        expect(stations.chainage[i]!).toBeCloseTo(25 * i, 6);
        // Degrees to metres and back leave some micrometres.
        expect(Math.abs(stations.offset[i]!)).toBeLessThan(1e-4);
        const [c, r] = [column(stations.x![i]!), row(stations.y![i]!)];
        expect(c).toBeCloseTo(9 - (7 * 25 * i) / length, 5);
        expect(channels[0]!.values[i]!).toBeCloseTo(1e-5 * plane(c, r), 12);
      }
      expect(line!.locate!(0)[0]).toBeCloseTo(stations.x![0]!, 4);
      expect(line!.track!.system?.name).toBe("EPSG:32755");
    }
  });

  test("by cubic convolution follows a parabola, which straight lines miss by an eighth between pixels", async () => {
    const parabola = (c: number): number => c * c;
    const along = lines(["A", [2.25, 5], [8.25, 5]]);
    const errors = async (sampling: "bilinear" | "cubic") => {
      const [line] = await linesOf(await open(along, gridOf(parabola), {sampling}));
      return Array.from(
        line!.channels[0]!.values,
        (value, i) => value / 1e-5 - parabola(column(line!.stations.x![i]!)),
      );
    };
    for (const error of await errors("cubic")) expect(Math.abs(error)).toBeLessThan(1e-4);
    // At t between two pixels, straight less parabola is t (1 − t): 3/16 at a quarter.
    for (const error of await errors("bilinear")) expect(error).toBeCloseTo(3 / 16, 4);
  });

  test("has no reading where it touches a pixel without a value, and one on the centres beside it", async () => {
    const hole = (c: number, r: number): number => (c === 5 && r === 5 ? NO : plane(c, r));
    const rows = async (r: number, sampling: "bilinear" | "cubic") => {
      const [line] = await linesOf(await open(lines(["A", [0, r], [11, r]]), gridOf(hole), {sampling}));
      return {seen: Array.from(line!.stations.x!, (x) => Math.round(2 * column(x)) / 2 + 0), omitted: line!.omitted};
    };
    const halves = Array.from({length: 23}, (_, i) => i / 2);
    expect((await rows(5, "bilinear")).seen).toEqual(halves.filter((c) => !(c > 4 && c < 6)));
    expect((await rows(5.5, "bilinear")).seen).toEqual(halves.filter((c) => !(c > 4 && c < 6)));
    expect((await rows(4, "bilinear")).omitted).toBe(0);
    // Four pixels each way: at the rim of the grid there are none beyond, and the hole reaches two pixels.
    expect((await rows(6.5, "cubic")).seen).toEqual(
      halves.filter(
        (c) => c >= 0 && c <= 11 && !(c === 0.5 || c === 10.5) && !(c === 5 || (c > 3 && c < 7 && c % 1 !== 0)),
      ),
    );
  });

  test("counts what lies off the grid and reads only what lies on it", async () => {
    const [line] = await linesOf(await open(lines(["A", [-40, 5], [40, 5]])));
    expect(line!.stations.count).toBe(23);
    expect(line!.omitted).toBe(161 - 23);
    expect(line!.stations.chainage[0]!).toBeCloseTo(2000, 5);
    expect(line!.stations.row[0]).toBe(81);
  });

  test("that bends keeps its offsets, with a doubt", async () => {
    const [line] = await linesOf(await open(lines(["bent", [0, 0], [6, 12], [0, 19]])));
    expect(line!.notices.map(({code}) => code)).toContain("line/bends");
    expect(Math.max(...line!.stations.offset.map(Math.abs))).toBeGreaterThan(280);
    const {chainage, offset, x, y} = line!.stations;
    expect(chainage.at(-1)!).toBeLessThanOrEqual(19 * 25);
    expect(Math.hypot(x![3]! - x![0]!, y![3]! - y![0]!)).toBeCloseTo(Math.hypot(chainage[3]!, offset[3]!), 6);
  });

  test("off the grid or on nodata is a line without a reading", async () => {
    const survey = await open(lines(["far", [200, 0], [210, 9]], ["near", [0, 0], [3, 3]]));
    expect(await failuresOf(survey)).toEqual(new Map([["far", OFF_GRID]]));
  });

  test("takes its name from its property, a number where it has none, and tells repeats apart", async () => {
    const survey = await open(lines(["A", [0, 0], [3, 3]], [undefined, [0, 1], [3, 4]], ["A", [0, 2], [3, 5]]));
    expect((await linesOf(survey)).map(({id}) => id)).toEqual(["A.1", "1", "A.2"]);
    expect(survey.notices.map(({code}) => code)).toContain("line/repeated-identifier");
  });

  test("shows no noise and has no neighbours when it is looked at", async () => {
    const inspection = await inspectSurvey(await open(lines(["A", [0, 0], [9, 9]], ["B", [0, 1], [9, 10]])));
    expect(inspection.neighbours).toBeUndefined();
    expect(inspection.lines.every(({channels}) => channels[0]!.noise === undefined)).toBe(true);
  });
});

describe("transects are refused", () => {
  const polygon = parseGeoJson(
    JSON.stringify({type: "Polygon", coordinates: [[at(0, 0), at(1, 0), at(1, 1), at(0, 0)]]}),
    "transects.geojson",
  );
  const noSystem = [doubles(TAG.modelPixelScale, [50, 25, 0]), shorts(TAG.geoKeyDirectory)];
  test.each<[string, () => Promise<unknown>, string, RegExp]>([
    ["that are polygons", () => open(polygon), "transect/not-a-line", /feature 1 is a polygon/],
    [
      "at one place",
      () => open(lines(["A", [1, 1], [1, 1]])),
      "transect/one-place",
      /\("A"\) has 2 positions at one place/,
    ],
    ["that close", () => open(lines(["A", [1, 1], [5, 5], [1, 1]])), "transect/closed", /ends where it begins/],
    [
      "together with --every",
      () => open(lines(["A", [1, 1], [5, 5]]), gridOf(plane), {every: 2}),
      "transect/every",
      /--every 2/,
    ],
    [
      "where the grid's system is not known",
      () => open(lines(["A", [1, 1], [5, 5]]), gridOf(plane, noSystem)),
      "transect/no-crs",
      /--crs EPSG:n/,
    ],
    [
      "across a table",
      () =>
        openSurvey([memorySource("x,y,value\n0,0,1\n1,0,2\n")], settingsWith({profiles: lines(["A", [1, 1], [5, 5]])})),
      "survey/not-a-grid",
      /--profiles transects\.geojson/,
    ],
  ])("%s", async (_, run, code, words) => {
    const found = await failure(run);
    expect(found.code).toBe(code);
    expect(found.message).toMatch(words);
  });
});

describe("each n-th row", () => {
  test("is a line of its own", async () => {
    const survey = await open("rows", gridOf(plane), {every: 8});
    expect(survey).toMatchObject({kind: "lines", grid: undefined, lineCount: 3});
    const found = await linesOf(survey);
    expect(found.map(({id}) => id)).toEqual(["row-01", "row-09", "row-17"]);
    expect([...found[1]!.channels[0]!.values]).toEqual(Array.from({length: WIDTH}, (_, c) => plane(c, 8) * 1e-5));
    expect((await linesOf(await open("columns", gridOf(plane), {every: 11}))).map(({id}) => id)).toEqual([
      "column-01",
      "column-12",
    ]);
  });

  test("is no option of a table", async () => {
    const table = memorySource("x,y,value\n0,0,1\n1,0,2\n");
    expect((await failure(() => openSurvey([table], settingsWith({every: 2})))).message).toMatch(
      /--every 2 takes lines/,
    );
    expect((await failure(() => openSurvey([table], settingsWith({sampling: "cubic"})))).code).toBe(
      "survey/not-a-grid",
    );
  });
});
