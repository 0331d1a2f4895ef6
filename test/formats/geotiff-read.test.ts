import {deflateSync} from "node:zlib";
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {affineOf, pixelCentreX, pixelCentreY} from "../../lib/formats/affine.ts";
import {bandMetadata, metadataXml} from "../../lib/formats/gdal-metadata.ts";
import {crsOf} from "../../lib/formats/geokeys.ts";
import {openRaster} from "../../lib/formats/geotiff-read.ts";
import {nodataNumber, nodataRange} from "../../lib/formats/nodata.ts";
import {ascii, doubles, longs, shorts, type TagToWrite} from "../../lib/formats/tiff-directory-write.ts";
import {TAG} from "../../lib/formats/tiff-tags.ts";
import {failure, memorySource} from "./memory.ts";
import {floatBytes, GEOREFERENCE, plainTags, tiffBytes} from "./tiff-bytes.ts";

const DATA = floatBytes([1, 2, 3, 4, 5, 6]);
const grid = (changes: readonly TagToWrite[] = [], data = DATA) => tiffBytes(plainTags(3, 2), data, changes);
const open = (bytes: Uint8Array, band?: number) =>
  openRaster(memorySource(bytes, "grid.tif"), band === undefined ? {} : {band});
async function values(bytes: Uint8Array): Promise<number[]> {
  const all: number[] = [];
  for await (const block of (await open(bytes)).rowBlocks()) all.push(...block.values);
  return all;
}
const gone = (tag: number): TagToWrite => shorts(tag);

describe("a small grid", () => {
  test("is read with its place", async () => {
    const raster = await open(grid());
    expect(raster.affine).toEqual({x0: 500_000, y0: 7_000_000, dxCol: 50, dyRow: -25});
    expect([pixelCentreX(raster.affine, 2), pixelCentreY(raster.affine, 1)]).toEqual([500_125, 6_999_962.5]);
    expect([raster.width, raster.height, raster.bands, raster.nodata, raster.unit]).toEqual([
      3,
      2,
      1,
      undefined,
      undefined,
    ]);
    expect(await values(grid())).toEqual([1, 2, 3, 4, 5, 6]);
  });
  test("by columns, one at a time", async () => {
    const blocks: unknown[] = [];
    for await (const block of (await open(grid())).columnBlocks(1)) blocks.push([block.column0, [...block.values]]);
    expect(blocks).toEqual([
      [0, [1, 4]],
      [1, [2, 5]],
      [2, [3, 6]],
    ]);
  });
  test("nodata becomes NaN, and scale and offset apply to the rest", async () => {
    const xml =
      '<GDALMetadata><Item name="SCALE" sample="0" role="scale">0.5</Item><Item name="OFFSET" sample="0" role="offset">10</Item></GDALMetadata>';
    const bytes = grid([ascii(TAG.gdalNodata, Buffer.from("4")), ascii(TAG.gdalMetadata, Buffer.from(xml))]);
    expect(await values(bytes)).toEqual([10.5, 11, 11.5, Number.NaN, 12.5, 13]);
  });
});

describe("nodata", () => {
  const isNodata = (text: string, value: number, isFloat32 = true): boolean => {
    const {low, high} = nodataRange(nodataNumber(text), isFloat32);
    return value >= low && value <= high;
  };
  test.each([
    ["-9999", -9999, true],
    ["-9999", -9998, false],
    ["-9999.9", Math.fround(-9999.9), true],
    ["-3.40282e+38", -3.4028234663852886e38, true],
    ["3.4028234663852886e+38", 3.4028234663852886e38, true],
    ["-1e32", Math.fround(-1e32), true],
    ["-inf", Number.NEGATIVE_INFINITY, true],
    ["-inf", -1, false],
    ["nan", 0, false],
    ["", 0, false],
    ["none", 0, false],
  ])("%j and %d in float32: %s", (text, value, expected) => expect(isNodata(text, value)).toBe(expected));
  test("in float64 it is compared as it is", () => {
    expect(isNodata("-9999.9", Math.fround(-9999.9), false)).toBe(false);
    expect(isNodata("-9999.9", -9999.9, false)).toBe(true);
  });
});

