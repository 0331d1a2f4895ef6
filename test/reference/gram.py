"""Inner products of Poisson kernels over a union of intervals, 50-digit arithmetic: writes gram.csv.

int_S P_z(x - t) P_v(y - t) dt by quadrature (mpmath, tanh-sinh between breaks at the stations) and, as a check of
the table itself, by the antiderivatives of the partial fractions; both must agree to 20 digits.
Points far apart, at one place, nearly at one place (down to 1e-9 heights), over an end, far off; thin, long and
several parts.
Run: /usr/bin/python3 gram.py > gram.csv   (needs mpmath)
"""
from mpmath import conj, log, mp, mpc, mpf, nstr, pi, quad, re

mp.dps = 50


def by_quadrature(parts, x, z, y, v):
    total = mpf(0)
    for a, b in parts:
        breaks = sorted({mpf(a), mpf(b)} | {mpf(c) + s * h for c, h in ((x, z), (y, v)) for s in (-40, -6, -1, 0, 1, 6, 40) if a < c + s * h < b})
        total += quad(lambda t: mpf(z) / ((t - x) ** 2 + mpf(z) ** 2) * mpf(v) / ((t - y) ** 2 + mpf(v) ** 2), breaks)
    return total / pi**2


def closed(parts, x, z, y, v):
    w, u = mpc(x, z), mpc(y, v)
    log_of = lambda c: sum(log((mpf(b) - c) / (mpf(a) - c)) for a, b in parts)
    direct = (log_of(w) - log_of(u)) / (w - u) if w != u else sum(1 / (mpf(a) - w) - 1 / (mpf(b) - w) for a, b in parts)
    return re((log_of(w) - conj(log_of(u))) / (w - conj(u)) - direct) / (2 * pi**2)


supports = {
    "long": [(100.0, 500.0)],
    "thin": [(299.9, 300.1)],
    "union": [(-700.0, -650.0), (100.0, 180.0), (181.0, 420.0)],
    "very long": [(-40000.0, 60000.0)],
}
pairs = []
for x, z in ((250.0, 20.0), (100.0, 20.0), (499.0, 3.0), (-900.0, 60.0), (4000.0, 20.0)):
    pairs.append((x, z, x, z))
    for apart in (1e-9, 1e-6, 2e-4, 1e-2, 1.9e-2, 2.1e-2, 0.3, 2.0, 30.0):
        pairs.append((x, z, x + apart * z, z))
        pairs.append((x, z, x - 0.8 * apart * z, z * (1 + 0.6 * apart)))
print("# int_S P_z1(x1-t) P_z2(x2-t) dt, parts of S as from:to joined by spaces; 50-digit arithmetic; written by gram.py.")
print("support,x1,z1,x2,z2,value")
for parts in supports.values():
    for pair in pairs:
        value, check = by_quadrature(parts, *pair), closed(parts, *pair)
        assert abs(value - check) < mpf(10) ** -20 * abs(value), (parts, pair, value, check)
        words = " ".join(f"{a!r}:{b!r}" for a, b in parts)
        print(f"{words},{','.join(repr(c) for c in pair)},{nstr(value, 22)}")
