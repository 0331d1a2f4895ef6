/**
 * Files that we write, read by GDAL (gdal-bin, python3-gdal): the checksum of every band
 * equals that of the same numbers written by GDAL itself, everything about the grid is
 * found, and GDAL's own validator of cloud-optimised GeoTIFFs accepts them.
 */
import {closeSync, mkdtempSync, openSync, readSync, rmSync, writeFileSync, writeSync} from "node:fs";
import {tmpdir} from "node:os";
import {join} from "node:path";
import {afterAll, beforeAll, describe, expect, test} from "vitest";
import type {ByteSink, ScratchStore} from "../../lib/formats/byte-source.ts";
import {openCog} from "../../lib/formats/cog-write.ts";
import {type Georeference, openRaster} from "../../lib/formats/geotiff-read.ts";
import {encodePng} from "../../lib/formats/png.ts";
import {GEOREFERENCE} from "../formats/tiff-bytes.ts";
import {fileSource} from "../harness/file-source.ts";
import {runPython, runTool} from "../harness/python.ts";

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "cog-write-"));
});
afterAll(() => rmSync(folder, {recursive: true}));

/** A file that grows by appending and can be read back. */
function fileStore(path: string): ByteSink & ScratchStore & {close(): void} {
  const file = openSync(path, "w+");
  let size = 0;
  const append = (bytes: Uint8Array): Promise<void> => {
    for (let done = 0; done < bytes.length; ) done += writeSync(file, bytes, done, bytes.length - done, size + done);
    size += bytes.length;
    return Promise.resolve();
  };
  return {
    append,
    write: append,
    read: (offset, length) => {
      const bytes = new Uint8Array(length);
      return Promise.resolve(bytes.subarray(0, readSync(file, bytes, 0, length, offset)));
    },
    close: () => closeSync(file),
  };
}

/** Two bands: a wave with holes, and its steepness; exact in float32, computed alike in numpy below. */
const PERIOD = 1 << 16;
const surface = (row: number, column: number, band: number): number => {
  const mixed = (row * 7919 + column * 104_729 + band * 15_485_863) % PERIOD;
  return mixed % 23 === 0 ? Number.NaN : mixed / 8 - 4000;
};

interface Wanted {
  readonly name: string;
  readonly width: number;
  readonly height: number;
  readonly bands: number;
  readonly nodataText?: string;
  readonly bigFrom?: number;
}

async function write(wanted: Wanted, georeference: Georeference = GEOREFERENCE): Promise<string> {
  const {width, height, name} = wanted;
  const path = join(folder, `${name}.tif`);
  const scratch = fileStore(join(folder, `${name}.scratch`));
  const sink = fileStore(path);
  const writer = openCog(
    {
      width,
      height,
      georeference,
      nodataText: wanted.nodataText,
      bands: Array.from({length: wanted.bands}, (_, band) => ({
        description: `band <${band + 1}> & "more"`,
        unit: "nT",
      })),
      items: [["PROCESSING", "row by row, two-dimensional <&> größer"]],
      ...(wanted.bigFrom === undefined ? {} : {bigFrom: wanted.bigFrom}),
    },
    scratch,
  );
  const atOnce = 100;
  for (let row0 = 0; row0 < height; row0 += atOnce) {
    const count = Math.min(atOnce, height - row0);
    const rows = Array.from({length: wanted.bands}, () => new Float32Array(count * width));
    for (let band = 0; band < wanted.bands; ++band)
      for (let r = 0; r < count; ++r)
        for (let c = 0; c < width; ++c) rows[band]![r * width + c] = surface(row0 + r, c, band);
    await writer.writeRows(rows, count);
  }
  await writer.finish(sink);
  scratch.close();
  sink.close();
  return path;
}

