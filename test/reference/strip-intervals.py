"""Shortest fixed-length intervals in the continuum: writes strip-intervals.csv.

For readings p_i (Poisson kernels at the stations) and a functional q, c = N (N'GN + a)^-1 N'Pq has deviation
s = noise |c| and worst bias b = bound ||q - sum c_i p_i|| in L2(S); N spans what is orthogonal to the regional.
Half-width cv(b/s) s with cv the quantile of |N(t, 1)|, least over a. Donoho, Ann. Stat. 22 (1994) 238;
Armstrong & Kolesar, Econometrica 86 (2018) 655 (both from memory).

Everything is integrated by 16 Gauss-Legendre nodes a metre, b from the residual function itself, the modes by a
singular value decomposition: no closed form and no squared matrix, so another road than the program's.
Run: /usr/bin/python3 strip-intervals.py > strip-intervals.csv   (needs numpy and scipy)
"""
import numpy
from scipy.linalg import null_space
from scipy.optimize import brentq, minimize_scalar
from scipy.stats import norm


def quantile(t, level):
    if t > 30:
        return t + norm.ppf(level)
    return brentq(lambda c: norm.cdf(c - t) - norm.cdf(-c - t) - level, 0, t + 10, xtol=1e-14)


def nodes(parts):
    rule, weight = numpy.polynomial.legendre.leggauss(16)
    at, root = [], []
    for a, b in parts:
        edges = numpy.linspace(a, b, int(numpy.ceil(b - a)) + 1)
        half = numpy.diff(edges) / 2
        at.append((edges[:-1, None] + half[:, None] * (1 + rule)).ravel())
        root.append(numpy.sqrt(half[:, None] * weight).ravel())
    return numpy.concatenate(at), numpy.concatenate(root)


def half_width(parts, x, z, noise, bound, degree, level, kind, first, second):
    at, root = nodes(parts)
    kernel = z[:, None] / numpy.pi / ((at - x[:, None]) ** 2 + z[:, None] ** 2) * root
    if kind == "mean":
        # The strip's ends are whole metres from the ends of its part, so they are edges of elements.
        q = numpy.where((at > first) & (at < second), root / (second - first), 0.0)
    else:
        q = second / numpy.pi / ((at - first) ** 2 + second**2) * root
    if degree >= 0:
        basis = null_space(numpy.polynomial.legendre.legvander((x - x.mean()) / numpy.ptp(x), degree).T).T
        kernel = basis @ kernel
    u, s, v = numpy.linalg.svd(kernel, full_matrices=False)
    eta = s * (v @ q)

    def width(log_a):
        weights = u @ (eta / (s**2 + numpy.exp(log_a)))
        deviation = noise * numpy.linalg.norm(weights)
        bias = bound * numpy.linalg.norm(q - weights @ kernel)
        return quantile(bias / deviation, level) * deviation

    unit = 2 * numpy.log(noise / bound)
    grid = unit + numpy.linspace(numpy.log(1e-3), numpy.log(1e5), 75)
    widths = [width(t) for t in grid]
    k = int(numpy.argmin(widths))
    assert k > 0
    if k == len(grid) - 1:
        return bound * numpy.linalg.norm(q)  # a = infinity: the readings say nothing worth their noise
    return minimize_scalar(width, bounds=(grid[k - 1], grid[k + 1]), method="bounded", options={"xatol": 1e-6}).fun


one, two = "100:500", "100:240 260:500"
cases = [
    # support, stations, height, swing, noise, bound, degree, level, kind, first, second
    (one, "0:600:4", 20, 0, 0.005, 20, -1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "mean", 260, 280),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "mean", 90, 120),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "mean", 100, 500),
    (one, "0:600:4", 20, 0, 0.005, 20, -1, 0.95, "field", 270, 10),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "field", 270, 10),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "field", 111, 2),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "field", 270, 0.5),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "field", 302, 20),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "field", 270, 60),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.95, "field", 60, 5),
    (one, "0:600:4", 20, 0, 0.005, 20, 3, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.005, 20, 0, 0.68, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.005, 20, 1, 0.999, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 5, 20, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 1, 20, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.00002, 20, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 6, 0.005, 20, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 6, 0.005, 20, 1, 0.95, "field", 270, 10),
    (one, "0:600:11", 20, 6, 0.05, 20, 2, 0.9, "field", 333, 8),
    (two, "0:600:4", 20, 6, 0.005, 20, 1, 0.95, "mean", 220, 300),
    (two, "0:600:4", 20, 6, 0.005, 20, 1, 0.95, "field", 250, 4),
    (one, "150:350:5", 20, 0, 0.02, 20, 1, 0.95, "mean", 400, 450),
]


def main():
    print("# Half-width of the shortest interval in the continuum; written by strip-intervals.py.")
    print("# Stations from:to:step at height + swing sin(x/37); mean over first:second, or field at chainage first, height second.")
    print("support,stations,height,swing,noise,bound,degree,level,kind,first,second,half_width")
    for case in cases:
        support, stations, height, swing, noise, bound, degree, level, kind, first, second = case
        parts = [tuple(map(float, part.split(":"))) for part in support.split()]
        begin, end, step = map(float, stations.split(":"))
        x = begin + step * numpy.arange(int((end - begin) / step + 0.5) + 1)
        z = height + swing * numpy.sin(x / 37)
        width = half_width(parts, x, z, noise, bound, degree, level, kind, first, second)
        print(",".join(map(str, case)) + f",{width:.9g}")


if __name__ == "__main__":
    main()
