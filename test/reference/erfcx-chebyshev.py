"""Chebyshev coefficients of (1 + x) exp(x^2) erfc(x), x >= 0, as used in lib/numeric/normal.ts.

The variable is s = (x - 2) / (x + 2), which maps [0, inf) on [-1, 1). The
function is smooth there, also at s = 1 where its asymptotic series diverges, so
coefficients fall faster than any power: 29 of them reach 1e-18.
Run: /usr/bin/python3 erfcx-chebyshev.py   (needs mpmath)
"""
from mpmath import cos, erfc, exp, mp, mpf, nstr, pi, sqrt

NODES = 200
mp.dps = 50


def scaled(x):
    """(1 + x) exp(x^2) erfc(x): by definition, or by DLMF 7.12.1 where that is exact to 50 digits."""
    if x < 30:
        mp.dps = 60 + int(x * x)
        value = (1 + x) * exp(x * x) * erfc(x)
        mp.dps = 50
        return +value
    term = total = mpf(1)
    k = 0
    while abs(term) > mpf(10) ** -50:
        k += 1
        term = -term * (2 * k - 1) / (2 * x * x)
        total += term
    return (1 + x) / (x * sqrt(pi)) * total


angles = [pi * (k + mpf(1) / 2) / NODES for k in range(NODES)]
values = [scaled(2 * (1 + cos(t)) / (1 - cos(t))) for t in angles]
for j in range(NODES):
    c = 2 * sum(v * cos(j * t) for v, t in zip(values, angles)) / NODES
    if abs(c) < mpf(10) ** -18:
        break
    print(nstr(c / 2 if j == 0 else c, 20))
