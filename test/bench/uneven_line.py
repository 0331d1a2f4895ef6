"""The dense job of the case `uneven-line`: the source on panels at a given norm, by eigh.

usage: uneven_line.py input.json output.json, or --versions
"""
import json
import sys
import time

import numpy as np
import scipy
from scipy.linalg import eigh
from scipy.optimize import brentq


def main(source, target):
    with open(source) as file:
        s = json.load(file)
    x, z, value = (np.array(s[name]) for name in ("x", "z", "value"))
    start = time.perf_counter()
    edges = np.linspace(s["from"], s["to"], s["panels"] + 1)
    width = np.diff(edges)
    a, b = edges[:-1] - x[:, None], edges[1:] - x[:, None]
    matrix = np.arctan2(z[:, None] * (b - a), z[:, None] ** 2 + a * b) / (np.pi * s["noise"] * np.sqrt(width))
    regional = np.linalg.qr(np.stack([np.ones_like(x), x - x.mean()], axis=1))[0]
    matrix -= regional @ (regional.T @ matrix)
    data = value / s["noise"]
    data -= regional @ (regional.T @ data)
    eigenvalues, vectors = eigh(matrix @ matrix.T, driver="evd", overwrite_a=True, check_finite=False)
    eigenvalues = np.maximum(eigenvalues, 0)
    c = vectors.T @ data

    def excess(log_a):
        return np.sqrt((eigenvalues * c**2 / (eigenvalues + np.exp(log_a)) ** 2).sum()) - s["bound"]

    top = np.log(eigenvalues[-1])
    multiplier = np.exp(brentq(excess, top - 16, top + 5, xtol=1e-13))
    density = matrix.T @ (vectors @ (c / (eigenvalues + multiplier))) / np.sqrt(width)
    seconds = time.perf_counter() - start
    with open(target, "w") as file:
        json.dump({"density": density.tolist(), "multiplier": multiplier, "seconds": seconds}, file)


if __name__ == "__main__":
    if sys.argv[1] == "--versions":
        print(json.dumps({"numpy": np.__version__, "scipy": scipy.__version__}))
    else:
        main(*sys.argv[1:3])
