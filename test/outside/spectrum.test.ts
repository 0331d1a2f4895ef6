/**
 * The truncated Poisson spectrum against another method in another language: Nyström's with a
 * Gauss–Legendre rule, numpy's nodes and LAPACK's symmetric eigensolver.
 */
import {expect, test} from "vitest";
import {poissonSpectrum} from "../../lib/spectral/poisson-spectrum.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {runPython} from "../harness/python.ts";

/** Prints the largest eigenvalues of √w_i P_h(x_i − x_j) √w_j on (from, to). */
const NYSTROM = `
import json, sys, numpy
q = json.load(sys.stdin)
x, w = numpy.polynomial.legendre.leggauss(q["nodes"])
half = (q["to"] - q["from"]) / 2
x, w = half * x, numpy.sqrt(half * w)
k = q["height"] / numpy.pi / (q["height"] ** 2 + (x[:, None] - x[None, :]) ** 2)
print(json.dumps(sorted(numpy.linalg.eigvalsh(w[:, None] * k * w[None, :]).tolist(), reverse=True)[: q["count"]]))
`;

test.each([
  // A rule with n nodes leaves about exp(−2 n h/half-length) of a kernel with poles at height h.
  {from: 400, to: 900, height: 30, count: 40, nodes: 500},
  {from: -1, to: 1, height: 0.6, count: 20, nodes: 120},
])("eigenvalues agree with Nyström's method at height $height", (request) => {
  const theirs = JSON.parse(runPython(NYSTROM, JSON.stringify(request))) as number[];
  const {eigenvalues} = poissonSpectrum(request);
  expect(theirs.length).toBe(request.count);
  theirs.forEach((mu, n) => {
    absoluteClose(eigenvalues[n], mu, 1e-12, "the promise of the spectrum; Nyström is good to 1e-13 here");
  });
});
