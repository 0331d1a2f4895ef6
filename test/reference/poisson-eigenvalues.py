"""Eigenvalues of the truncated Poisson operator on (-1, 1), many digits.

Legendre-Galerkin with parity split: the matrix element is the integral over x of
p_m(x) (-2/pi) Im Q_n(x + ih), by Gauss-Legendre quadrature; Q_n by backward recurrence.
Run: /usr/bin/python3 poisson-eigenvalues.py H [DIGITS [BASIS]]   (needs mpmath)
Seconds for H >= 1, a minute for 0.02, half an hour for 0.001 with 26 digits and 500 polynomials.
"""
import sys

from mpmath import eigsy, log, matrix, mp, mpc, mpf, nstr, pi, sqrt

from legendre_rule import rule


def second_kind(z, count):
    """Q_0 ... Q_{count-1} at z."""
    growth = log(abs(z + sqrt(z * z - 1)))
    if growth < 0:
        growth = -growth
    top = count + int(mp.dps * log(10) / (2 * growth)) + 10
    ratio = mpc(0)
    ratios = [mpc(0)] * (top + 1)
    for k in range(top, 0, -1):
        ratio = k / ((2 * k + 1) * z - (k + 1) * ratio)
        ratios[k] = ratio
    values = [log((z + 1) / (z - 1)) / 2]
    for k in range(1, count):
        values.append(values[-1] * ratios[k])
    return values


def positive_half(count):
    """Gauss-Legendre pairs (x, w) with x > 0; count is even."""
    return [(x, w) for x, w in zip(*rule(count)) if x > 0]


def eigenvalues(h, basis, points):
    found = {}
    tables = []
    for x, w in positive_half(points):
        p = [mpf(1), x]
        for k in range(1, basis):
            p.append(((2 * k + 1) * x * p[k] - k * p[k - 1]) / (k + 1))
        tables.append((w, p, [q.imag for q in second_kind(mpc(x, h), basis)]))
    for parity in (0, 1):
        orders = range(parity, basis, 2)
        a = matrix(len(orders))
        for i, m in enumerate(orders):
            for j, n in enumerate(orders):
                if j <= i:
                    total = sum(w * p[m] * q[n] for w, p, q in tables)
                    a[i, j] = a[j, i] = -2 / pi * total * sqrt((2 * m + 1) * (2 * n + 1))
        for k, value in enumerate(sorted(eigsy(a, eigvals_only=True), reverse=True)):
            found[2 * k + parity] = value
    return [found[n] for n in sorted(found)]


if __name__ == "__main__":
    mp.dps = int(sys.argv[2]) if len(sys.argv) > 2 else 50
    height = mpf(sys.argv[1])
    size = int(sys.argv[3]) if len(sys.argv) > 3 else int(20 + 25 / sqrt(min(height, 1)))
    for n, mu in enumerate(eigenvalues(height, size, 2 * size)[:10]):
        print(f"{sys.argv[1]},{n},{nstr(mu, 22)}")
