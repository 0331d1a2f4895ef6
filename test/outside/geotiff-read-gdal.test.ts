/**
 * Grids written by GDAL (python3-gdal, libtiff inside) in every way that is read here,
 * compared pixel by pixel and in place with what GDAL itself reads from them.
 */
import {mkdtempSync, readFileSync, rmSync} from "node:fs";
import {tmpdir} from "node:os";
import {join} from "node:path";
import {afterAll, beforeAll, describe, expect, test} from "vitest";
import {openRaster, type Raster} from "../../lib/formats/geotiff-read.ts";
import {fileSource} from "../harness/file-source.ts";
import {runPython} from "../harness/python.ts";

/** One file: name, GDAL type, size, creation options and what else is set. */
interface Case {
  readonly name: string;
  readonly type: string;
  readonly size?: readonly [number, number];
  readonly options?: readonly string[];
  readonly nodata?: string;
  readonly bands?: number;
  readonly readBand?: number;
  readonly transform?: readonly number[];
  readonly point?: boolean;
  readonly scale?: number;
  readonly offset?: number;
  readonly sparse?: boolean;
}

const DEFLATE3 = ["COMPRESS=DEFLATE", "PREDICTOR=3"];
const TILED = ["TILED=YES", "BLOCKXSIZE=64", "BLOCKYSIZE=32"];
const cases: readonly Case[] = [
  {name: "strips", type: "Float32"},
  {name: "one-row-strips", type: "Float32", options: ["BLOCKYSIZE=1"]},
  {name: "one-strip", type: "Float32", size: [150, 301], options: ["BLOCKYSIZE=301"]},
  {name: "one-strip-deflate", type: "Float32", size: [150, 301], options: ["BLOCKYSIZE=301", ...DEFLATE3]},
  {name: "many-strips-of-many", type: "Float64", size: [90, 700], options: ["BLOCKYSIZE=7", "COMPRESS=LZW"]},
  {name: "tiles", type: "Float32", options: TILED},
  {name: "tiles-deflate", type: "Float32", options: [...TILED, "COMPRESS=DEFLATE"]},
  {name: "tiles-deflate-2", type: "Float32", options: [...TILED, "COMPRESS=DEFLATE", "PREDICTOR=2"]},
  {name: "tiles-deflate-3", type: "Float32", options: [...TILED, ...DEFLATE3]},
  {name: "tiles-lzw-3", type: "Float64", options: [...TILED, "COMPRESS=LZW", "PREDICTOR=3"]},
  {name: "strips-lzw-2-int16", type: "Int16", options: ["COMPRESS=LZW", "PREDICTOR=2"]},
  {name: "strips-packbits", type: "Int32", options: ["COMPRESS=PACKBITS"]},
  {name: "strips-zstd-3", type: "Float32", options: ["COMPRESS=ZSTD", "PREDICTOR=3"]},
  {name: "tiles-zstd", type: "Float32", options: [...TILED, "COMPRESS=ZSTD"]},
  {name: "big-endian", type: "Float32", options: ["ENDIANNESS=BIG"]},
  {name: "big-endian-rows", type: "Float64", size: [40, 900], options: ["ENDIANNESS=BIG", "BLOCKYSIZE=1"]},
  {name: "big-endian-int16", type: "Int16", options: ["ENDIANNESS=BIG", ...TILED, "COMPRESS=LZW"]},
  {name: "byte", type: "Byte"},
  {name: "uint16", type: "UInt16", nodata: "65535"},
  {name: "uint32", type: "UInt32"},
  {name: "float64", type: "Float64", nodata: "-99999.5"},
  {name: "bigtiff", type: "Float32", options: ["BIGTIFF=YES", ...TILED, ...DEFLATE3]},
  {name: "bigtiff-big-endian", type: "Float32", options: ["BIGTIFF=YES", "ENDIANNESS=BIG"]},
  {name: "point", type: "Float32", point: true},
  {name: "south-up", type: "Float32", transform: [500_000, 50, 0, 6_900_000, 0, 25]},
  {name: "south-up-point", type: "Float32", transform: [500_000, 50, 0, 6_900_000, 0, 25], point: true},
  {name: "east-to-west", type: "Float32", transform: [500_000, -50, 0, 7_000_000, 0, -25]},
  {name: "nodata-nan", type: "Float32", nodata: "nan"},
  {name: "nodata-1e32", type: "Float32", nodata: "-1e32"},
  {name: "nodata-float-max", type: "Float32", nodata: "-3.4028234663852886e+38"},
  {name: "nodata-rounded", type: "Float32", nodata: "-9999.9"},
  {
    name: "two-bands-pixel",
    type: "Float32",
    bands: 2,
    readBand: 2,
    options: [...TILED, ...DEFLATE3, "INTERLEAVE=PIXEL"],
  },
  {
    name: "three-bands-band",
    type: "Float32",
    bands: 3,
    readBand: 3,
    options: [...TILED, ...DEFLATE3, "INTERLEAVE=BAND"],
  },
  {name: "two-bands-strips", type: "Int16", bands: 2, readBand: 2, options: ["INTERLEAVE=BAND"]},
  {
    name: "one-strip-bands",
    type: "Float32",
    bands: 2,
    readBand: 2,
    size: [60, 200],
    options: ["INTERLEAVE=BAND", "BLOCKYSIZE=200"],
  },
  {name: "scaled", type: "Int16", nodata: "-32768", scale: 0.01, offset: 5},
  {name: "sparse", type: "Float32", options: [...TILED, "SPARSE_OK=TRUE"], sparse: true, nodata: "-9999"},
  {name: "tall", type: "Float32", size: [3, 2000], options: ["COMPRESS=DEFLATE"]},
  {name: "one-pixel", type: "Float32", size: [1, 1]},
];

