"""Ends of the simultaneous band in the continuum: writes simultaneous.csv.

With K modes u_k of the whitened readings free of the regional (those of lambda M^2 > 0.1) and chi^2 the quantile of
chi-squared with K degrees, the band of q is its range over F = {|U'(Pf - d)| <= chi, |f| <= M}. The ends are found on
functions at nodes: H = P'UU'P + alpha is solved as a matrix, and at the best alpha the function that reaches the end is
formed and checked to lie in F, so that the end is not only safe but sharp.

Readings are those of a field of two plates, f = 2 on 240:300 and -1 on 330:420, with errors sigma sin(7 i^2).
Everything is integrated by 16 Gauss-Legendre nodes to elements of 5 m; no closed form and no squared matrix.
Run: /usr/bin/python3 simultaneous.py > simultaneous.csv   (needs numpy and scipy)
"""
import numpy
from scipy.linalg import null_space
from scipy.optimize import minimize_scalar
from scipy.stats import chi2


def nodes(a, b):
    rule, weight = numpy.polynomial.legendre.leggauss(16)
    edges = numpy.linspace(a, b, int(numpy.ceil((b - a) / 5)) + 1)
    half = numpy.diff(edges) / 2
    return (edges[:-1, None] + half[:, None] * (1 + rule)).ravel(), numpy.sqrt(half[:, None] * weight).ravel()


def ends(support, x, z, noise, bound, degree, level, kind, first, second):
    at, root = nodes(*support)
    kernel = z[:, None] / numpy.pi / ((at - x[:, None]) ** 2 + z[:, None] ** 2) * root / noise
    plates = 2.0 * ((at > 240) & (at < 300)) - ((at > 330) & (at < 420))
    data = kernel @ (plates * root) + numpy.sin(7.0 * numpy.arange(len(x)) ** 2)
    if kind == "mean":
        q = numpy.where((at > first) & (at < second), root / (second - first), 0.0)
    else:
        q = second / numpy.pi / ((at - first) ** 2 + second**2) * root
    if degree >= 0:
        free = null_space(numpy.polynomial.legendre.legvander((x - x.mean()) / numpy.ptp(x), degree).T).T
        kernel, data = free @ kernel, free @ data
    u, s, v = numpy.linalg.svd(kernel, full_matrices=False)
    seen = s**2 * bound**2 > 0.1
    rows, d = s[seen, None] * v[seen], u[:, seen].T @ data
    chi_squared = chi2.isf(1 - level, seen.sum())
    # All lies in the span of the rows and q: an orthonormal basis keeps the matrix small.
    span = numpy.linalg.qr(numpy.vstack([v[seen], q]).T)[0]
    rows, q = rows @ span, span.T @ q

    def end(log_a, sign, whole=False):
        a = numpy.exp(log_a)
        h = rows.T @ rows + a * numpy.eye(len(q))
        centre, toward = numpy.linalg.solve(h, rows.T @ d), numpy.linalg.solve(h, sign * q)
        least = numpy.sum((rows @ centre - d) ** 2) + a * centre @ centre
        radius = numpy.sqrt(max(chi_squared + a * bound**2 - least, 0))
        size = numpy.sqrt(sign * q @ toward)
        if whole:
            return centre + radius * toward / size
        return sign * q @ centre + radius * size

    result = []
    for sign in (-1, 1):
        grid = numpy.log(chi_squared / bound**2) + numpy.linspace(numpy.log(1e-7), numpy.log(1e5), 120)
        values = [end(t, sign) for t in grid]
        k = int(numpy.argmin(values))
        if k == len(grid) - 1:
            result.append(sign * bound * numpy.linalg.norm(q))
            continue
        bracket = (grid[k - 1], grid[k + 1])
        best = minimize_scalar(end, args=(sign,), bounds=bracket, method="bounded", options={"xatol": 1e-9})
        f = end(best.x, sign, whole=True)
        assert abs(sign * q @ f - best.fun) < 1e-9 * abs(best.fun) + 1e-12
        assert numpy.sum((rows @ f - d) ** 2) < chi_squared * (1 + 1e-4)
        assert numpy.linalg.norm(f) < bound * (1 + 1e-4)
        result.append(sign * best.fun)
    return int(seen.sum()), *result


one = "100:500"
cases = [
    # support, stations, height, swing, noise, bound, degree, level, kind, first, second
    (one, "0:600:4", 20, 0, 0.02, 40, -1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.02, 40, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 0, 0.02, 40, 1, 0.95, "mean", 270, 280),
    (one, "0:600:4", 20, 0, 0.02, 40, 1, 0.95, "mean", 100, 500),
    (one, "0:600:4", 20, 0, 0.02, 40, 1, 0.95, "field", 270, 10),
    (one, "0:600:4", 20, 0, 0.02, 40, 1, 0.95, "field", 270, 2),
    (one, "0:600:4", 20, 0, 0.02, 40, 1, 0.95, "field", 60, 30),
    (one, "0:600:4", 20, 0, 0.02, 40, 3, 0.8, "mean", 340, 400),
    (one, "0:600:4", 20, 6, 0.3, 30, 1, 0.95, "mean", 240, 300),
    (one, "0:600:4", 20, 6, 0.3, 60, 1, 0.99, "field", 333, 8),
    (one, "0:600:20", 20, 6, 0.001, 25, 1, 0.95, "field", 333, 20),
    (one, "150:350:5", 20, 0, 0.02, 40, 1, 0.95, "mean", 450, 480),
]


def main():
    print("# Ends of the simultaneous band in the continuum; written by simultaneous.py, which says what the readings are.")
    print("# Stations from:to:step at height + swing sin(x/37); mean over first:second, or field at chainage first, height second.")
    print("support,stations,height,swing,noise,bound,degree,level,kind,first,second,modes,lower,upper")
    for case in cases:
        support, stations, height, swing, noise, bound, degree, level, kind, first, second = case
        begin, end, step = map(float, stations.split(":"))
        x = begin + step * numpy.arange(int((end - begin) / step + 0.5) + 1)
        z = height + swing * numpy.sin(x / 37)
        part = tuple(map(float, support.split(":")))
        modes, low, high = ends(part, x, z, noise, bound, degree, level, kind, first, second)
        print(",".join(map(str, case)) + f",{modes},{low:.10g},{high:.10g}")


if __name__ == "__main__":
    main()
