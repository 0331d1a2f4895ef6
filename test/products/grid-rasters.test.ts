import {expect, test} from "vitest";
import {openRaster} from "../../lib/formats/geotiff-read.ts";
import {gridProducts} from "../../lib/products/catalogue.ts";
import {fileSafe} from "../../lib/products/grid-rasters.ts";
import type {GridPlace, Opening} from "../../lib/products/opening.ts";
import type {RowBand, RowOutcome, RowStudy} from "../../lib/study/outcome.ts";
import {memorySource, memoryStore} from "../formats/memory.ts";
import {
  failedLine,
  frameFixture,
  LEVELS,
  rowOutcome,
  settingsFixture,
  surveyFixture,
} from "../harness/study-fixture.ts";
import {type KeptText, keptText} from "../harness/text-sink.ts";

/** 25 m pixels, the outer corner of the first at (500000, 7000000); EPSG:32633 by its number (key 3072). */
const PLACE: GridPlace = {
  georeference: {
    modelPixelScale: [25, 25, 0],
    modelTiepoint: [0, 0, 0, 500_000, 7_000_000, 0],
    modelTransformation: [],
    geoKeyDirectory: [1, 1, 0, 3, 1024, 0, 1, 1, 1025, 0, 1, 1, 3072, 0, 1, 32633],
    geoDoubleParams: [],
    geoAsciiParams: "",
  },
  nodataText: "-9999",
};

const WIDTH = 37;
const HEIGHT = 23;

function opening() {
  const texts = new Map<string, KeptText>();
  const bytes = new Map<string, ReturnType<typeof memoryStore>>();
  const open: Opening = {
    openText: (name) => {
      const sink = keptText();
      texts.set(name, sink);
      return sink;
    },
    openBytes: (name) => {
      const store = memoryStore();
      bytes.set(name, store);
      return store;
    },
    openScratch: memoryStore,
  };
  return {open, texts, bytes};
}

async function run(orientation: "rows" | "columns", outcomes: readonly RowOutcome[]) {
  const {open, texts, bytes} = opening();
  const products = await gridProducts(open, {version: "0.1.0", settings: settingsFixture()}, PLACE);
  const grid = {width: WIDTH, height: HEIGHT, orientation, step: 25, spacing: 25};
  const survey = surveyFixture({kind: "grid", grid, lineCount: orientation === "rows" ? HEIGHT : WIDTH});
  for (const product of products) await product.begin(frameFixture({survey}));
  for (const outcome of outcomes) for (const product of products) await product.row(outcome);
  for (const product of products) await product.end();
  return {texts, bytes};
}

async function pixels(
  file: Uint8Array,
  band: number,
): Promise<{values: Float64Array; unit: string; description: string}> {
  const raster = await openRaster(memorySource(file, "a.tif"), {band});
  const values = new Float64Array(raster.width * raster.height);
  for await (const block of raster.rowBlocks()) values.set(block.values, block.row0 * raster.width);
  return {values, unit: raster.unit ?? "", description: raster.description ?? ""};
}

const rows = (): RowOutcome[] => Array.from({length: HEIGHT}, (_, index) => rowOutcome(index, WIDTH));

/** The same grid of answers, cut into columns. */
function columns(): RowOutcome[] {
  const all = rows();
  return Array.from({length: WIDTH}, (_, index) => {
    const outcome = rowOutcome(index, HEIGHT);
    if (!("study" in outcome)) throw new Error("every row of the fixture has a study");
    const cut = (of: (study: RowStudy) => RowBand): RowBand => {
      const column = (key: keyof RowBand) =>
        Float64Array.from(all, (row) => ("study" in row ? of(row.study)[key][index]! : Number.NaN));
      return {value: column("value"), halfWidth: column("halfWidth")};
    };
    const study = {
      ...outcome.study,
      source: cut((s) => s.source),
      levels: LEVELS.map((setting, k) => ({setting, band: cut((s) => s.levels[k]!.band)})),
    };
    return {...outcome, study};
  });
}

test("a grid run writes source and levels, ledger and report", async () => {
  const {texts, bytes} = await run("rows", rows());
  expect([...bytes.keys()]).toEqual(["source_rowwise.tif", "level_0_rowwise.tif", "level_ground+2_rowwise.tif"]);
  expect([...texts.keys()]).toEqual(["lines.csv", "report.html"]);
  expect(texts.get("lines.csv")!.text().split("\n")).toHaveLength(HEIGHT + 2);
});