describe("georeference", () => {
  const size = {width: 100, height: 80};
  const none = {modelPixelScale: [], modelTiepoint: [], modelTransformation: []};
  const matrix = (a: number, b: number, d: number, c: number, e: number, f: number) => ({
    ...none,
    modelTransformation: [a, b, 0, d, c, e, 0, f, 0, 0, 0, 0, 0, 0, 0, 1],
  });
  test("a tie point inside the grid", () => {
    const tags = {...none, modelPixelScale: [50, 25, 0], modelTiepoint: [10, 20, 0, 500_000, 7_000_000, 0]};
    expect(affineOf(tags, false, size, "g").affine).toEqual({x0: 499_500, y0: 7_000_500, dxCol: 50, dyRow: -25});
  });
  test("pixel is point takes half a pixel off, in either form", () => {
    const expected = {x0: 499_975, y0: 7_000_012.5, dxCol: 50, dyRow: -25};
    expect(affineOf(GEOREFERENCE, true, size, "g").affine).toEqual(expected);
    expect(affineOf(matrix(50, 0, 500_000, 0, -25, 7_000_000), true, size, "g").affine).toEqual(expected);
  });
  test("south up keeps its sign", () => {
    expect(affineOf(matrix(50, 0, 0, 0, 25, 0), false, size, "g").affine.dyRow).toBe(25);
  });
  test("a negative pixel height raises a doubt", () => {
    const {affine, notices} = affineOf({...GEOREFERENCE, modelPixelScale: [50, -25, 0]}, false, size, "g");
    expect([affine.dyRow, notices.map(({code}) => code)]).toEqual([-25, ["raster/negative-scale"]]);
  });
  test("what turns no pixel by a thousandth is no rotation", () => {
    expect(affineOf(matrix(50, 1e-9, 0, 1e-9, -25, 0), false, size, "g").affine.dxCol).toBe(50);
  });
  test.each([
    ["rotated by 1°", matrix(49.99, 0.87, 0, 0.87, -24.99, 0), "raster/rotated", /rotated or sheared.*gdalwarp/],
    ["rotated by 90°", matrix(0, 50, 0, 25, 0, 0), "raster/rotated", /row step 50 in x.*gdalwarp/],
    ["nothing", none, "raster/no-georeference", /no position.*-a_ullr/],
    ["control points", {...none, modelTiepoint: new Array(24).fill(1)}, "raster/no-georeference", /4 control points/],
    ["a pixel of no size", matrix(0, 0, 0, 0, -25, 0), "raster/no-georeference", /size 0 by -25/],
    ["NaN", matrix(Number.NaN, 0, 0, 0, -25, 0), "raster/no-georeference", /size NaN/],
  ])("%s is refused", async (_, tags, code, message) => {
    const found = await failure(() => affineOf(tags, false, size, "g"));
    expect(found.code).toBe(code);
    expect(found.message).toMatch(message);
  });
  test("coordinate systems", () => {
    expect(crsOf(GEOREFERENCE)).toEqual({kind: "projected", epsg: 32755, citation: "UTM 55 S", pixelIsPoint: false});
    const keys = (...directory: number[]) =>
      crsOf({geoKeyDirectory: directory, geoDoubleParams: [], geoAsciiParams: ""});
    expect(keys()).toEqual({kind: "unknown", pixelIsPoint: false});
    expect(keys(1, 1, 0, 3, 1024, 0, 1, 2, 1025, 0, 1, 2, 2048, 0, 1, 4326)).toEqual({
      kind: "geographic",
      epsg: 4326,
      pixelIsPoint: true,
    });
    expect(keys(1, 1, 0, 3, 1024, 0, 1, 1, 3072, 0, 1, 32767, 3076, 0, 1, 9003)).toEqual({
      kind: "projected",
      linearUnit: 9003,
      pixelIsPoint: false,
    });
  });
});

describe("metadata", () => {
  test("any text survives, as text", () => {
    const text = fc.string({unit: fc.constantFrom(..."aZ9 é€<>&\"'=/;-#"), minLength: 1, maxLength: 12});
    fc.assert(
      fc.property(text, text, text, (description, unit, item) => {
        const xml = metadataXml({items: [[item, item]], bands: [{}, {description, unit}]});
        expect(bandMetadata(xml, 1)).toEqual({description, unit, scale: 1, offset: 0});
        expect(bandMetadata(xml, 0)).toEqual({scale: 1, offset: 0});
        expect(xml.match(/</g)?.length).toBe(8);
      }),
      {seed: 3},
    );
  });
  test("nothing to say is no tag", () => expect(metadataXml({items: [], bands: [{}]})).toBe(""));
});

