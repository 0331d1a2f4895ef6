"""The kernel of a reading and its integral over a straight piece of boundary, 60-digit arithmetic: writes kernel.csv.

kappa(t) = Re[alpha/(pi i) (zeta(t) - w)^-(order+1)], w = 0 the sensor, zeta(t) = t - i drop(t) a piece from (a, da below the
sensor) to (b, db below it), density per metre of t. `value` is the integral over t by the antiderivatives (one
logarithm of the quotient; difference of reciprocals), checked here against tanh-sinh quadrature to 20 digits;
`size` is int |zeta - w|^-(order+1) dt / pi, what rounding is relative to. Thin to wide, above to far, level, rising and falling,
also a far piece that climbs past the sensor's height (da or db negative) and a long one that ends under it.
Run: /usr/bin/python3 kernel.py > kernel.csv   (needs mpmath)
"""
from random import Random

from mpmath import fabs, log, mp, mpc, mpf, nstr, pi, quad, re

mp.dps = 60
random = Random(7)


def ends(a, da, b, db):
    return mpc(mpf(a), -mpf(da)), mpc(mpf(b), -mpf(db)), mpf(b) - mpf(a)


def closed(alpha, order, a, da, b, db):
    za, zb, width = ends(a, da, b, db)
    inner = log(zb / za) if order == 0 else 1 / za - 1 / zb
    return re(alpha / (pi * mpc(0, 1)) * inner * width / (zb - za))


def breaks(a, da, b, db):
    za, zb, width = ends(a, da, b, db)
    direction = (zb - za) / width
    foot = -re(za / direction)
    near = fabs(za + foot * direction)
    marks = [0] + [foot + s * near for s in (-1000, -100, -30, -10, -3, -1, 0, 1, 3, 10, 30, 100, 1000)] + [width]
    return za, direction, sorted({m for m in marks if 0 <= m <= width})


def by_quadrature(alpha, order, a, da, b, db):
    za, direction, marks = breaks(a, da, b, db)
    return re(quad(lambda t: alpha / (pi * mpc(0, 1)) * (za + t * direction) ** -(order + 1), marks))


def size(order, a, da, b, db):
    za, direction, marks = breaks(a, da, b, db)
    return quad(lambda t: fabs(za + t * direction) ** -(order + 1), marks) / pi


print("# int Re[(re + i im)/(pi i) (zeta - w)^-(order+1)] dt over a straight piece; 60-digit arithmetic; written by kernel.py.")
print("re,im,order,a,da,b,db,value,size")
for height in (0.5, 20.0, 300.0):
    for width in (1e-6, 0.25, 3.0, 5000.0):
        for off in (0.0, 0.7, 50.0, 3000.0):
            for slope in (0.0, 0.4, -1.7):
                a = random.choice((-1, 1)) * off * height * (1 + random.random()) - random.random() * width * height
                b = a + width * height * (1 + random.random())
                da = height * (1 + random.random())
                db = da + slope * (b - a) if slope else da
                za, zb, _ = ends(a, da, b, db)
                # Left out: a piece that passes over the sensor.
                if (za.real < 0 < zb.real) and not (-za.imag + (zb.imag - za.imag) * za.real / (zb.real - za.real)) > height / 4:
                    continue
                angle = random.random() * 6.283
                for order in (0, 1):
                    alpha = mpc(1, 0) if random.random() < 0.3 else mpc(round(2 * random.random() - 1, 3), round(2 * random.random() - 1, 3))
                    args = (alpha, order, a, da, b, db)
                    value, check, scale = closed(*args), by_quadrature(*args), size(*args[1:])
                    assert fabs(value - check) < mpf(10) ** -20 * scale, (args, value, check)
                    words = [repr(float(alpha.real)), repr(float(alpha.imag)), str(order)] + [repr(c) for c in (a, da, b, db)]
                    # alpha as printed is the double nearest to it: recompute with that one.
                    exact = closed(mpc(float(alpha.real), float(alpha.imag)), order, a, da, b, db)
                    print(f"{','.join(words)},{nstr(exact, 22)},{nstr(scale, 6)}")
# A long piece that ends right under the sensor, either way.
for a, b in ((-1e6, 0.5), (-0.5, 1e6), (-40000.0, 3.0)):
    for order in (0, 1):
        args = (mpc(0, 1), order, a, 20.0, b, 20.0)
        print(f"0.0,1.0,{order},{a!r},20.0,{b!r},20.0,{nstr(closed(*args), 22)},{nstr(size(*args[1:]), 6)}")
