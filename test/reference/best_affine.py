"""Half-widths of the best affine intervals for means over strips, several strips of one set-up at a time.

The same problem as strip-intervals.py, built for lines of a thousand stations: f anywhere on the support, sampled on
Gauss-Legendre elements no longer than the lowest height (8 nodes each: 1e-9 of a product) and ending where strips end; the Gram
matrix of the readings once, its eigenvectors once, then for every strip the least of cv(b/s) s over a by scipy.
Reads a list of set-ups as JSON from standard input, writes the half-widths as JSON.
"""
import json
import sys

import numpy
from scipy.linalg import eigh
from scipy.optimize import brentq, minimize_scalar
from scipy.stats import norm


def quantile(t, level):
    if t > 30:
        return t + norm.ppf(level)
    return brentq(lambda c: norm.cdf(c - t) - norm.cdf(-c - t) - level, 0, t + 10, xtol=1e-13)


def nodes(parts, strips, longest):
    rule, weight = numpy.polynomial.legendre.leggauss(8)
    at, root = [], []
    for a, b in parts:
        stops = sorted({a, b, *(t for strip in strips for t in strip if a < t < b)})
        for left, right in zip(stops, stops[1:]):
            edges = numpy.linspace(left, right, int(numpy.ceil((right - left) / longest)) + 1)
            half = numpy.diff(edges) / 2
            at.append((edges[:-1, None] + half[:, None] * (1 + rule)).ravel())
            root.append(numpy.sqrt(half[:, None] * weight).ravel())
    return numpy.concatenate(at), numpy.concatenate(root)


def half_widths(case):
    x, z = numpy.array(case["x"]), numpy.array(case["z"])
    noise, bound, degree, level = case["noise"], case["bound"], case["degree"], case["level"]
    at, root = nodes(case["parts"], case["strips"], z.min())
    kernel = z[:, None] / numpy.pi / ((at - x[:, None]) ** 2 + z[:, None] ** 2) * root
    free = kernel
    if degree >= 0:
        # Weights orthogonal to the regional: Q'(c) = c, Q a projection; its null space is left out of the eigenvectors.
        regional = numpy.linalg.qr(numpy.polynomial.legendre.legvander(2 * (x - x.mean()) / numpy.ptp(x), degree))[0]
        free = kernel - regional @ (regional.T @ kernel)
    values, vectors = eigh(free @ free.T)
    keep = values > 1e-13 * values[-1]
    values, vectors = values[keep], vectors[:, keep]
    widths = []
    for first, last in case["strips"]:
        q = numpy.where((at > first) & (at < last), root / (last - first), 0.0)
        eta = vectors.T @ (free @ q)
        square = q @ q

        def width(log_a):
            a = numpy.exp(log_a)
            g = eta / (values + a)
            deviation = noise * numpy.linalg.norm(g)
            bias = bound * numpy.sqrt(max(square - numpy.sum(g * g * (values + 2 * a)), 0))
            return quantile(bias / deviation, level) * deviation

        unit = 2 * numpy.log(noise / bound)
        grid = unit + numpy.linspace(numpy.log(1e-3), numpy.log(1e4), 30)
        tried = [width(t) for t in grid]
        k = min(max(int(numpy.argmin(tried)), 1), len(grid) - 2)
        best = minimize_scalar(width, bounds=(grid[k - 1], grid[k + 1]), method="bounded", options={"xatol": 1e-4}).x
        # The residual function itself, once, at the best a: no difference of large sums.
        weights = vectors @ (eta / (values + numpy.exp(best)))
        deviation = noise * numpy.linalg.norm(weights)
        bias = bound * numpy.linalg.norm(q - weights @ free)
        found = quantile(bias / deviation, level) * deviation
        widths.append(min(found, bound * numpy.sqrt(square)))
    return widths


if __name__ == "__main__":
    print(json.dumps([half_widths(case) for case in json.load(sys.stdin)]))