const INSPECT = `
import sys, json, numpy as np
from osgeo import gdal
from osgeo_utils.samples.validate_cloud_optimized_geotiff import validate
gdal.UseExceptions()
job = json.loads(sys.stdin.read())
messages = []
gdal.PushErrorHandler(lambda level, number, text: messages.append(text))
ds = gdal.Open(job["path"])
w, h, n = ds.RasterXSize, ds.RasterYSize, ds.RasterCount
nd = ds.GetRasterBand(1).GetNoDataValue()
r, c = np.meshgrid(np.arange(h, dtype="int64"), np.arange(w, dtype="int64"), indexing="ij")
def plain(a, nan): return np.where(np.isnan(a), np.float32(nan), a)
def valid(a): return np.where(a == np.float32(nd), np.float32("nan"), a)
bands = []
twin = gdal.GetDriverByName("GTiff").Create(job["path"] + ".twin", w, h, n, gdal.GDT_Float32)
for b in range(n):
    mixed = (r * 7919 + c * 104729 + b * 15485863) % 65536
    a = np.where(mixed % 23 == 0, np.nan, mixed / 8 - 4000).astype("float32")
    if nd is not None: twin.GetRasterBand(b + 1).SetNoDataValue(nd)
    twin.GetRasterBand(b + 1).WriteArray(plain(a, nd))
    band = ds.GetRasterBand(b + 1)
    overviews = []
    level = a
    for i in range(band.GetOverviewCount()):
        o = band.GetOverview(i)
        # mean of the valid ones among 2 x 2 pixels, in double, rounded to float32
        p = np.full((level.shape[0] + level.shape[0] % 2, level.shape[1] + level.shape[1] % 2), np.nan)
        p[:level.shape[0], :level.shape[1]] = level
        q = np.stack([p[0::2, 0::2], p[0::2, 1::2], p[1::2, 0::2], p[1::2, 1::2]])
        k = (~np.isnan(q)).sum(0)
        level = np.where(k > 0, np.nansum(q, 0) / np.maximum(k, 1), np.nan).astype("float32")
        got = valid(o.ReadAsArray())
        same = got.shape == level.shape and np.array_equal(np.isnan(got), np.isnan(level))
        worst = float(np.nanmax(np.abs(got.astype("float64") - level))) if same and k.any() else -1
        overviews.append(dict(size=[o.XSize, o.YSize], worst=worst, nodata=str(o.GetNoDataValue()), block=o.GetBlockSize()))
    bands.append(dict(checksum=band.Checksum(), twin=0, description=band.GetDescription(), unit=band.GetUnitType(),
        nodata=str(band.GetNoDataValue()), type=gdal.GetDataTypeName(band.DataType), block=band.GetBlockSize(), overviews=overviews))
twin = None
twin = gdal.Open(job["path"] + ".twin")
for b in range(n): bands[b]["twin"] = twin.GetRasterBand(b + 1).Checksum()
warnings, errors, details = validate(ds, full_check=True)
srs = ds.GetSpatialRef()
print(json.dumps(dict(width=w, height=h, bands=bands, transform=ds.GetGeoTransform(), epsg=srs and srs.GetAuthorityCode(None),
  point=ds.GetMetadataItem("AREA_OR_POINT"), items=ds.GetMetadata().get("PROCESSING"), structure=ds.GetMetadata("IMAGE_STRUCTURE"),
  warnings=warnings, errors=errors, messages=messages)))
`;
const inspect = (path: string) => JSON.parse(runPython(INSPECT, JSON.stringify({path})));

describe("GDAL reads what we write", () => {
  const cases: readonly (Wanted & {overviews: number; tile: number})[] = [
    {name: "small", width: 171, height: 97, bands: 1, nodataText: "-99999", overviews: 0, tile: 256},
    {name: "small-two", width: 256, height: 300, bands: 2, overviews: 0, tile: 256},
    {
      name: "streamed",
      width: 3000,
      height: 1500,
      bands: 2,
      nodataText: "-3.4028234663852886e+38",
      overviews: 3,
      tile: 512,
    },
    {name: "big", width: 1025, height: 700, bands: 2, nodataText: "nan", bigFrom: 0, overviews: 2, tile: 512},
    {name: "wide", width: 5000, height: 3, bands: 1, nodataText: "-1e32", overviews: 4, tile: 512},
    {name: "tall", width: 2, height: 2111, bands: 3, nodataText: "1e32", overviews: 3, tile: 512},
  ];
  for (const wanted of cases)
    test(wanted.name, async () => {
      const path = await write(wanted);
      const found = inspect(path);
      expect(found).toMatchObject({
        width: wanted.width,
        height: wanted.height,
        transform: [500_000, 50, 0, 7_000_000, 0, -25],
        epsg: "32755",
        point: "Area",
        items: "row by row, two-dimensional <&> größer",
        structure: {COMPRESSION: "DEFLATE", INTERLEAVE: wanted.bands > 1 ? "PIXEL" : "BAND", LAYOUT: "COG"},
        errors: [],
        warnings: [],
        messages: [],
      });
      expect(found.bands).toHaveLength(wanted.bands);
      for (const [index, band] of found.bands.entries()) {
        expect(band.checksum).toBe(band.twin);
        expect(band).toMatchObject({
          type: "Float32",
          unit: "nT",
          description: `band <${index + 1}> & "more"`,
          block: [wanted.tile, wanted.tile],
        });
        expect(Number(band.nodata)).toBe(Math.fround(Number(wanted.nodataText ?? "nan")));
        expect(band.overviews).toHaveLength(wanted.overviews);
        for (const overview of band.overviews) {
          expect(overview.nodata).toBe(band.nodata);
          // The mean of up to four values below 4,200 is rounded once to float32 (2^-12 at most); numpy's
          // may add them in another order, which moves it by no more than one rounding.
          expect(overview.worst).toBeGreaterThanOrEqual(0);
          expect(overview.worst).toBeLessThanOrEqual(2 ** -11);
        }
      }
      // The command, too, finds the checksum, with the numbers that GDAL wrote.
      expect(runTool("gdalinfo", ["-checksum", path])).toContain(`Checksum=${found.bands[0].twin}`);
    });
});

