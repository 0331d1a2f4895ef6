"""The dense job of the case `line` as a user of numpy and scipy would write it.

Reads the table and the settings, fits the source on panels within the norm bound, carries it to the
levels, and gives every answer the shortest affine interval of fixed length:

    c = (G + a)^-1 Pq,   s = |c|,   b = M |q - sum c_i p_i|,   half-width cv(b/s) s,

a chosen for each answer by golden sections, all answers at once. Sources: Donoho, Ann. Stat. 22 (1994)
238; Armstrong & Kolesar, Econometrica 86 (2018) 655 (both from memory). It shares no code with the
program, and takes no window of the line: its intervals are the best there are.

usage: dense_line.py table.csv settings.json out/
"""
import json
import sys

import numpy as np
from scipy.linalg import eigh
from scipy.optimize import brentq
from scipy.special import ndtr, ndtri

MGAL = 1e-5
TWO_PI_G = 2 * np.pi * 6.67430e-11


def measure(x, z, a, b):
    """Harmonic measure of [a, b] seen from (x, z)."""
    return np.arctan2(z * (b - a), z * z + (a - x) * (b - x)) / np.pi


def kernel(s, z):
    return z / (np.pi * (s * s + z * z))


def folded_quantile(t, level):
    """c with P(|N(t, 1)| <= c) = level, for an array t."""
    c = np.maximum(t + ndtri(level), ndtri(0.5 * (1 + level)))
    for _ in range(6):
        missing = ndtr(t - c) + ndtr(-c - t) - (1 - level)
        slope = (np.exp(-0.5 * (c - t) ** 2) + np.exp(-0.5 * (c + t) ** 2)) / np.sqrt(2 * np.pi)
        c = c + missing / slope
    return c


def read(table, settings):
    with open(settings) as file:
        s = json.load(file)
    x, elevation, value = np.loadtxt(table, delimiter=",", skiprows=1, usecols=(1, 2, 3), unpack=True)
    return s, x, elevation - s["boundary"], value


def fit(x, z, value, edges, s, regional):
    """The source on panels (mGal) and the multiplier: |f| = M over the support."""
    width = np.diff(edges)
    length = edges[-1] - edges[0]
    whitened = measure(x[:, None], z[:, None], edges[:-1], edges[1:]) / (s["noise"] * np.sqrt(width))
    whitened -= regional @ (regional.T @ whitened)
    data = value / s["noise"]
    data = data - regional @ (regional.T @ data)
    eigenvalues, vectors = eigh(whitened.T @ whitened, driver="evd", overwrite_a=True, check_finite=False)
    keep = eigenvalues > 1e-13 * eigenvalues[-1]
    eigenvalues, vectors = eigenvalues[keep], vectors[:, keep]
    seen = vectors.T @ (whitened.T @ data)
    bound = s["rms"] * np.sqrt(length)

    def norm(log_multiplier):
        return np.sqrt(np.sum((seen / (eigenvalues + np.exp(log_multiplier))) ** 2))

    low, high = np.log(eigenvalues[0]) - 40, np.log(eigenvalues[-1]) + 5
    multiplier = 0.0
    if norm(low) > bound:
        multiplier = np.exp(brentq(lambda t: 1 / norm(t) - 1 / bound, low, high, xtol=1e-13))
    density = vectors @ (seen / (eigenvalues + multiplier)) / np.sqrt(width)
    return density, multiplier, bound, data


def continuum_modes(x, z, s, regional, bound):
    """Modes of the readings over the continuum: Gauss-Legendre nodes on elements two least heights long."""
    start, end = s["support"]
    count = int(np.ceil((end - start) / (2 * z.min())))
    node, weight = np.polynomial.legendre.leggauss(16)
    half = 0.5 * (end - start) / count
    at = (start + half * (1 + 2 * np.arange(count)[:, None] + node)).ravel()
    root = np.sqrt(np.tile(half * weight, count))
    response = kernel(at - x[:, None], z[:, None])
    response *= root / s["noise"]
    response -= regional @ (regional.T @ response)
    eigenvalues, vectors = eigh(response.T @ response, driver="evd", overwrite_a=True, check_finite=False)
    keep = eigenvalues > max(1e-13 * eigenvalues[-1], 1e-5 / bound**2)
    eigenvalues = eigenvalues[keep]
    left = (response @ vectors[:, keep]) / np.sqrt(eigenvalues)
    # Rounding mixes the regional into the weakest modes. Freed of it, they need no projection of what they read.
    return eigenvalues, left - regional @ (regional.T @ left)


def means(x, z, a, b, s):
    """Whitened responses and squared norms of means over [a, b], which lie in the support."""
    return measure(x[:, None], z[:, None], a, b) / ((b - a) * s["noise"]), 1 / (b - a)


def logarithm(x, z, s):
    start, end = s["support"]
    w = x + 1j * z
    return np.log((end - w) / (start - w))


def points(x, z, at, level, s):
    """Whitened responses and squared norms of the field at `level` above `at`, from partial fractions."""
    start, end = s["support"]
    v, log_v = at + 1j * level, logarithm(at, level, s)
    w, log_w = (x + 1j * z)[:, None], logarithm(x, z, s)[:, None]
    response = ((log_w - log_v.conj()) / (w - v.conj())).real
    response -= ((log_w - log_v) / (w - v)).real
    own = log_v.imag / level - (1 / (start - v) - 1 / (end - v)).real
    return response / (2 * np.pi**2 * s["noise"]), own / (2 * np.pi**2)


