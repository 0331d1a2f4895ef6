"""The dense job of the case `uneven`: source within the bound, and averages with intervals on every panel.

usage: uneven_bands.py input.json output.json
"""
import json
import sys
import time

import numpy as np
from dense_line import continuum_modes, intervals, kernel, means, measure, stretches
from scipy.linalg import eigh
from scipy.optimize import brentq


def fit(x, z, value, edges, s, regional):
    """The source on panels and the multiplier, all modes kept: those that are rounding still carry A^T d."""
    width = np.diff(edges)
    whitened = measure(x[:, None], z[:, None], edges[:-1], edges[1:]) / (s["noise"] * np.sqrt(width))
    whitened -= regional @ (regional.T @ whitened)
    data = value / s["noise"]
    data = data - regional @ (regional.T @ data)
    eigenvalues, vectors = eigh(whitened.T @ whitened, driver="evd", overwrite_a=True, check_finite=False)
    eigenvalues = np.maximum(eigenvalues, 0)
    seen = vectors.T @ (whitened.T @ data)
    bound = s["rms"] * np.sqrt(edges[-1] - edges[0])

    def excess(log_multiplier):
        return 1 / np.sqrt(np.sum((seen / (eigenvalues + np.exp(log_multiplier))) ** 2)) - 1 / bound

    top = np.log(eigenvalues[-1])
    multiplier = np.exp(brentq(excess, top - 20, top + 5, xtol=1e-13))
    return vectors @ (seen / (eigenvalues + multiplier)) / np.sqrt(width), multiplier, bound, data


def main(source, target):
    with open(source) as file:
        s = json.load(file)
    x, z, value = (np.array(s[name]) for name in ("x", "z", "value"))
    begun = time.process_time()
    start, end = s["support"]
    panels = int(np.ceil((end - start) / s["panel"] - 1e-9))
    edges = np.linspace(start, end, panels + 1)
    centre = 0.5 * (edges[1:] + edges[:-1])
    regional = np.linalg.qr(np.stack([np.ones_like(x), x - x.mean()], axis=1))[0]
    density, multiplier, bound, data = fit(x, z, value, edges, s, regional)
    solved = time.process_time()
    eigenvalues, left = continuum_modes(x, z, s, regional, bound)
    response = kernel(centre - x[:, None], z[:, None]) / s["noise"]
    local = 1 / np.sum((left.T @ response) ** 2 / (eigenvalues + multiplier)[:, None], axis=0)
    panel_of = np.clip(np.floor((x - start) / (end - start) * panels).astype(int), 0, panels - 1)
    length = np.sort(local[panel_of])[x.size // 2]
    a, b = stretches(centre, local, length, s)
    average, half = intervals(*means(x, z, a, b, s), eigenvalues, left, data, bound, s["confidence"])
    answers = {
        "density": density.tolist(),
        "lower": (average - half).tolist(),
        "upper": (average + half).tolist(),
        "multiplier": multiplier,
        "source": solved - begun,
        "all": time.process_time() - begun,
    }
    with open(target, "w") as file:
        json.dump(answers, file)


if __name__ == "__main__":
    main(*sys.argv[1:3])
