"""Harmonic measure of a panel [a, b] seen from (x, z), 60-digit arithmetic: writes harmonic-measure.csv.

(arctan((b - x)/z) - arctan((a - x)/z))/pi, the form that a program must not use in double precision.
Every input is a double, printed so that it reads back as the same one; thin to wide, above to far,
low to high, and origins that make a - x inexact.
Run: /usr/bin/python3 harmonic-measure.py > harmonic-measure.csv   (needs mpmath)
"""
from random import Random

from mpmath import atan, mp, mpf, nstr, pi

mp.dps = 60
random = Random(20)
print("# (arctan((b-x)/z) - arctan((a-x)/z))/pi, 60-digit arithmetic rounded to 25; written by harmonic-measure.py.")
print("x,z,a,b,measure")
for height in (1e-6, 0.3, 20.0, 60.0, 5e4):
    for width in (1e-7, 1e-3, 0.25, 1.0, 40.0, 1e6):
        for off in (0.0, 0.5, 3.0, 1e2, 1e5):
            z = height * (1 + random.random())
            x = random.choice((0.0, 1234.5678, -432100.123)) + random.random()
            a = x + random.choice((-1, 1)) * off * z * (1 + random.random())
            b = a + width * z * (1 + random.random())
            if not a < b:
                continue
            measure = (atan((mpf(b) - mpf(x)) / mpf(z)) - atan((mpf(a) - mpf(x)) / mpf(z))) / pi
            print(f"{x!r},{z!r},{a!r},{b!r},{nstr(measure, 25)}")