test("value and half-width stand in delivered units at the place of the input, with its nodata", async () => {
  const {bytes} = await run("rows", rows());
  const file = bytes.get("level_ground+2_rowwise.tif")!.bytes();
  const raster = await openRaster(memorySource(file, "a.tif"));
  expect([raster.width, raster.height, raster.bands, raster.sampleType]).toEqual([WIDTH, HEIGHT, 2, "float32"]);
  expect(raster.affine).toEqual({x0: 500_000, y0: 7_000_000, dxCol: 25, dyRow: -25});
  expect(raster.georeference.geoKeyDirectory).toEqual(PLACE.georeference.geoKeyDirectory);
  expect(raster.nodataText).toBe("-9999");
  const value = await pixels(file, 1);
  const half = await pixels(file, 2);
  expect([value.unit, half.unit]).toEqual(["nT", "nT"]);
  expect(value.description).toBe("field 2 m above the ground, row by row, two-dimensional");
  expect(half.description).toBe("half-width of the 95 % interval, row by row, two-dimensional");
  for (const outcome of rows()) {
    if (!("study" in outcome)) throw new Error("every row of the fixture has a study");
    const band = outcome.study.levels[1]!.band;
    for (let j = 0; j < WIDTH; ++j) {
      const at = outcome.index * WIDTH + j;
      // Division by the unit in double precision, then float32.
      expect(value.values[at]).toBe(Math.fround(band.value[j]! / 1e-9));
      expect(half.values[at]).toBe(Math.fround(band.halfWidth[j]! / 1e-9));
    }
  }
  // The fixture leaves a corner without readings.
  expect(value.values[0]).toBeNaN();
  expect(value.values[WIDTH - 1]).not.toBeNaN();
});

test("columns give the rasters that rows give", async () => {
  const byRow = await run("rows", rows());
  const byColumn = await run("columns", columns());
  expect([...byColumn.bytes.keys()]).toEqual([
    "source_columnwise.tif",
    "level_0_columnwise.tif",
    "level_ground+2_columnwise.tif",
  ]);
  for (const name of ["source", "level_0", "level_ground+2"])
    for (const band of [1, 2]) {
      const a = await pixels(byRow.bytes.get(`${name}_rowwise.tif`)!.bytes(), band);
      const b = await pixels(byColumn.bytes.get(`${name}_columnwise.tif`)!.bytes(), band);
      expect(b.values).toEqual(a.values);
      expect(b.description).toMatch(/column by column, two-dimensional$/);
    }
  // The pictures of the page are the same too.
  const pictures = (page: string) => page.match(/data:image\/png;base64,[^"]+/g)!;
  const first = pictures(byRow.texts.get("report.html")!.text());
  expect(first).toHaveLength(6);
  expect(pictures(byColumn.texts.get("report.html")!.text())).toEqual(first);
});

test("rows that failed, are missing or come out of order", async () => {
  const failed = failedLine("row 4");
  if ("study" in failed) throw new Error("a failed line has no study");
  const some: RowOutcome[] = rows().filter(({index}) => index < 20 && index !== 10);
  some[3] = {...failed, index: 3};
  const {bytes, texts} = await run("rows", some);
  const {values} = await pixels(bytes.get("source_rowwise.tif")!.bytes(), 1);
  const last = Array.from({length: HEIGHT}, (_, row) => Number.isNaN(values[row * WIDTH + WIDTH - 1]!));
  expect(last.flatMap((absent, row) => (absent ? [row] : []))).toEqual([3, 10, 20, 21, 22]);
  expect(texts.get("lines.csv")!.text()).toMatch(/^row 4,failed,/m);
  await expect(run("rows", [...rows().slice(0, 3), ...rows().slice(1, 2)])).rejects.toThrow(/came after/);
});

test("the same rows give the same bytes", async () => {
  const [a, b] = [await run("rows", rows()), await run("rows", rows())];
  for (const [name, store] of a.bytes) expect(Buffer.compare(store.bytes(), b.bytes.get(name)!.bytes())).toBe(0);
});

test("a level's label is safe as part of a file name", () => {
  expect(fileSafe("ground+10")).toBe("ground+10");
  expect(fileSafe("2.5")).toBe("2.5");
  expect(fileSafe("../a b\\ü")).toBe("..%2Fa%20b%5C%C3%BC");
});
