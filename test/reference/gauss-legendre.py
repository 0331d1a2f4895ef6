"""Some nodes and weights of Gauss-Legendre rules, 20 digits: writes gauss-legendre.csv.

Run: /usr/bin/python3 gauss-legendre.py > gauss-legendre.csv   (needs mpmath; a minute)
"""
from mpmath import mp, mpf, nstr

mp.dps = 40


def newton(n, x):
    for _ in range(60):
        before, value = mpf(1), x
        for j in range(1, n):
            before, value = value, ((2 * j + 1) * x * value - j * before) / (j + 1)
        slope = n * (x * value - before) / (x * x - 1)
        if abs(value / slope) < mpf(10) ** -38:
            break
        x -= value / slope
    return x, 2 / ((1 - x * x) * slope**2)


print("# k-th node from the right (k = 0, 1, ...) of the n-point Gauss-Legendre rule and its weight;")
print("# written by gauss-legendre.py, Newton's method in 40-digit arithmetic.")
print("n,k,node,weight")
for n in (2, 3, 5, 16, 51, 200, 1001, 4000):
    for k in sorted({j for j in (0, 1, 2, 5, 11, n // 8, n // 4, n // 3, (n - 1) // 2) if j <= (n - 1) // 2}):
        x = mp.cos(mp.pi * (4 * k + 3) / (4 * n + 2)) if 2 * k != n - 1 else mpf(0)
        x, w = newton(n, x)
        print(f"{n},{k},{nstr(x, 20)},{nstr(w, 20)}")
