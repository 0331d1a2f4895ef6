"""The jobs of the cases of level lines as a user of numpy and scipy would write them: the source on panels at a given
norm, and for every panel the average over the resolution with its shortest affine interval of fixed length.

`dense` takes eigen-decompositions, as dense_line.py does. `fast` takes transforms: products with Toeplitz matrices by
numpy's FFT, and conjugate gradients with the nearest circulant as preconditioner. Intervals well inside the line are
moved copies of the one in its middle, those near its ends are worked out one by one.

usage: level_line.py dense|fast job.json answer.json
"""
import json
import sys
import time

import numpy as np
from scipy.linalg import eigh
from scipy.optimize import brentq

from dense_line import continuum_modes, folded_quantile, intervals, kernel, means, measure, stretches

# Panels nearer to an end than so many heights have intervals of their own.
OWN_INTERVALS = 10
PASSES = 400


def read(path):
    with open(path) as file:
        s = json.load(file)
    x, value = np.array(s["x"]), np.array(s["value"])
    return s, x, np.full(x.size, float(s["height"])), value


def regional_of(x):
    return np.linalg.qr(np.stack([np.ones_like(x), x - x.mean()], axis=1))[0]


def source_by_modes(x, z, value, edges, s, regional):
    """The source at the norm, by the modes of the readings: all of them, for the multiplier is small."""
    width = np.diff(edges)
    matrix = measure(x[:, None], z[:, None], edges[:-1], edges[1:]) / (s["noise"] * np.sqrt(width))
    matrix -= regional @ (regional.T @ matrix)
    data = value / s["noise"]
    data = data - regional @ (regional.T @ data)
    eigenvalues, vectors = eigh(matrix @ matrix.T, driver="evd", overwrite_a=True, check_finite=False)
    eigenvalues = np.maximum(eigenvalues, 0)
    seen = vectors.T @ data
    bound = s["rms"] * np.sqrt(edges[-1] - edges[0])

    def norm(log_alpha):
        return np.sqrt((eigenvalues * seen**2 / (eigenvalues + np.exp(log_alpha)) ** 2).sum())

    top = np.log(eigenvalues[-1])
    alpha = np.exp(brentq(lambda t: 1 / norm(t) - 1 / bound, top - 20, top + 5, xtol=1e-13))
    density = matrix.T @ (vectors @ (seen / (eigenvalues + alpha))) / np.sqrt(width)
    return density, alpha, bound, data


def dense(s, x, z, value):
    start, end = s["support"]
    edges = np.linspace(start, end, int(round((end - start) / s["panel"])) + 1)
    centre = 0.5 * (edges[1:] + edges[:-1])
    regional = regional_of(x)
    density, multiplier, bound, data = source_by_modes(x, z, value, edges, s, regional)
    source_done = time.process_time()
    eigenvalues, left = continuum_modes(x, z, s, regional, bound)
    response = kernel(centre - x[:, None], z[:, None]) / s["noise"]
    local = 1 / np.sum((left.T @ response) ** 2 / (eigenvalues + multiplier)[:, None], axis=0)
    a, b = stretches(centre, local, np.median(local), s)
    average, half = intervals(*means(x, z, a, b, s), eigenvalues, left, data, bound, s["confidence"])
    return density, average, half, b - a, source_done


class Toeplitz:
    """A symmetric Toeplitz matrix by its first column, and the nearest circulant (T. Chan)."""

    def __init__(self, column):
        n = column.size
        self.n = n
        self.size = 2 ** int(np.ceil(np.log2(2 * n)))
        padded = np.zeros(self.size)
        padded[:n] = column
        padded[self.size - n + 1 :] = column[:0:-1]
        self.symbol = np.fft.rfft(padded).real
        k = np.arange(n)
        self.circulant = np.fft.rfft(((n - k) * column + k * np.concatenate([[0], column[:0:-1]])) / n).real

    def __matmul__(self, v):
        return np.fft.irfft(self.symbol * np.fft.rfft(v, self.size), self.size)[..., : self.n]


def gradients(product, smooth, right, start=None, tolerance=1e-10):
    """Preconditioned conjugate gradients for many right-hand sides, the rows of `right`."""
    x = np.zeros_like(right) if start is None else start.copy()
    r = right - product(x)
    z = smooth(r)
    p, size = z.copy(), np.sum(r * z, axis=-1, keepdims=True)
    stop = tolerance * np.linalg.norm(right, axis=-1).max()
    for _ in range(PASSES):
        if np.linalg.norm(r, axis=-1).max() <= stop:
            break
        q = product(p)
        step = size / np.sum(p * q, axis=-1, keepdims=True)
        x += step * p
        r -= step * q
        z = smooth(r)
        grown = np.sum(r * z, axis=-1, keepdims=True)
        p = z + (grown / size) * p
        size = grown
    return x