const MAKE = `
import sys, json, numpy as np
from osgeo import gdal, osr
gdal.UseExceptions()
job = json.loads(sys.stdin.read())
srs = osr.SpatialReference(); srs.ImportFromEPSG(32755)
out = {}
for i, c in enumerate(job["cases"]):
    w, h = c.get("size", [171, 97])
    bands = c.get("bands", 1)
    path = job["folder"] + "/" + c["name"] + ".tif"
    ds = gdal.GetDriverByName("GTiff").Create(path, w, h, bands, getattr(gdal, "GDT_" + c["type"]), c.get("options", []))
    ds.SetGeoTransform(c.get("transform", [500000, 50, 0, 7000000, 0, -25]))
    ds.SetProjection(srs.ExportToWkt())
    if c.get("point"): ds.SetMetadataItem("AREA_OR_POINT", "Point")
    rng = np.random.default_rng(i)
    for b in range(bands):
        band = ds.GetRasterBand(b + 1)
        a = rng.normal(0, 1000, (h, w))
        if c["type"] in ("Byte", "UInt16", "UInt32"): a = np.abs(a) % 250
        if "nodata" in c:
            nd = float(c["nodata"]); band.SetNoDataValue(nd)
            a[rng.random((h, w)) < 0.2] = nd
        if "scale" in c: band.SetScale(c["scale"]); band.SetOffset(c["offset"])
        band.SetDescription("band %d <&>" % (b + 1)); band.SetUnitType("nT")
        t = gdal.GetDataTypeName(band.DataType).lower().replace("byte", "uint8")
        if c.get("sparse"): band.WriteArray(a[:32, :64].astype(t), 64, 32)
        else: band.WriteArray(a.astype(t))
    ds = None
    ds = gdal.Open(path)
    band = ds.GetRasterBand(c.get("readBand", 1))
    raw = band.ReadAsArray()
    v = raw.astype("float64")
    nd = band.GetNoDataValue()
    if nd is not None and nd == nd: v[raw == np.array(nd).astype(raw.dtype)] = np.nan
    if band.GetScale() is not None: v = v * band.GetScale() + (band.GetOffset() or 0)
    v.tofile(path + ".raw")
    out[c["name"]] = dict(width=w, height=h, transform=ds.GetGeoTransform(), unit=band.GetUnitType(), description=band.GetDescription())
print(json.dumps(out))
`;

interface Truth {
  readonly width: number;
  readonly height: number;
  readonly transform: readonly [number, number, number, number, number, number];
  readonly unit: string;
  readonly description: string;
}

let folder = "";
let truths: Readonly<Record<string, Truth>> = {};
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "geotiff-read-"));
  truths = JSON.parse(runPython(MAKE, JSON.stringify({folder, cases})));
});
afterAll(() => rmSync(folder, {recursive: true}));

const path = (name: string): string => join(folder, `${name}.tif`);
function pixels(name: string): Float64Array {
  const bytes = readFileSync(`${path(name)}.raw`);
  return new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
}
/** Index of the first pixel that differs, NaN being equal to NaN; -1 if none does. */
const difference = (a: Float64Array, b: Float64Array): number =>
  a.length === b.length ? a.findIndex((value, i) => !Object.is(value + 0, b[i]! + 0)) : -2;

async function byRows(raster: Raster): Promise<Float64Array> {
  const all = new Float64Array(raster.width * raster.height);
  let next = 0;
  for await (const {row0, rows, values} of raster.rowBlocks()) {
    expect([row0, values.length]).toEqual([next, rows * raster.width]);
    all.set(values, row0 * raster.width);
    next = row0 + rows;
  }
  expect(next).toBe(raster.height);
  return all;
}
async function byColumns(raster: Raster, windowBytes?: number): Promise<Float64Array> {
  const all = new Float64Array(raster.width * raster.height);
  let next = 0;
  for await (const {column0, columns, values} of raster.columnBlocks(windowBytes)) {
    expect([column0, values.length]).toEqual([next, columns * raster.height]);
    for (let c = 0; c < columns; ++c)
      for (let r = 0; r < raster.height; ++r) all[r * raster.width + column0 + c] = values[c * raster.height + r]!;
    next = column0 + columns;
  }
  expect(next).toBe(raster.width);
  return all;
}

describe("grids that GDAL wrote", () => {
  for (const one of cases)
    test(one.name, async () => {
      const truth = truths[one.name]!;
      const raster = await openRaster(fileSource(path(one.name)), {band: one.readBand ?? 1});
      const [x0, dxCol, , y0, , dyRow] = truth.transform;
      expect(raster.affine).toEqual({x0, y0, dxCol, dyRow});
      expect(raster.crs).toMatchObject({kind: "projected", epsg: 32755, linearUnit: 9001});
      expect([raster.width, raster.height, raster.unit, raster.description]).toEqual([
        truth.width,
        truth.height,
        truth.unit,
        truth.description,
      ]);
      expect(raster.notices).toEqual([]);
      const expected = pixels(one.name);
      expect(expected.some((value) => !Number.isNaN(value))).toBe(true);
      expect(difference(await byRows(raster), expected)).toBe(-1);
      expect(difference(await byRows(raster), expected)).toBe(-1);
      expect(difference(await byColumns(raster), expected)).toBe(-1);
      // Windows of 50 columns, which cut tiles of 64, or of one column.
      expect(difference(await byColumns(raster, 50 * 8 * raster.height), expected)).toBe(-1);
    });
});
