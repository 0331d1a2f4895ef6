"""Love's condenser integrals by Gauss-Legendre Nystrom in 40-digit arithmetic.

Run: /usr/bin/python3 condenser.py KAPPA [NODES]   (needs mpmath; nodes ~ 30 + 45 / kappa)
"""
import sys

from mpmath import lu_solve, matrix, mp, mpf, nstr, pi

from legendre_rule import rule

mp.dps = 40
kappa = mpf(sys.argv[1])
count = int(sys.argv[2]) if len(sys.argv) > 2 else int(30 + 45 / kappa)
x, w = rule(count)
for sign in (1, -1):
    a = matrix(count)
    for i in range(count):
        for j in range(count):
            a[i, j] = (i == j) - sign * w[j] * kappa / (pi * (kappa**2 + (x[i] - x[j]) ** 2))
    f = lu_solve(a, matrix([1] * count))
    print(f"{sys.argv[1]},{sign},{nstr(sum(w[i] * f[i] for i in range(count)), 22)}")