def intervals(response, norm, eigenvalues, left, data, bound, confidence):
    """Value and half-width of the shortest interval for every column of `response`."""
    eta = left.T @ response
    energy = eta * eta

    def width(log_a):
        a = np.exp(log_a)
        shrunk = eigenvalues[:, None] + a
        squared = energy / (shrunk * shrunk)
        deviation = np.sqrt(squared.sum(axis=0))
        explained = np.einsum("kn,kn->n", squared, shrunk) + a * deviation**2
        bias = bound * np.sqrt(np.maximum(norm - explained, 0))
        return folded_quantile(bias / deviation, confidence) * deviation

    unit = -2 * np.log(bound)
    low = np.full(norm.shape, unit + np.log(0.02))
    high = np.full(norm.shape, unit + np.log(400))
    golden = 0.5 * (np.sqrt(5) - 1)
    left_point, right_point = high - golden * (high - low), low + golden * (high - low)
    at_left, at_right = width(left_point), width(right_point)
    while (high - low)[0] > 0.05:
        smaller = at_left < at_right
        high, low = np.where(smaller, right_point, high), np.where(smaller, low, left_point)
        new = np.where(smaller, high - golden * (high - low), low + golden * (high - low))
        at_new = width(new)
        left_point, right_point = np.where(smaller, new, right_point), np.where(smaller, left_point, new)
        at_left, at_right = np.where(smaller, at_new, at_right), np.where(smaller, at_left, at_new)
    log_a = np.where(at_left < at_right, left_point, right_point)
    value = ((eta / (eigenvalues[:, None] + np.exp(log_a))) * (left.T @ data)[:, None]).sum(axis=0)
    return value, np.minimum(at_left, at_right)


def stretches(centre, local, length, s):
    """The stretch that the average at a place is taken over: the resolution, inside the support."""
    start, end = s["support"]
    over = np.minimum(np.maximum(local, length), end - start)
    a = np.minimum(np.maximum(centre - 0.5 * over, start), end - over)
    return a, a + over


def write(path, header, columns):
    with open(path, "w") as file:
        file.write(",".join(header) + "\n")
        for row in zip(*(column.tolist() for column in columns)):
            file.write("B1," + ",".join(f"{cell:.12g}" for cell in row) + "\n")


def main(table, settings, out):
    s, x, z, value = read(table, settings)
    start, end = s["support"]
    panels = int(np.ceil((end - start) / s["panel"] - 1e-9))
    edges = np.linspace(start, end, panels + 1)
    centre = 0.5 * (edges[1:] + edges[:-1])
    regional = np.linalg.qr(np.stack([np.ones_like(x), x - x.mean()], axis=1))[0]
    density, multiplier, bound, data = fit(x, z, value, edges, s, regional)
    eigenvalues, left = continuum_modes(x, z, s, regional, bound)

    def answer(response, norm):
        return intervals(response, norm, eigenvalues, left, data, bound, s["confidence"])

    response = kernel(centre - x[:, None], z[:, None]) / s["noise"]
    local = 1 / np.sum((left.T @ response) ** 2 / (eigenvalues + multiplier)[:, None], axis=0)
    panel_of = np.clip(np.floor((x - start) / (end - start) * panels).astype(int), 0, panels - 1)
    length = np.sort(local[panel_of])[x.size // 2]

    a, b = stretches(centre, local, length, s)
    average, half = answer(*means(x, z, a, b, s))
    write(
        f"{out}/source.csv",
        ["line", "from_m", "to_m", "source_mGal", "average_mGal", "lower_mGal", "upper_mGal", "averaged_over_m"],
        [edges[:-1], edges[1:], density, average, average - half, average + half, b - a],
    )

    levels = []
    for level in s["levels"]:
        if level == 0:
            field = np.interp(x, centre, density)
            a, b = stretches(x, np.exp(np.interp(x, centre, np.log(local))), length, s)
            middle, half = answer(*means(x, z, a, b, s))
            over = b - a
        else:
            field = measure(x[:, None], float(level), edges[:-1], edges[1:]) @ density
            middle, half = answer(*points(x, z, x, float(level), s))
            over = np.full(x.size, np.nan)
        levels.append([x, np.full(x.size, level), field, middle - half, middle + half, over])
    write(
        f"{out}/levels.csv",
        ["line", "chainage_m", "level_m", "field_mGal", "lower_mGal", "upper_mGal", "averaged_over_m"],
        np.concatenate(levels, axis=1),
    )

    a, b = (np.array([strip[k] for strip in s["strips"]], dtype=float) for k in (1, 2))
    mean, half = answer(*means(x, z, a, b, s))
    unit = MGAL / TWO_PI_G
    write(
        f"{out}/strips.csv",
        ["line", "from_m", "to_m", "mean_kg/m2", "lower_kg/m2", "upper_kg/m2"],
        [a, b, mean * unit, (mean - half) * unit, (mean + half) * unit],
    )


if __name__ == "__main__":
    if sys.argv[1:] == ["--versions"]:
        import scipy

        print(json.dumps({"python": sys.version.split()[0], "numpy": np.__version__, "scipy": scipy.__version__}))
    else:
        main(*sys.argv[1:])
