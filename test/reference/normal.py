"""erfc, the normal distribution function and quantiles, 20 digits: writes normal.csv.

Run: /usr/bin/python3 normal.py > normal.csv   (needs mpmath)
"""
from mpmath import erfc, findroot, log, mp, mpf, ncdf, nstr

mp.dps = 40


def quantile(p):
    return findroot(lambda x: log(ncdf(x)) - log(p), (mpf(-1) if p > 1e-3 else -mp.sqrt(-2 * log(p)), mpf(-0.5)))


def folded(t, level):
    return findroot(lambda c: ncdf(c - t) - ncdf(-c - t) - level, (mpf(t), mpf(t) + 3), solver="anderson")


print("# kind, argument(s), value: written by normal.py in 40-digit arithmetic. Arguments are the doubles nearest to what is printed.")
print("kind,x,level,value")
for x in (-6, -2.5, -0.75, -1e-9, 0, 1e-12, 0.125, 0.46875, 0.5, 0.9, 1, 1.5, 2, 2.75, 4, 5.5, 6, 8, 10, 13.25, 17, 21, 25, 26):
    print(f"erfc,{x!r},,{nstr(erfc(mpf(x)), 20)}")
for x in (-37, -30.5, -20, -12, -8.25, -5, -3, -2, -1.5, -1, -0.25, 0, 0.5, 1, 2, 4, 8):
    print(f"cdf,{x!r},,{nstr(ncdf(mpf(x)), 20)}")
for p in (1e-300, 1e-100, 1e-20, 1e-9, 1e-3, 0.025, 0.05, 0.16, 0.3, 0.45, 0.5):
    print(f"quantile,{p!r},,{nstr(quantile(mpf(p)), 20) if p != 0.5 else 0}")
for t in (0, 0.01, 0.3, 0.5, 1, 1.5, 2, 3.5, 6, 8):
    for level in (0.5, 0.68, 0.9, 0.95, 0.99):
        print(f"folded,{t!r},{level!r},{nstr(folded(mpf(t), mpf(level)), 20)}")
