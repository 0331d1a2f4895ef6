import {createHash} from "node:crypto";
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {levelSizes} from "../../lib/formats/cog-pyramid.ts";
import {type CogSettings, openCog} from "../../lib/formats/cog-write.ts";
import {openRaster} from "../../lib/formats/geotiff-read.ts";
import {memorySource, memoryStore} from "./memory.ts";
import {GEOREFERENCE} from "./tiff-bytes.ts";

/** A bump with a hole in it; band b is 1000 b higher. */
const surface = (row: number, column: number, band: number): number =>
  row % 37 === 5 && column % 11 < 3
    ? Number.NaN
    : Math.fround(band * 1000 + Math.sin(row / 40) * Math.cos(column / 25));

async function write(
  settings: Partial<CogSettings> & {width: number; height: number},
  rowsAtOnce = 7,
  value = surface,
) {
  const full: CogSettings = {bands: [{description: "a"}, {description: "b"}], georeference: GEOREFERENCE, ...settings};
  const scratch = memoryStore();
  const sink = memoryStore();
  const writer = openCog(full, scratch);
  for (let row0 = 0; row0 < full.height; row0 += rowsAtOnce) {
    const count = Math.min(rowsAtOnce, full.height - row0);
    const bands = full.bands.map((_, band) =>
      Float64Array.from({length: count * full.width}, (_, i) =>
        value(row0 + Math.floor(i / full.width), i % full.width, band),
      ),
    );
    await writer.writeRows(bands, count);
  }
  await writer.finish(sink);
  return sink.bytes();
}

async function read(bytes: Uint8Array, band: number) {
  const raster = await openRaster(memorySource(bytes, "out.tif"), {band});
  const values = new Float64Array(raster.width * raster.height);
  for await (const block of raster.rowBlocks()) values.set(block.values, block.row0 * raster.width);
  return {raster, values};
}

describe("what is written is read back", () => {
  for (const [width, height] of [
    [1, 1],
    [256, 256],
    [300, 200],
    [513, 40],
    [40, 1100],
    [1025, 1030],
  ] as const)
    for (const bigFrom of [undefined, 0])
      test(`${width} × ${height}${bigFrom === 0 ? ", BigTIFF" : ""}`, async () => {
        const bytes = await write({width, height, nodataText: "-99999", ...(bigFrom === 0 ? {bigFrom} : {})});
        expect(bytes[2]).toBe(bigFrom === 0 ? 43 : 42);
        for (const band of [1, 2]) {
          const {raster, values} = await read(bytes, band);
          expect([raster.width, raster.height, raster.bands, raster.nodata]).toEqual([width, height, 2, -99_999]);
          expect(raster.description).toBe(band === 1 ? "a" : "b");
          expect(raster.georeference).toEqual(GEOREFERENCE);
          const wrong = values.findIndex(
            (value, i) => !Object.is(value, surface(Math.floor(i / width), i % width, band - 1) + 0),
          );
          expect(wrong).toBe(-1);
        }
      });

  test("any rows, cut anywhere", async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.integer({min: 1, max: 40}),
        fc.integer({min: 1, max: 40}),
        fc.integer({min: 1, max: 9}),
        async (width, height, cut) => {
          const {values} = await read(await write({width, height}, cut), 1);
          expect(values.every((value, i) => Object.is(value, surface(Math.floor(i / width), i % width, 0) + 0))).toBe(
            true,
          );
        },
      ),
      {seed: 17, numRuns: 40},
    );
  });
  test("rows cut otherwise and written again give the same bytes", async () => {
    const digest = async (cut: number) =>
      createHash("sha256")
        .update(await write({width: 700, height: 530}, cut))
        .digest("hex");
    const first = await digest(1);
    expect(await digest(64)).toBe(first);
    expect(await digest(530)).toBe(first);
  });
  test("a reading equal to nodata stays a reading", async () => {
    for (const nodataText of ["0", "-9999", "12.5"]) {
      const {values} = await read(
        await write({width: 2, height: 1, nodataText}, 1, (_, column) =>
          column === 0 ? Number(nodataText) : Number.NaN,
        ),
        1,
      );
      // The next float towards zero, or beside zero the smallest: a change below float32's own rounding.
      expect(Math.abs(values[0]! - Number(nodataText))).toBeLessThanOrEqual(
        2 ** -23 * Math.abs(Number(nodataText)) + 2e-45,
      );
      expect(values[1]).toBeNaN();
    }
  });
  test("nodata that float32 cannot hold becomes NaN", async () => {
    const {raster, values} = await read(await write({width: 40, height: 7, nodataText: "-1.7976931348623157e+308"}), 1);
    expect([raster.nodataText, raster.nodata]).toEqual(["nan", Number.NaN]);
    expect(values.findIndex(Number.isNaN)).toBe(5 * 40);
  });
  test("what is infinite has no value", async () => {
    const {values} = await read(await write({width: 2, height: 1}, 1, (_, column) => (column === 0 ? 1e300 : 1)), 1);
    expect([...values]).toEqual([Number.NaN, 1]);
  });
});

test("levels are halved until they fit a tile", () => {
  expect(levelSizes(512, 512, 512)).toEqual([[512, 512]]);
  expect(levelSizes(513, 3, 512)).toEqual([
    [513, 3],
    [257, 2],
  ]);
  expect(levelSizes(3000, 1500, 512)).toEqual([
    [3000, 1500],
    [1500, 750],
    [750, 375],
    [375, 188],
  ]);
});

describe("misuse is a defect of the caller", () => {
  const settings: CogSettings = {width: 4, height: 2, bands: [{}], georeference: GEOREFERENCE};
  test("rows are missing", async () => {
    await expect(openCog(settings, memoryStore()).finish(memoryStore())).rejects.toThrow(/0 of 2 rows/);
  });
  test("rows are too many, or too short", async () => {
    const writer = openCog(settings, memoryStore());
    await expect(writer.writeRows([new Float64Array(12)], 3)).rejects.toThrow(/more than 2/);
    await expect(writer.writeRows([new Float64Array(3)], 1)).rejects.toThrow(/4 columns/);
    await expect(writer.writeRows([], 1)).rejects.toThrow(/1 bands/);
  });
});