def fast(s, x, z, value):
    n, h, noise, width = x.size, float(s["height"]), s["noise"], s["panel"]
    start, end = s["support"]
    regional = regional_of(x)
    bound = s["rms"] * np.sqrt(end - start)

    def free(v):
        return v - (v @ regional) @ regional.T

    data = free(value / noise)
    lag = (x - x[0])[:, None] + np.array([-0.5, 0.5]) * width
    column = np.diff(np.arctan(lag / h), axis=1)[:, 0] / (np.pi * noise * np.sqrt(width))
    b = Toeplitz(column)

    def solve(gram, circulant, alpha, right, first=None, tolerance=1e-10):
        product = lambda v: free(gram(v)) + alpha * v
        inverse = 1 / (circulant + alpha)
        smooth = lambda v: free(np.fft.irfft(inverse * np.fft.rfft(v), n))
        return gradients(product, smooth, right, first, tolerance)

    last = None

    def source(log_alpha):
        nonlocal last
        last = solve(lambda v: b @ (b @ v), b.circulant**2, np.exp(log_alpha), data, last)
        return b @ last

    def excess(log_alpha):
        return 1 / np.linalg.norm(source(log_alpha)) - 1 / bound

    top = np.log(b.circulant.max() ** 2)
    log_alpha = brentq(excess, top - 20, top + 5, xtol=1e-11)
    density = source(log_alpha) / np.sqrt(width)
    alpha = np.exp(log_alpha)
    source_done = time.process_time()

    # Inner products over the continuum: of the endless line, less what lies outside the support.
    def logarithm(at):
        w = at + 1j * h
        return np.log((end - w) / (start - w))

    def entries(i, j):
        """Integral over the support of both kernels, by partial fractions."""
        v, w = x[j] + 1j * h, x[i] + 1j * h
        lv, lw = logarithm(x[j]), logarithm(x[i])
        value = ((lw - lv.conj()) / (w - v.conj())).real
        same = i == j
        part = np.where(same, 1, w - v)
        value = value - np.where(same, (1 / (start - v) - 1 / (end - v)).real, ((lw - lv) / part).real)
        return value / (2 * np.pi**2 * noise**2)

    d = x - x[0]
    endless = 2 * h / (np.pi * (d * d + 4 * h * h)) / noise**2
    rest = endless[0] - entries(np.arange(n), np.arange(n))
    missing = []
    while len(missing) < 200 and rest.max() > 1e-12 * endless[0]:
        k = int(rest.argmax())
        c = endless[np.abs(np.arange(n) - k)] - entries(np.arange(n), np.full(n, k))
        for m in missing:
            c = c - m[k] * m
        if not c[k] > 0:
            break
        missing.append(c / np.sqrt(c[k]))
        rest = rest - missing[-1] ** 2
    missing = np.array(missing)
    t = Toeplitz(endless)

    def gram(v):
        return t @ v - (v @ missing.T) @ missing

    centre = start + (np.arange(int(round((end - start) / width))) + 0.5) * width
    edge = int(OWN_INTERVALS * h / width)
    middle = centre.size // 2
    own = np.concatenate([np.arange(min(edge, middle)), [middle], np.arange(max(centre.size - edge, middle + 1), centre.size)])

    def answered(shift, right):
        return solve(gram, np.maximum(t.circulant, 0), shift, right, tolerance=1e-7)

    response = free(kernel(centre[own, None] - x, h) / noise)
    local_own = 1 / np.sum(response * answered(alpha, response), axis=1)
    local = np.full(centre.size, local_own[own == middle][0])
    local[own] = local_own
    a, e = stretches(centre, local, np.median(local), s)

    def mean_of(k):
        r, norm = means(x, z, a[k], e[k], s)
        return free(r.T), norm

    def widths(shift, p, norm):
        c = answered(shift, p)
        deviation = np.linalg.norm(c, axis=1)
        bias = bound * np.sqrt(np.maximum(norm - 2 * np.sum(c * p, axis=1) + np.sum(c * gram(c), axis=1), 0))
        return c, folded_quantile(bias / deviation, s["confidence"]) * deviation

    # The best shift of the middle serves all: the width hardly depends on it.
    p, norm = mean_of(np.array([middle]))
    tried = np.exp(np.linspace(np.log(0.1), np.log(30), 12)) / bound**2
    shift = tried[np.argmin([widths(one, p, norm)[1][0] for one in tried])]
    p, norm = mean_of(own)
    c, half_own = widths(shift, p, norm)
    at = int(np.flatnonzero(own == middle)[0])
    half = np.full(centre.size, half_own[at])
    # Moved copies: weights outside the line are left out, which far from its ends are next to nothing.
    weights = Toeplitz(np.zeros(n))
    weights.symbol = np.fft.rfft(np.roll(np.pad(c[at], (0, weights.size - n)), -middle)).conj()
    average = weights @ data
    average[own] = c @ data
    half[own] = half_own
    return density, average, half, e - a, source_done


def main(kind, job, answer):
    given = read(job)
    begin = time.process_time()
    density, average, half, over, source_done = {"dense": dense, "fast": fast}[kind](*given)
    seconds = time.process_time() - begin
    with open(answer, "w") as file:
        json.dump({"seconds": seconds, "source": source_done - begin, **{k: v.tolist() for k, v in
                  dict(density=density, average=average, half=half, over=over).items()}}, file)


if __name__ == "__main__":
    main(*sys.argv[1:4])
