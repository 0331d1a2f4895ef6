"""An invented magnetic grid, float32 in compressed tiles: three sheets that strike with the columns over a slope, noise of 1 nT.

usage: level_grid_input.py columns rows out.tif
"""
import sys

import numpy as np
from osgeo import gdal, osr

gdal.UseExceptions()
PIXEL, CLEARANCE, SEED, AT_ONCE = 20.0, 60.0, 7, 256


def main(columns, rows, target):
    x = (np.arange(columns) + 0.5) * PIXEL
    length = columns * PIXEL

    def sheet(a, b):
        return (np.arctan((b - x) / CLEARANCE) - np.arctan((a - x) / CLEARANCE)) / np.pi

    signal = 700 * sheet(0.31 * length, 0.345 * length) - 260 * sheet(0.64 * length, 0.755 * length)
    signal += 300 * sheet(0.8 * length, 0.8 * length + 150) + 80 * x / length
    random = np.random.default_rng(SEED)
    options = ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=3", "ZLEVEL=1", "BIGTIFF=IF_SAFER"]
    grid = gdal.GetDriverByName("GTiff").Create(target, columns, rows, 1, gdal.GDT_Float32, options)
    grid.SetGeoTransform([300000, PIXEL, 0, 6100000, 0, -PIXEL])
    system = osr.SpatialReference()
    system.ImportFromEPSG(32633)
    grid.SetProjection(system.ExportToWkt())
    band = grid.GetRasterBand(1)
    band.SetNoDataValue(-32768)
    for first in range(0, rows, AT_ONCE):
        count = min(AT_ONCE, rows - first)
        strength = 1 + 0.3 * np.sin(np.arange(first, first + count)[:, None] / 90)
        band.WriteArray((strength * signal + random.standard_normal((count, columns))).astype(np.float32), 0, first)
    grid.FlushCache()


if __name__ == "__main__":
    main(int(sys.argv[1]), int(sys.argv[2]), sys.argv[3])
