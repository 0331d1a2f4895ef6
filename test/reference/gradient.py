"""Downward gradients as finite differences of the field, 60-digit arithmetic: writes gradient.csv.

Field of a constant density on a straight piece of boundary (ax, ay)-(bx, by) at a sensor (x, z): Re(alpha F), F by one
logarithm of the quotient. Gradient: [field(z - s) - field(z + s)]/(2 s) with s = 1e-18 m, lower less upper over their
distance, so that what the difference leaves out is s^2 = 1e-36 of it. alpha: vertical, along, and the total field of
(beta, I') = (0.75, 41 degrees).
Run: /usr/bin/python3 gradient.py > gradient.csv   (needs mpmath)
"""
from random import Random

from mpmath import cos, fabs, log, mp, mpc, mpf, nstr, pi, radians, re, sin

mp.dps = 60
random = Random(13)
STEP = mpf(10) ** -18
ALPHA = {
    "vertical": mpc(1, 0),
    "along": mpc(0, 1),
    "total": mpf("0.75") * mpc(sin(radians(mpf(41))), cos(radians(mpf(41)))),
}


def field(alpha, ax, ay, bx, by, x, z):
    w, a, b = mpc(x, z), mpc(mpf(ax), mpf(ay)), mpc(mpf(bx), mpf(by))
    return re(alpha / (pi * mpc(0, 1)) * log((b - w) / (a - w)) * (mpf(bx) - mpf(ax)) / (b - a))


print("# lower field less upper over their distance 2e-18 m; 60-digit arithmetic; written by gradient.py.")
print("alpha,ax,ay,bx,by,x,z,value,size")
for slope in (0.0, 0.3, -1.1):
    for width in (0.5, 8.0, 400.0):
        for off in (0.0, 1.0, 12.0):
            for name, alpha in ALPHA.items():
                ax = 300 * random.random()
                bx = ax + width * (1 + random.random())
                ay, x = 10 * random.random(), ax + (0.3 + random.choice((-1, 1)) * off) * (bx - ax)
                by = ay + slope * (bx - ax)
                z = max(ay + slope * (x - ax), ay, by) + 20 * (0.5 + random.random())
                place = (alpha, ax, ay, bx, by, mpf(x))
                value = (field(*place, mpf(z) - STEP) - field(*place, mpf(z) + STEP)) / (2 * STEP)
                nearest = min(fabs(mpc(x, z) - mpc(ax + s * (bx - ax) / 100, ay + s * (by - ay) / 100)) for s in range(101))
                size = (mpf(bx) - mpf(ax)) / pi / nearest**2
                print(f"{name},{ax!r},{ay!r},{bx!r},{by!r},{x!r},{z!r},{nstr(value, 22)},{nstr(size, 6)}")
