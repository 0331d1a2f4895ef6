/**
 * The estimate on panels against scipy: the same penalised least squares, stacked and solved by orthogonal
 * decomposition, from arctangents and a polynomial of its own.
 */
import {expect, test} from "vitest";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {USABLE} from "../../lib/spectral/singular-system.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {runPython} from "../harness/python.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const DENSE = `
import json, sys, numpy
from scipy.linalg import lstsq
q = json.load(sys.stdin)
x, z, d = (numpy.array(q[k])[:, None] for k in ("x", "z", "values"))
a, b = numpy.array(q["from"]), numpy.array(q["to"])
matrix = (numpy.arctan((b - x) / z) - numpy.arctan((a - x) / z)) / numpy.pi
root = numpy.sqrt(b - a)
terms = q["degree"] + 1
t = (x - x.mean()) / numpy.ptp(x)
polynomial = numpy.hstack([t**k for k in range(terms)]) if terms else numpy.zeros((len(x), 0))
n, m = matrix.shape
top = numpy.hstack([matrix / root, polynomial]) / q["noise"]
bottom = numpy.hstack([numpy.sqrt(q["multiplier"]) * numpy.eye(m), numpy.zeros((m, terms))])
# Columns of the regional are scaled to those of the source.
scale = numpy.ones(m + terms)
scale[m:] = numpy.linalg.norm(top[:, :m], axis=0).max() / numpy.linalg.norm(top[:, m:], axis=0)
stacked = numpy.vstack([top, bottom]) * scale
right = numpy.vstack([d / q["noise"], numpy.zeros((m, 1))])
found = (lstsq(stacked, right, cond=1e-15)[0][:, 0]) * scale
residual = (right - stacked @ (found[:, None] / scale[:, None]))[:n, 0]
print(json.dumps({
    "density": (found[:m] / root).tolist(),
    "field": (matrix @ (found[:m] / root)).tolist(),
    "regional": (polynomial @ found[m:]).tolist(),
    "misfit": float(residual @ residual),
    "norm": float(numpy.linalg.norm(found[:m])),
}))
`;

interface Dense {
  readonly density: number[];
  readonly field: number[];
  readonly regional: number[];
  readonly misfit: number;
  readonly norm: number;
}

test.each([
  {name: "discrepancy, regional 1, two parts", rule: "discrepancy", degree: 1, parts: [-20, 130, 150, 330]},
  {name: "discrepancy, no regional", rule: "discrepancy", degree: -1, parts: [-40, 340]},
  {name: "a bound, regional 2", rule: "rms:0.15", degree: 2, parts: [-40, 340]},
] as const)("estimates agree with a dense solution: $name", ({rule, degree, parts}) => {
  const chainage = evenly(0, 300, 121);
  const clearance = chainage.map((x) => 14 + 4 * Math.sin(x / 21));
  const noise = 3e-8;
  const values = withNoise(
    chainage.map(
      (x, i) => 4e-6 * harmonicMeasure(x, clearance[i], 60, 100) - 2e-6 * harmonicMeasure(x, clearance[i], 200, 210),
    ),
    noise,
    17,
  ).map((v, i) => v + (degree < 0 ? 0 : 1e-5 + 3e-9 * chainage[i]));
  const support: {from: number; to: number; group: undefined}[] = [];
  for (let k = 0; k < parts.length; k += 2) support.push({from: parts[k], to: parts[k + 1], group: undefined});
  const study = studyLine(
    syntheticLine({chainage, clearance, values, noise}),
    plainSettings({support, regional: degree, levels: [], bound: boundRuleNamed(rule, 1e-5)}),
  );
  const request = {
    x: [...chainage],
    z: [...clearance],
    values: [...values],
    from: [...study.panels.from],
    to: [...study.panels.to],
    noise,
    degree,
    multiplier: study.choice.multiplier,
  };
  const theirs = JSON.parse(runPython(DENSE, JSON.stringify(request))) as Dense;
  const {estimate, choice, panels, curve} = study;
  expect(estimate.density.length).toBe(theirs.density.length);
  const because = "the promise: 1e-9 relative";
  absoluteClose(estimate.misfit / theirs.misfit, 1, 1e-9, because);
  absoluteClose(estimate.norm / theirs.norm, 1, 1e-9, because);
  const size = values.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
  expect(estimate.channels.length).toBe(1);
  const [explained] = estimate.channels;
  explained.regional.forEach((value, i) => {
    const [regional, field] = [theirs.regional[i], theirs.field[i]];
    absoluteClose((value + explained.field[i]) / size, (regional + field) / size, 1e-9, because);
    // A source that looks like a regional is such a mode as is left out below: the split moves by little of the noise.
    absoluteClose(value / noise, regional / noise, 1e-3, "modes left out, see below; 5e-5 measured");
  });
  // Modes with λ below 1e-13 of the largest are left out. Each would add √λ c/(λ + α), and Σ c² is no more than the
  // misfit, so in L² that is at most √(1e-13 λ₀ E)/α; twice that, for modes at the edge are mixed by rounding.
  const largest = curve.multiplier.at(-1)! / 10;
  const leftOut = Math.sqrt(USABLE * largest * estimate.misfit) / choice.multiplier;
  const apart = Math.sqrt(
    estimate.density.reduce((sum, f, j) => sum + panels.width[j] * (f - theirs.density[j]) ** 2, 0),
  );
  expect(apart).toBeLessThan(2 * leftOut + 1e-9 * estimate.norm);
  // Which is nothing against what noise does to the estimate, ‖(B*B + α)⁻¹B*‖ ≥ 1/(2√α).
  expect(apart).toBeLessThan(1e-3 / Math.sqrt(choice.multiplier));
});
