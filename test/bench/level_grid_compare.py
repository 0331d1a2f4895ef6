"""How far the answers of the program and of level_grid.py lie apart, as JSON.

usage: level_grid_compare.py program.tif lines.csv baseline.tif summary.json
"""
import csv
import json
import sys

import numpy as np
from osgeo import gdal

gdal.UseExceptions()


def main(ours, ledger, theirs, summary):
    def bands(path):
        grid = gdal.Open(path)
        return [grid.GetRasterBand(k).ReadAsArray().astype(np.float64) for k in (1, 2)]

    with open(summary) as file:
        told = json.load(file)
    with open(ledger) as file:
        rows = list(csv.DictReader(file))
    (value, half), (their_value, their_half) = bands(ours), bands(theirs)
    ratio = half / their_half
    column = lambda name: np.array([float(row[name]) for row in rows])
    print(
        json.dumps(
            {
                "value": np.abs(value - their_value).max() / np.abs(their_value).max(),
                "shortest": ratio.min(),
                "longest": ratio.max(),
                "middle": float(np.median(ratio)),
                "multiplier": abs(column("multiplier")[0] / told["multiplier"] - 1),
                "resolution": abs(column("resolution_m")[0] / told["resolution"] - 1),
                "norm": np.abs(column("norm") / told["norms"] - 1).max(),
                "misfit": np.abs(column("misfit") / told["misfits"] - 1).max(),
            }
        )
    )


if __name__ == "__main__":
    main(*sys.argv[1:])
