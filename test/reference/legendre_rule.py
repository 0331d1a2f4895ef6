"""Gauss-Legendre nodes and weights to the working precision of mpmath."""
from mpmath import cos, mp, mpf, pi


def rule(n):
    nodes, weights = [], []
    for k in range(n):
        x = cos(pi * (4 * k + 3) / (4 * n + 2))
        while True:
            before, value = mpf(1), x
            for j in range(1, n):
                before, value = value, ((2 * j + 1) * x * value - j * before) / (j + 1)
            slope = n * (x * value - before) / (x * x - 1)
            step = value / slope
            x -= step
            # Newton doubles the digits: what follows this step is exact to working precision,
            # the slope with it after one more evaluation.
            if abs(step) < mpf(10) ** (3 - mp.dps):
                break
        nodes.append(x)
        weights.append(2 / ((1 - x * x) * slope**2))
    return nodes, weights