const MAKE = `
import sys, json, numpy as np
from osgeo import gdal, osr
gdal.UseExceptions()
job = json.loads(sys.stdin.read())
srs = osr.SpatialReference(); srs.SetFromUserInput(job["srs"])
ds = gdal.GetDriverByName("GTiff").Create(job["path"], 60, 40, 1, gdal.GDT_Float32, job.get("options", []))
ds.SetGeoTransform(job["transform"]); ds.SetProjection(srs.ExportToWkt())
if job.get("point"): ds.SetMetadataItem("AREA_OR_POINT", "Point")
ds.GetRasterBand(1).WriteArray(np.ones((40, 60), "float32"))
`;
const PLACE = `
import sys, json
from osgeo import gdal
gdal.UseExceptions()
def place(path):
    ds = gdal.Open(path)
    return dict(transform=ds.GetGeoTransform(), wkt=ds.GetProjection(), point=ds.GetMetadataItem("AREA_OR_POINT"))
print(json.dumps([place(p) for p in json.loads(sys.stdin.read())]))
`;

describe("the input's georeference is copied", () => {
  const north = [500_000, 50, 0, 7_000_000, 0, -25];
  for (const [name, job] of Object.entries({
    utm: {srs: "EPSG:32755", transform: north},
    point: {srs: "EPSG:32755", transform: north, point: true},
    "south-up": {srs: "EPSG:28992", transform: [0, 50, 0, 300_000, 0, 25]},
    geographic: {srs: "EPSG:4326", transform: [147, 0.01, 0, -26, 0, -0.01]},
    "user-defined": {
      srs: "+proj=tmerc +lat_0=1 +lon_0=9.5 +k=0.9996 +x_0=1000 +y_0=2000 +ellps=GRS80 +units=us-ft",
      transform: north,
    },
    "big-endian": {srs: "EPSG:27700", transform: north, options: ["ENDIANNESS=BIG"]},
    bigtiff: {srs: "EPSG:2193", transform: north, options: ["BIGTIFF=YES"]},
  }))
    test(name, async () => {
      const input = join(folder, `place-${name}-in.tif`);
      runPython(MAKE, JSON.stringify({path: input, ...job}));
      const {georeference} = await openRaster(fileSource(input));
      const output = await write({name: `place-${name}-out`, width: 60, height: 40, bands: 1}, georeference);
      const [was, is] = JSON.parse(runPython(PLACE, JSON.stringify([input, output])));
      expect(is).toEqual(was);
      expect(is.wkt).not.toBe("");
    });
});

test("GDAL reads a PNG picture that we write", () => {
  const pixels = Uint8Array.from({length: 31 * 17 * 4}, (_, i) => (i * 37 + (i >> 5)) & 255);
  const path = join(folder, "map.png");
  writeFileSync(path, encodePng(31, 17, pixels, 4));
  const script = `
import sys
from osgeo import gdal
gdal.UseExceptions()
print(",".join(map(str, gdal.Open(sys.stdin.read()).ReadAsArray().transpose(1, 2, 0).ravel())))`;
  expect(runPython(script, path).trim()).toBe(pixels.join(","));
});
