"""Dirichlet eigenvalues of |d/dx| on (-1, 1), about 12 digits.

Galerkin in sqrt(1 - x^2) U_m(x), on which |d/dx| acts as multiplication of U_m by m + 1:
A c = lambda B c, A = diag(p pi/2), B_pq = 1/(1 - (p - q)^2) - 1/(1 - (p + q)^2) for p - q even,
p = m + 1. The error falls like N^-6, so two sizes are extrapolated.
Run: /usr/bin/python3 cauchy-interval.py   (needs numpy and scipy)
"""
import numpy
from scipy.linalg import eigh


def values(count, parity):
    p = numpy.arange(1 + parity, 2 * count + 1, 2, dtype=float)
    difference, total = p[:, None] - p[None, :], p[:, None] + p[None, :]
    b = 1 / (1 - difference**2) - 1 / (1 - total**2)
    # lambda = 1 / nu with B c = nu A c, A diagonal.
    root = numpy.sqrt(p * numpy.pi / 2)
    nu = eigh(b / root[:, None] / root[None, :], eigvals_only=True)
    return numpy.sort(1 / nu)[:5]


found = []
for parity in (0, 1):
    coarse, fine = values(60, parity), values(120, parity)
    found.append(fine + (fine - coarse) / 63)
for n in range(10):
    print(f"{n + 1},{found[n % 2][n // 2]:.13f}")
