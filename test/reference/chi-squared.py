"""Quantiles of chi-squared: writes chi-squared.csv.

Run: /usr/bin/python3 chi-squared.py > chi-squared.csv   (needs scipy, for starts, and mpmath)
"""
from mpmath import findroot, gammainc, log, mp, mpf, nstr
from scipy.stats import chi2

mp.dps = 40

print("# x with P(X > x) = tail for X chi-squared; written by chi-squared.py in 40-digit arithmetic, from scipy's value on.")
print("tail,degrees,value")
for degrees in (1, 2, 3, 7, 20, 53, 151, 480, 5000, 100000):
    for tail in (0.95, 0.6, 0.5, 0.32, 0.05, 0.01, 1e-5, 1e-9):
        start = mpf(float(chi2.isf(tail, degrees)))
        side = lambda x: log(gammainc(mpf(degrees) / 2, a=x / 2, regularized=True)) - log(mpf(tail))
        value = findroot(side, (start, start * (1 + mpf(10) ** -9)))
        assert abs(value / start - 1) < 1e-9
        print(f"{tail!r},{degrees},{nstr(value, 20)}")
