/**
 * Half-widths against numpy and scipy: the road of test/reference/strip-intervals.py on set-ups made up here, and a
 * search over all weights by a general minimiser, which knows nothing of a one-parameter family.
 */
import {readFileSync} from "node:fs";
import {describe, expect, test} from "vitest";
import type {Support} from "../../lib/geometry/interval.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {meanOver} from "../../lib/operators/functional.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {intervalsOf, readAt} from "../harness/interval-case.ts";
import {runPython} from "../harness/python.ts";

const REFERENCE = readFileSync(new URL("../reference/strip-intervals.py", import.meta.url), "utf8").replace(
  'if __name__ == "__main__":\n    main()',
  "",
);
const CONTINUUM = `${REFERENCE}
import json, sys
out = []
for q in json.load(sys.stdin):
    x, z = numpy.array(q["x"]), numpy.array(q["z"])
    out.append(half_width(q["parts"], x, z, q["noise"], q["bound"], q["degree"], q["level"], q["kind"], q["first"], q["second"]))
print(json.dumps(out))
`;
/** Weights free: minimise cv(b/s)·s over c with c orthogonal to the regional, by BFGS from two starts. */
const FREE = `${REFERENCE}
import json, sys
from scipy.optimize import minimize
q = json.load(sys.stdin)
x, z = numpy.array(q["x"]), numpy.array(q["z"])
at, root = nodes(q["parts"])
kernel = z[:, None] / numpy.pi / ((at - x[:, None]) ** 2 + z[:, None] ** 2) * root
strip = numpy.where((at > q["first"]) & (at < q["second"]), root / (q["second"] - q["first"]), 0.0)
basis = null_space(numpy.polynomial.legendre.legvander((x - x.mean()) / numpy.ptp(x), q["degree"]).T)
u, s, v = numpy.linalg.svd(basis.T @ kernel, full_matrices=False)
qv = v @ strip
rest = strip @ strip - qv @ qv

def width(c):
    deviation = q["noise"] * numpy.linalg.norm(c) + 1e-300
    bias = q["bound"] * numpy.sqrt(rest + numpy.sum((qv - s * c) ** 2))
    return quantile(bias / deviation, q["level"]) * deviation

best = min(
    minimize(width, start, method="BFGS", options={"gtol": 1e-9, "maxiter": 4000}).fun
    for start in (s * qv / (s**2 + 1e-3 * s[0] ** 2), s * qv / (s**2 + 1e-6 * s[0] ** 2))
)
print(json.dumps(best))
`;

interface SetUp {
  readonly x: number[];
  readonly z: number[];
  readonly parts: [number, number][];
  readonly noise: number;
  readonly bound: number;
  readonly degree: number;
  readonly level: number;
  readonly kind: "mean" | "field";
  readonly first: number;
  readonly second: number;
}

function ours(q: SetUp, layout: "whole" | "windows"): number {
  const support: Support = q.parts.map(([from, to]) => ({from, to}));
  const functional =
    q.kind === "mean" ? meanOver({from: q.first, to: q.second}, support) : readAt(q.first, q.second, support);
  const {x, z, noise, bound, degree, level} = q;
  return intervalsOf({
    x: Float64Array.from(x),
    z: Float64Array.from(z),
    support,
    noise,
    bound,
    degree,
    confidence: level,
    layout,
  }).interval(functional).halfWidth;
}

/** Uneven stations and heights, one part or two, noise over two decades. */
function madeUp(seed: number): SetUp {
  const {uniform} = seededRandom(seed);
  const x = Array.from({length: 70}, (_, i) => 5 * i + 4 * uniform() - 30);
  const first = 40 + Math.floor(150 * uniform());
  const field = seed % 2 === 0;
  return {
    x,
    z: x.map(() => 14 + 8 * uniform()),
    parts:
      seed % 3 === 0
        ? [
            [20, 120],
            [133, 280],
          ]
        : [[20, 280]],
    noise: 10 ** (-3 + 2 * uniform()),
    bound: 5 + 10 * uniform(),
    degree: (seed % 4) - 1,
    level: seed % 5 === 0 ? 0.8 : 0.95,
    kind: field ? "field" : "mean",
    first,
    second: field ? 3 + 20 * uniform() : first + 15 + Math.floor(50 * uniform()),
  };
}

describe("half-widths", () => {
  test("agree with a singular value decomposition in the continuum", () => {
    const cases = Array.from({length: 10}, (_, k) => madeUp(k + 1));
    const theirs = JSON.parse(runPython(CONTINUUM, JSON.stringify(cases))) as number[];
    expect(theirs.length).toBe(cases.length);
    cases.forEach((q, k) => {
      absoluteClose(ours(q, "whole") / theirs[k], 1, 2e-4, "search for a, and modes left out");
    });
  }, 300_000);

  test("are the least that any weights reach", () => {
    const q: SetUp = {
      x: Array.from({length: 16}, (_, i) => 12 * i),
      z: Array.from({length: 16}, (_, i) => 20 + 3 * Math.sin(i)),
      parts: [[20, 160]],
      noise: 0.05,
      bound: 8,
      degree: 1,
      level: 0.95,
      kind: "mean",
      first: 70,
      second: 110,
    };
    const least = JSON.parse(runPython(FREE, JSON.stringify(q))) as number;
    absoluteClose(ours(q, "whole") / least, 1, 1e-4, "the minimiser stops at small gradients; modes left out");
  });
});
