"""The job of the case `level-grid` as a user of numpy, scipy and GDAL would write it.

All rows share one geometry, and so one eigen-decomposition: readings = B f + line, B on cells of equal width. It gives the
multiplier (the largest whose misfit over a sample of rows the noise explains), the answers of all rows by two matrix
products, and the half-widths, which are those of the shortest affine intervals of fixed length, found for all pixels of a
row at once by golden sections. Sources: Morozov, Soviet Math. Dokl. 7 (1966) 414; Donoho, Ann. Stat. 22 (1994) 238 (from
memory). It shares no code with the program.

usage: level_grid.py in.tif out.tif settings.json summary.json
"""
import json
import sys

import numpy as np
from osgeo import gdal
from scipy.linalg import eigh
from scipy.optimize import brentq
from scipy.special import ndtr, ndtri

gdal.UseExceptions()


def measure(x, z, a, b):
    """Harmonic measure of [a, b] seen from (x, z)."""
    return np.arctan2(z * (b - a), z * z + (a - x) * (b - x)) / np.pi


def folded_quantile(t, level):
    """c with P(|N(t, 1)| <= c) = level, for an array t."""
    c = np.maximum(t + ndtri(level), ndtri(0.5 * (1 + level)))
    for _ in range(6):
        missing = ndtr(t - c) + ndtr(-c - t) - (1 - level)
        slope = (np.exp(-0.5 * (c - t) ** 2) + np.exp(-0.5 * (c + t) ** 2)) / np.sqrt(2 * np.pi)
        c = c + missing / slope
    return c


def half_widths(eta, norm, eigenvalues, bound, confidence):
    """Half-width of the shortest interval for every column of `eta`, what the modes see of a functional."""
    energy = eta * eta

    def width(log_a):
        a = np.exp(log_a)
        inverse = 1 / (eigenvalues[:, None] + a)
        explained = np.einsum("kn,kn->n", energy, inverse)
        squared = np.einsum("kn,kn,kn->n", energy, inverse, inverse)
        deviation = np.sqrt(squared)
        bias = bound * np.sqrt(np.maximum(norm - explained - a * squared, 0))
        return folded_quantile(bias / deviation, confidence) * deviation

    unit = -2 * np.log(bound)
    low = np.full(norm.shape, unit + np.log(0.02))
    high = np.full(norm.shape, unit + np.log(400))
    golden = 0.5 * (np.sqrt(5) - 1)
    left, right = high - golden * (high - low), low + golden * (high - low)
    at_left, at_right = width(left), width(right)
    while (high - low)[0] > 0.1:
        smaller = at_left < at_right
        high, low = np.where(smaller, right, high), np.where(smaller, low, left)
        new = np.where(smaller, high - golden * (high - low), low + golden * (high - low))
        at_new = width(new)
        left, right = np.where(smaller, new, right), np.where(smaller, left, new)
        at_left, at_right = np.where(smaller, at_new, at_right), np.where(smaller, at_left, at_new)
    return np.minimum(at_left, at_right)


def main(source, target, settings, summary):
    with open(settings) as file:
        s = json.load(file)
    grid = gdal.Open(source)
    place = grid.GetGeoTransform()
    rows = grid.GetRasterBand(1).ReadAsArray().astype(np.float64)
    count, n = rows.shape
    pixel, z, noise, bound, confidence = place[1], s["clearance"], s["noise"], s["bound"], s["confidence"]
    x = (np.arange(n) + 0.5) * pixel
    start, end = x[0] - 5 * z, x[-1] + 5 * z
    width = pixel / s["split"]
    # Edges aligned with the pixels, and what is left at either end.
    first = x[0] - 0.5 * pixel - width * np.floor((x[0] - 0.5 * pixel - start) / width)
    inner = np.arange(first, end + 1e-6 * width, width)
    edges = np.unique(np.concatenate([[start], inner[inner > start + 1e-6 * width], [end]]))
    edges = edges[np.concatenate([[True], np.diff(edges) > 1e-6 * width])]
    root, centre = np.sqrt(np.diff(edges)), 0.5 * (edges[1:] + edges[:-1])

    regional = np.linalg.qr(np.stack([np.ones(n), x - x.mean()], axis=1))[0]
    operator = measure(x[:, None], z, edges[:-1], edges[1:]) / (noise * root)
    free = operator - regional @ (regional.T @ operator)
    eigenvalues, vectors = eigh(free @ free.T, driver="evd", overwrite_a=True, check_finite=False)
    keep = eigenvalues > 1e-13 * eigenvalues[-1]
    eigenvalues, vectors = eigenvalues[keep], vectors[:, keep]

    rows /= noise
    rows -= (rows @ regional) @ regional.T
    seen = rows @ vectors
    # One multiplier for all: the largest whose misfit the noise explains, by a sample of rows.
    sample = np.array(s["sample"])
    energies = np.sum(seen[sample] ** 2, axis=0)
    outside = np.sum(rows[sample] ** 2) - energies.sum()
    readings = sample.size * n

    def misfit(log_multiplier):
        a = np.exp(log_multiplier)
        return outside + np.sum(energies * (a / (eigenvalues + a)) ** 2)

    wanted = readings + 2 * np.sqrt(2 * readings)
    log_multiplier = brentq(
        lambda t: misfit(t) - wanted, np.log(eigenvalues[-1]) - 30, np.log(eigenvalues[-1]) + 5, xtol=1e-13
    )
    multiplier = np.exp(log_multiplier)
    shrunk = seen / (eigenvalues + multiplier)
    norms = np.sqrt(np.sum(shrunk * shrunk * eigenvalues, axis=1))
    misfits = np.sum(rows * rows, axis=1) - np.sum(seen * seen, axis=1) + np.sum((multiplier * shrunk) ** 2, axis=1)

    # Values at the boundary: between centres of cells, level beyond the outermost.
    place_of = np.clip(np.searchsorted(centre, x) - 1, 0, centre.size - 2)
    share = np.clip((x - centre[place_of]) / (centre[place_of + 1] - centre[place_of]), 0, 1)
    at_pixels = (1 - share) * free[:, place_of] / root[place_of] + share * free[:, place_of + 1] / root[place_of + 1]
    values = shrunk @ (vectors.T @ at_pixels)

    def kernel(at):
        return vectors.T @ (z / (np.pi * ((at - x[:, None]) ** 2 + z * z)) / noise)

    local = 1 / np.sum(kernel(x) ** 2 / (eigenvalues + multiplier)[:, None], axis=0)
    length = np.sort(local)[n // 2]
    over = np.minimum(np.maximum(local, length), end - start)
    a = np.minimum(np.maximum(x - 0.5 * over, start), end - over)
    response = measure(x[:, None], z, a, a + over) / (over * noise)
    half = half_widths(vectors.T @ response, 1 / over, eigenvalues, bound, confidence)

    out = gdal.GetDriverByName("GTiff").Create(
        target, n, count, 2, gdal.GDT_Float32, ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=3", f"NUM_THREADS={s['threads']}"]
    )
    out.SetGeoTransform(place)
    out.SetProjection(grid.GetProjection())
    out.GetRasterBand(1).WriteArray(values.astype(np.float32))
    out.GetRasterBand(2).WriteArray(np.tile(half.astype(np.float32), (count, 1)))
    out.FlushCache()
    out = None
    with open(summary, "w") as file:
        json.dump(
            {"multiplier": multiplier, "resolution": length, "norms": norms.tolist(), "misfits": misfits.tolist()}, file
        )


if __name__ == "__main__":
    main(*sys.argv[1:])