describe("what is refused", () => {
  const tiles = (width: number, height: number, count: number): TagToWrite[] => [
    ...plainTags(width, height),
    gone(TAG.stripOffsets),
    gone(TAG.stripByteCounts),
    gone(TAG.rowsPerStrip),
    shorts(TAG.tileWidth, 256),
    shorts(TAG.tileLength, 256),
    longs(TAG.tileOffsets, ...new Array(count).fill(8)),
    longs(TAG.tileByteCounts, ...new Array(count).fill(24)),
  ];
  const bigEndian = (): Uint8Array => {
    // A directory of three entries, big end first: width, height, and predictor 3 with deflate.
    const bytes = new Uint8Array(256);
    const view = new DataView(bytes.buffer);
    view.setUint16(0, 0x4d4d);
    view.setUint16(2, 42);
    view.setUint32(4, 8);
    const entries: [number, number][] = [
      [256, 3],
      [257, 2],
      [258, 32],
      [259, 8],
      [277, 1],
      [317, 3],
      [339, 3],
    ];
    view.setUint16(8, entries.length);
    entries.forEach(([tag, value], i) => {
      view.setUint16(10 + 12 * i, tag);
      view.setUint16(12 + 12 * i, 3);
      view.setUint32(14 + 12 * i, 1);
      view.setUint16(18 + 12 * i, value);
    });
    return bytes;
  };
  const cases: readonly (readonly [string, Uint8Array, string, RegExp])[] = [
    ["an empty file", new Uint8Array(0), "raster/not-tiff", /grid\.tif does not begin like a TIFF.*gdal_translate/],
    ["another format", new TextEncoder().encode("x,y\n1,2\n3,4\n"), "raster/not-tiff", /GeoTIFF was needed/],
    ["a header only", grid().slice(0, 8), "raster/truncated", /image directory at byte 32.*copy or export/],
    ["cut in the directory", grid().slice(0, 60), "raster/truncated", /image directory/],
    ["cut in a tag's values", grid().slice(0, -2), "raster/truncated", /tag 34735 needs bytes/],
    [
      "cut in the pixels",
      tiffBytes(plainTags(3, 2), DATA, [longs(TAG.stripOffsets, 5000)]),
      "raster/truncated",
      /strip 1 of 1 \(grid rows from 1 on\) ends at byte 5024/,
    ],
    [
      "10⁶ × 10⁶ pixels in a strip",
      grid([longs(TAG.imageWidth, 1e6), longs(TAG.imageLength, 1e6), longs(TAG.rowsPerStrip, 1e6)]),
      "raster/implausible-size",
      /1000000 × 1000000 pixels.*24 bytes for 4000000000000/,
    ],
    [
      "10⁶ × 10⁶ pixels in strips",
      grid([longs(TAG.imageWidth, 1e6), longs(TAG.imageLength, 1e6), longs(TAG.rowsPerStrip, 1)]),
      "raster/implausible-size",
      /1 of 1000000 strips/,
    ],
    [
      "10⁶ × 10⁶ pixels in tiles",
      tiffBytes(tiles(1e6, 1e6, 4), DATA),
      "raster/implausible-size",
      /4 of 15264649 tiles/,
    ],
    [
      "10⁶ × 10⁶ pixels, deflated",
      grid([
        longs(TAG.imageWidth, 1e6),
        longs(TAG.imageLength, 1e6),
        longs(TAG.rowsPerStrip, 1e6),
        shorts(TAG.compression, 8),
      ]),
      "raster/implausible-size",
      /cannot hold them/,
    ],
    [
      "10⁶ × 10⁶ pixels, of open-ended compression",
      grid([
        longs(TAG.imageWidth, 1e6),
        longs(TAG.imageLength, 1e6),
        longs(TAG.rowsPerStrip, 1e6),
        shorts(TAG.compression, 50000),
      ]),
      "raster/block-too-large",
      /blocks of 1000000 × 1000000.*TILED=YES/,
    ],
    ["four thousand million bands", grid([longs(TAG.samplesPerPixel, 4e9)]), "raster/truncated", /4000000000 bands/],
    ["no pixel at all", grid([longs(TAG.imageWidth, 0)]), "raster/truncated", /0 × 2 pixels/],
    [
      "a tag of absurd length",
      (() => {
        const bytes = grid();
        new DataView(bytes.buffer).setUint32(32 + 2 + 4, 0x7fffffff, true);
        return bytes;
      })(),
      "raster/truncated",
      /tag 256 needs bytes/,
    ],
    [
      "blocks that were never written",
      grid([longs(TAG.stripByteCounts, 0), longs(TAG.stripOffsets, 0)]),
      "raster/empty",
      /none of its 1 strip/,
    ],
    ["JPEG", grid([shorts(TAG.compression, 7)]), "raster/compression", /method 7.*COMPRESS=DEFLATE/],
    ["LERC", grid([shorts(TAG.compression, 34887)]), "raster/compression", /method 34887/],
    [
      "complex numbers",
      grid([shorts(TAG.sampleFormat, 6), shorts(TAG.bitsPerSample, 64)]),
      "raster/sample-type",
      /64 bits in format 6.*-ot Float32/,
    ],
    ["12 bits", grid([shorts(TAG.sampleFormat, 1), shorts(TAG.bitsPerSample, 12)]), "raster/sample-type", /12 bits/],
    ["a palette", grid([shorts(TAG.photometric, 3)]), "raster/picture", /picture.*float32 GeoTIFF/],
    [
      "integers with the float predictor",
      grid([shorts(TAG.predictor, 3), shorts(TAG.compression, 8), shorts(TAG.sampleFormat, 2)]),
      "raster/predictor",
      /int32 with predictor 3.*PREDICTOR=1/,
    ],
    ["big-endian with a predictor", bigEndian(), "raster/big-endian-predictor", /predictor 3.*ENDIANNESS=LITTLE/],
    [
      "no georeference",
      grid([gone(TAG.modelPixelScale), gone(TAG.modelTiepoint)]),
      "raster/no-georeference",
      /map position/,
    ],
    [
      "a rotated grid",
      grid([doubles(TAG.modelTransformation, [50, 9, 0, 0, 9, -25, 0, 0, 0, 0, 0, 0, 0, 0, 0, 1])]),
      "raster/rotated",
      /gdalwarp/,
    ],
  ];
  for (const [name, bytes, code, message] of cases)
    test(name, async () => {
      const found = await failure(() => open(bytes));
      expect(found.code).toBe(code);
      expect(found.message).toMatch(message);
      expect(found.message).toMatch(/^grid\.tif/);
    });

  test("a band that is not there", async () => {
    expect(await failure(() => open(grid(), 2))).toMatchObject({
      code: "raster/no-band",
      message: expect.stringMatching(/1 band;.*no band 2/),
    });
    expect((await failure(() => open(grid(), 0))).code).toBe("raster/no-band");
  });
  test("an infinite reading, by its place", async () => {
    const found = await failure(() => values(grid([], floatBytes([1, 2, 3, 4, Number.NEGATIVE_INFINITY, 6]))));
    expect(found).toMatchObject({code: "raster/infinite", row: 2, column: "2"});
    expect(found.message).toMatch(/row 2, column 2.*-a_nodata/);
  });
  const deflated = (data: Uint8Array) =>
    tiffBytes(plainTags(3, 2), data, [shorts(TAG.compression, 8), longs(TAG.stripByteCounts, data.length)]);
  test("compressed pixels are read", async () => {
    expect(await values(deflated(deflateSync(DATA)))).toEqual([1, 2, 3, 4, 5, 6]);
  });
  test.each([
    ["that do not decode", Uint8Array.from({length: 30}, (_, i) => i)],
    ["that end early", deflateSync(DATA.subarray(0, 8))],
    ["that swell beyond the block", deflateSync(new Uint8Array(1 << 16))],
  ])("pixels %s", async (_, data) => {
    const found = await failure(() => values(deflated(data)));
    expect(found.code).toBe("raster/corrupt-block");
    expect(found.message).toMatch(/strip 1 does not decode.*24 bytes of pixels.*export it again/);
  });
  test("any damage is refused or read, never a defect", async () => {
    const whole = deflated(deflateSync(DATA));
    await fc.assert(
      fc.asyncProperty(fc.nat(whole.length - 1), fc.integer({min: 1, max: 255}), async (at, change) => {
        const bytes = whole.slice();
        bytes[at] = bytes[at]! ^ change;
        try {
          await values(bytes);
        } catch (error) {
          expect(error).toMatchObject({exitStatus: 2, code: expect.stringMatching(/^raster\//)});
        }
      }),
      {seed: 5, numRuns: 2000},
    );
  });
});
