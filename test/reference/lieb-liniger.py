"""e(gamma) of the one-dimensional Bose gas at a given kernel height alpha.

g - P_alpha g = 1/(2 pi) on (-1, 1); gamma = alpha / int g; e = (gamma/alpha)^3 int x^2 g.
Gauss-Legendre Nystrom, 40 digits. alpha of the table belongs to the gamma beside it.
Run: /usr/bin/python3 lieb-liniger.py ALPHA   (needs mpmath)
"""
import sys

from mpmath import lu_solve, matrix, mp, mpf, nstr, pi

from legendre_rule import rule

mp.dps = 40
alpha = mpf(sys.argv[1])
count = int(30 + 30 / alpha)
x, w = rule(count)
a = matrix(count)
for i in range(count):
    for j in range(count):
        a[i, j] = (i == j) - w[j] * alpha / (pi * (alpha**2 + (x[i] - x[j]) ** 2))
g = lu_solve(a, matrix([1 / (2 * pi)] * count))
gamma = alpha / sum(w[i] * g[i] for i in range(count))
energy = (gamma / alpha) ** 3 * sum(w[i] * x[i] ** 2 * g[i] for i in range(count))
print(f"{nstr(gamma, 13)},{sys.argv[1]},{nstr(energy, 14)}")
