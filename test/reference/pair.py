"""Inner products of two kernels over a flat support, 60-digit arithmetic: writes pair.csv.

int_S Re[a (t-w)^-m] Re[c (t-v)^-n] dt with a = alpha/(pi i), c = gamma/(pi i), m and n = 1 or 2, w = x1 + i z1,
v = x2 + i z2, by quadrature (mpmath, tanh-sinh between breaks at the two points). Every pair of orders; one
place, nearly one place (from 1e-9 heights to either side of a fifth, where the program turns from a series to
quotients), apart, over an end, far off; one part, several, thin, very long, one that ends under the points. `size` is
sqrt(int |a|^2 |t-w|^-2m dt int |c|^2 |t-v|^-2n dt) over the endless line, what rounding is relative to.
Run: /usr/bin/python3 pair.py > pair.csv   (needs mpmath)
"""
from random import Random

from mpmath import fabs, mp, mpc, mpf, nstr, pi, quad, re, sqrt

mp.dps = 60
random = Random(11)


def product(parts, w, alpha, m, v, gamma, n):
    a, c = alpha / (pi * mpc(0, 1)), gamma / (pi * mpc(0, 1))
    total = mpf(0)
    for left, right in parts:
        marks = {mpf(left), mpf(right)}
        for p in (w, v):
            marks |= {p.real + s * p.imag for s in (-300, -40, -12, -4, -1.5, -0.5, 0, 0.5, 1.5, 4, 12, 40, 300)}
        inside = sorted(mark for mark in marks if left <= mark <= right)
        total += quad(lambda t: re(a * (t - w) ** -m) * re(c * (t - v) ** -n), inside)
    return total


def length(alpha, z, m):
    """int |alpha/pi|^2 (t^2+z^2)^-m dt over the whole line: pi/z, pi/(2 z^3)."""
    return fabs(alpha) ** 2 / pi**2 * (pi / z if m == 1 else pi / (2 * z**3))


supports = {
    "long": [(100.0, 500.0)],
    "thin": [(299.9, 300.1)],
    "union": [(-700.0, -650.0), (100.0, 180.0), (181.0, 420.0)],
    "very long": [(-40000.0, 60000.0)],
    "ends under it": [(-40000.0, 250.0)],
}
places = []
for x, z in ((250.0, 20.0), (100.0, 20.0), (499.0, 3.0), (-900.0, 60.0)):
    places.append((x, z, x, z))
    for apart in (1e-9, 1e-4, 0.02, 0.19, 0.21, 2.0, 30.0):
        turn = random.choice(((1, 0), (-0.8, 0.6), (0.6, 0.8), (0, 1)))
        places.append((x, z, x + apart * turn[0] * z, z * (1 + apart * turn[1])))
print("# int_S Re[alpha/(pi i) (t-w)^-m] Re[gamma/(pi i) (t-v)^-n] dt, parts of S as from:to joined by spaces; 60-digit arithmetic; written by pair.py.")
print("support,x1,z1,re1,im1,order1,x2,z2,re2,im2,order2,value,size")
turns = ((1.0, 0.0), (0.0, 1.0), (0.625, -0.375), (-0.125, 0.875))
for parts in supports.values():
    words = " ".join(f"{a!r}:{b!r}" for a, b in parts)
    for x, z, y, u in places:
        for m in (1, 2):
            for n in (1, 2):
                alpha, gamma = random.choice(turns), random.choice(turns)
                w, v = mpc(x, z), mpc(y, u)
                value = product(parts, w, mpc(*alpha), m, v, mpc(*gamma), n)
                size = sqrt(length(mpc(*alpha), mpf(z), m) * length(mpc(*gamma), mpf(u), n))
                cells = [words] + [repr(c) for c in (x, z, *alpha)] + [str(m - 1)] + [repr(c) for c in (y, u, *gamma)] + [str(n - 1)]
                print(f"{','.join(cells)},{nstr(value, 22)},{nstr(size, 6)}")
