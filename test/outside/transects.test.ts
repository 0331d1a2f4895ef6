/**
 * Grid readings between pixels against GDAL's bilinear and cubic resampling: the grid warped onto one of the same
 * pixels, shifted by a part of a pixel, where GDAL's kernels are those of the textbook (cubic: a = −1/2).
 */
import {expect, test} from "vitest";
import {readingsAt} from "../../lib/acquisition/grid-readings.ts";
import {samplingNamed} from "../../lib/acquisition/sampling.ts";
import {openRaster} from "../../lib/formats/geotiff-read.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {memorySource} from "../formats/memory.ts";
import {floatBytes, plainTags, tiffBytes} from "../formats/tiff-bytes.ts";
import {runPython} from "../harness/python.ts";

const [WIDTH, HEIGHT] = [40, 30];
const [RIGHT, DOWN] = [0.3, 0.65];

const GDAL = `
import json, sys
import numpy
from osgeo import gdal
gdal.UseExceptions()
given = json.load(sys.stdin)
values = numpy.array(given["values"], dtype=numpy.float64).reshape(given["height"], given["width"])
source = gdal.GetDriverByName("MEM").Create("", given["width"], given["height"], 1, gdal.GDT_Float64)
source.SetGeoTransform((0, 50, 0, 0, 0, -25))
source.GetRasterBand(1).WriteArray(values)
out = {}
for name in ("bilinear", "cubic"):
    x0, y0 = 50 * (10 + given["right"]), -25 * (10 + given["down"])
    warped = gdal.Warp("", source, format="MEM", resampleAlg=name, outputType=gdal.GDT_Float64, errorThreshold=0,
                       outputBounds=(x0, y0 - 25 * 10, x0 + 50 * 20, y0), width=20, height=10)
    out[name] = warped.GetRasterBand(1).ReadAsArray().ravel().tolist()
json.dump(out, sys.stdout)
`;

test("readings between pixels agree with GDAL's", async () => {
  const deviates = normalDeviates(seededRandom(31), WIDTH * HEIGHT);
  const values = Array.from(deviates, Math.fround);
  const raster = await openRaster(memorySource(tiffBytes(plainTags(WIDTH, HEIGHT), floatBytes(values)), "grid.tif"));
  const given = {values, width: WIDTH, height: HEIGHT, right: RIGHT, down: DOWN};
  const theirs = JSON.parse(runPython(GDAL, JSON.stringify(given))) as Record<"bilinear" | "cubic", number[]>;
  const columns = Float64Array.from({length: 200}, (_, i) => 10 + RIGHT + (i % 20));
  const rows = Float64Array.from({length: 200}, (_, i) => 10 + DOWN + Math.floor(i / 20));
  for (const name of ["bilinear", "cubic"] as const) {
    const ours = await readingsAt(raster, samplingNamed(name), columns, rows);
    expect(ours).toHaveLength(theirs[name].length);
    // Pixel positions of some 1e3 m, rounded at 1e-13 m, over pixels of 25 m; sixteen products of values of order 1.
    ours.forEach((value, i) => {
      expect(Math.abs(value - theirs[name][i]!)).toBeLessThan(1e-11);
    });
  }
});
