/** Estimate, misfit and intervals under correlated noise against dense algebra with the full covariance, and coverage. */
import {inverse, Matrix, solve} from "ml-matrix";
import {describe, expect, test} from "vitest";
import {estimateSource} from "../../lib/inverse/estimate.ts";
import {foldedNormalQuantile} from "../../lib/numeric/normal.ts";
import {minimise} from "../../lib/numeric/roots.ts";
import {continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {type Functional, meanOver} from "../../lib/operators/functional.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {type IntervalCase, intervalsOf, readAt, VERTICAL} from "../harness/interval-case.ts";
import {redCovariance, redNoise} from "../harness/red-noise.ts";
import {evenly} from "../harness/synthetic-line.ts";

const [SIGMA, LENGTH] = [0.05, 40];
const SUPPORT = [{from: 0, to: 300}];
/** Steps between 3 and 9 m. */
const X = evenly(0, 300, 51).map((x, i) => x + 1.5 * Math.sin(5 * i));
const Z = X.map((x) => 15 + 2 * Math.cos(x / 30));
const COUNT = X.length;
const readingsWith = (noiseLength: number): Readings =>
  readingsOf([{x: X, z: Z, response: VERTICAL, noise: SIGMA, noiseLength}]);
const RED = readingsWith(LENGTH);
const COVARIANCE = redCovariance(X, SIGMA, LENGTH);
const WEIGHT = inverse(COVARIANCE);
const VALUES = redNoise(X, SIGMA, LENGTH, 3).map(
  (r, i) => r + 2 + 0.01 * X[i]! + harmonicMeasure(X[i]!, Z[i]!, 130, 170),
);
/** 1 and x. */
const LINE = Matrix.from1DArray(
  COUNT,
  2,
  [...X].flatMap((x) => [1, x / 300]),
);

describe("a small line against its normal equations with the full covariance", () => {
  const panels = panelsOn(SUPPORT, 5);
  const operator = forwardOperator(RED, panels);
  const basis = regionalBasis(RED, 1);
  const solver = spectralSolver(whiten(operator, RED, VALUES, basis), basis.terms);
  const multiplier = 1e-2 * solver.largest;
  const found = estimateSource(
    solver,
    {rule: "made up", multiplier, bound: 1, basis: "given-bound", active: true, reason: "", notices: []},
    operator,
    RED,
    basis,
    VALUES,
  );
  const a = Matrix.from1DArray(COUNT, panels.count, [...operator.matrix]);
  const data = Matrix.columnVector([...VALUES]);
  // (f, β): Aᵀ C⁻¹ (A f + R β − d) + α w f = 0, Rᵀ C⁻¹ (A f + R β − d) = 0.
  const columns = new Matrix(COUNT, panels.count + 2).setSubMatrix(a, 0, 0).setSubMatrix(LINE, 0, panels.count);
  const normal = columns.transpose().mmul(WEIGHT).mmul(columns);
  for (let j = 0; j < panels.count; ++j) normal.set(j, j, normal.get(j, j) + multiplier * panels.width[j]!);
  const unknowns = solve(normal, columns.transpose().mmul(WEIGHT).mmul(data));
  const residual = Matrix.sub(data, columns.mmul(unknowns));

  test("the source, the regional and the residual", () => {
    const most = Math.max(...unknowns.to1DArray().slice(0, panels.count).map(Math.abs));
    found.density.forEach((f, j) => {
      absoluteClose(
        f / most,
        unknowns.get(j, 0) / most,
        1e-9,
        "the condition of the normal equations, some 1e5, times ε",
      );
    });
    found.channels[0]!.residual.forEach((r, i) => {
      absoluteClose(r, residual.get(i, 0), 1e-9, "as above, of readings up to 6");
    });
    found.channels[0]!.regional.forEach((r, i) => {
      const want = unknowns.get(panels.count, 0) + (unknowns.get(panels.count + 1, 0) * X[i]!) / 300;
      absoluteClose(r, want, 1e-9, "as above");
    });
  });

  test("the misfit is rᵀ C⁻¹ r", () => {
    const want = residual.transpose().mmul(WEIGHT).mmul(residual).get(0, 0);
    absoluteClose(
      found.misfit / want,
      1,
      1e-9,
      "the condition of the covariance, some 1e2, and of the normal equations",
    );
  });
});

const BOUND = 12;
const CASE: IntervalCase = {x: X, z: Z, support: SUPPORT, noise: SIGMA, bound: BOUND, degree: 1};
const ASKED: readonly (readonly [string, Functional])[] = [
  ["a strip", meanOver({from: 130, to: 170}, SUPPORT)],
  ["the field on a level", readAt(120, 6, SUPPORT)],
];

/** Everything about the readings without a word of whitening: G_ij and p_i raw, on the nodes of the whole line. */
function denseOf(functional: Functional, bound = BOUND) {
  const raw = continuumOf(readingsOf([{x: X, z: Z, response: VERTICAL, noise: 1}]), SUPPORT);
  const nodes = nodesFor(raw, 0, COUNT);
  const at = Matrix.from1DArray(COUNT, nodes.count, [...nodeMatrix(raw, nodes, 0, COUNT)]);
  const gram = at.mmul(at.transpose());
  const seen = Matrix.columnVector([...functional.respondInto(new Float64Array(COUNT), raw, 0, COUNT)]);
  /** M ‖q − Σ c_i p_i‖. */
  const biasOf = (c: Matrix): number => {
    const taken = 2 * c.transpose().mmul(seen).get(0, 0) - c.transpose().mmul(gram).mmul(c).get(0, 0);
    return bound * Math.sqrt(functional.normSquared - taken);
  };
  const widthOf = (c: Matrix): number => {
    const deviation = Math.sqrt(c.transpose().mmul(COVARIANCE).mmul(c).get(0, 0));
    return foldedNormalQuantile(biasOf(c) / deviation, 0.95) * deviation;
  };
  /** The shortest: (G + a C) c + R γ = p, Rᵀ c = 0, a searched for. */
  const shortest = (): number => {
    const width = (logA: number): number => {
      const system = Matrix.zeros(COUNT + 2, COUNT + 2)
        .setSubMatrix(Matrix.add(gram, Matrix.mul(COVARIANCE, Math.exp(logA))), 0, 0)
        .setSubMatrix(LINE, 0, COUNT)
        .setSubMatrix(LINE.transpose(), COUNT, 0);
      const right = Matrix.zeros(COUNT + 2, 1).setSubMatrix(seen, 0, 0);
      return widthOf(solve(system, right).subMatrix(0, COUNT - 1, 0, 0));
    };
    const unit = -2 * Math.log(bound);
    return width(minimise(width, unit + Math.log(0.02), unit + Math.log(400), 1e-3).x);
  };
  return {biasOf, widthOf, shortest};
}

/** The weights of an answer: answers are linear in the readings. */
function weightsOf(given: IntervalCase, functional: Functional): Matrix {
  const weights = Array.from({length: COUNT}, (_, i) => {
    const values = new Float64Array(COUNT);
    values[i] = 1;
    return intervalsOf({...given, values}).interval(functional).value;
  });
  return Matrix.columnVector(weights);
}

describe.each(ASKED)("the interval of %s", (_, functional) => {
  const {widthOf, shortest} = denseOf(functional);

  test.each(["whole", "windows"] as const)("is that of its weights under the full covariance: %s", (layout) => {
    const given = {...CASE, readings: RED, layout};
    const weights = weightsOf(given, functional);
    const {halfWidth} = intervalsOf(given).interval(functional);
    absoluteClose(halfWidth / widthOf(weights), 1, 1e-9, "‖q‖² less what is explained cancels to some 1e-3");
    const react = LINE.transpose().mmul(weights);
    for (const k of [0, 1])
      absoluteClose(react.get(k, 0), 0, 1e-10, "the weights, up to 1, must not react to the regional");
  });

  test("is the shortest there is", () => {
    const ratio = intervalsOf({...CASE, readings: RED}).interval(functional).halfWidth / shortest();
    absoluteClose(ratio, 1, 1e-4, "modes left out cost up to that, see MODE_FLOOR");
    // And not for want of a difference: that of white noise is another.
    const white = intervalsOf(CASE).interval(functional).halfWidth;
    expect(Math.abs(white / shortest() - 1)).toBeGreaterThan(0.05);
  });
});

test("windows of a long line answer as the whole of it does", () => {
  const x = evenly(0, 1500, 501);
  const z = new Float64Array(501).fill(12);
  const support = [{from: 100, to: 1400}];
  const readings = readingsOf([{x, z, response: VERTICAL, noise: SIGMA, noiseLength: 30}]);
  const values = redNoise(x, SIGMA, 30, 8).map((r, i) => r + harmonicMeasure(x[i]!, 12, 700, 760));
  const given: IntervalCase = {x, z, support, noise: SIGMA, bound: 20, degree: 1, readings, values};
  const [whole, windows] = (["whole", "windows"] as const).map((layout) => intervalsOf({...given, layout}));
  for (const asked of [meanOver({from: 710, to: 740}, support), readAt(400, 5, support), readAt(1395, 3, support)]) {
    const [one, other] = [whole!.interval(asked), windows!.interval(asked)];
    expect(other.halfWidth / one.halfWidth).toBeGreaterThan(1 - 1e-4);
    // What the far stations could have told: the margin of windows, as for white noise.
    expect(other.halfWidth / one.halfWidth).toBeLessThan(1.03);
    expect(Math.abs(other.value - one.value)).toBeLessThan(0.2 * one.halfWidth);
  }
});

test("on red noise intervals that count on white noise are too narrow, and those that know its length cover", () => {
  const DRAWS = 400;
  // A wide strip and a weak source: red noise is louder than white in long waves only, and here these decide. (Where
  // short waves do, white intervals of the same σ are too wide instead.)
  const strip = meanOver({from: 90, to: 210}, SUPPORT);
  const given: IntervalCase = {...CASE, bound: 2, degree: -1};
  const {biasOf} = denseOf(strip, 2);
  /** For the source that the weights are wrong by most: by all of the bias. Then the promise is met exactly. */
  const share = (readings: Readings): number => {
    const weights = weightsOf({...given, readings}, strip);
    const bias = biasOf(weights);
    const {halfWidth} = intervalsOf({...given, readings}).interval(strip);
    let inside = 0;
    for (let draw = 0; draw < DRAWS; ++draw) {
      const noise = redNoise(X, SIGMA, LENGTH, 1000 + draw);
      if (Math.abs(weights.to1DArray().reduce((sum, c, i) => sum + c * noise[i]!, -bias)) <= halfWidth) ++inside;
    }
    return inside / DRAWS;
  };
  const [white, red] = [share(readingsWith(0)), share(RED)];
  const error = 3 * Math.sqrt((0.95 * 0.05) / DRAWS);
  absoluteClose(red, 0.95, error, "three standard errors of 400 draws");
  expect(white).toBeLessThan(0.95 - error);
});
