/** The rules that choose for themselves, beside the discrepancy rule of `bound.test.ts`. */
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {apparentNoise} from "../../lib/inverse/apparent-noise.ts";
import {assumedBound} from "../../lib/inverse/assumed-bound.ts";
import {balance, balanced, distanceBetween, propagatedNoise} from "../../lib/inverse/rules/balance.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {corner, cornerOf, curvatureAt} from "../../lib/inverse/rules/corner.ts";
import {blocksOf, crossValidation, excess} from "../../lib/inverse/rules/cross-validation.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import type {Solver} from "../../lib/solvers/solver.ts";
import {modalSums, spectralSolver} from "../../lib/solvers/spectral.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly} from "../harness/synthetic-line.ts";

const SEED = 51;
const NOISE = 0.01;
const COUNT = 121;
const x = evenly(0, 240, COUNT);
const operator = forwardOperator(
  verticalReadings(x, new Float64Array(COUNT).fill(12), 1),
  panelsOn([{from: 0, to: 240}], 3),
);
const truth = operator.panels.centre.map((t) => Math.exp(-(((t - 120) / 22) ** 2)));
const clean = applyInto(new Float64Array(COUNT), operator, truth);

/** A smooth bump seen from 12 m, with a slope; the noise said to be `told` times what it is. */
function bump({seed = 1, told = 1, strength = 1} = {}) {
  const readings = verticalReadings(x, new Float64Array(COUNT).fill(12), told * NOISE);
  const deviates = normalDeviates(seededRandom(seed), COUNT);
  const values = clean.map((value, i) => strength * value + NOISE * deviates[i] + 0.3 - 0.001 * x[i]);
  return spectralSolver(whiten(operator, readings, values, regionalBasis(readings, 1)), 2);
}

const question = (solver: Solver) => ({solver, supportLength: 240, lines: 1, places: x, largestNorm: solver.norm});

function errorOf(density: Float64Array): number {
  const power = truth.reduce((sum, f) => sum + f * f, 0);
  return Math.sqrt(density.reduce((sum, f, j) => sum + (f - truth[j]) ** 2, 0) / power);
}

function leastError(solver: Solver): number {
  let least = Infinity;
  for (let t = Math.log(10 * solver.largest); t > Math.log(solver.least); t -= 0.1)
    least = Math.min(least, errorOf(solver.estimate(Math.exp(t))));
  return least;
}

describe.each([crossValidation, corner, balance])("$name", (rule) => {
  test("comes near the best multiplier on a source that is known", () => {
    // Measured medians over these draws: 1.02, 1.00 and 1.09; the greatest of all is 1.15.
    const ratios = Array.from({length: 9}, (_, draw) => {
      const solver = bump({seed: draw + 1});
      return errorOf(solver.estimate(rule.choose(question(solver)).multiplier)) / leastError(solver);
    });
    expect(ratios.sort((a, b) => a - b)[4]).toBeLessThan(1.15);
  });

  test("assumes a bound as the discrepancy rule does, and says why it chose", () => {
    const solver = bump();
    const choice = rule.choose(question(solver));
    expect([choice.rule, choice.basis, choice.active]).toEqual([rule.name, "assumed-bound", false]);
    expect(choice.bound).toBe(assumedBound(question(solver), choice.multiplier));
    expect(choice.reason.length).toBeGreaterThan(30);
    expect(choice.notices).toEqual([]);
  });

  test("finds nothing where there is nothing but noise", () => {
    const solver = bump({strength: 0, seed: 4});
    const [choice, like] = [rule.choose(question(solver)), discrepancy.choose(question(solver))];
    expect(choice).toEqual({...like, rule: rule.name});
    expect([choice.multiplier, choice.notices[0].code]).toEqual([Infinity, "bound/nothing-but-noise"]);
  });

  test("does not follow noise that is said to be five times smaller, and says so", () => {
    const solver = bump({told: 0.2});
    const choice = rule.choose(question(solver));
    expect(choice.multiplier).toBeGreaterThanOrEqual(apparentNoise(solver)!.multiplier);
    expect(choice.notices).toEqual([expect.objectContaining({code: "noise/contradicted", weight: "doubt"})]);
    expect(errorOf(solver.estimate(choice.multiplier))).toBeLessThan(1);
  });

  test("is known by its name", () => {
    expect(boundRuleNamed(rule.name, 1)).toBe(rule);
  });
});

describe("cross-validation", () => {
  test("does not ask how large the noise is", () => {
    const [one, twice] = [bump(), bump({told: 1.5})].map(
      (solver) => crossValidation.choose(question(solver)).multiplier,
    );
    // α is in units of the squared noise; the likelihood, which starts the search, has steps of 0.1.
    absoluteClose(Math.log(one / (twice * 1.5 ** 2)), 0, 0.11, "one step of the search for the likelihood");
  });

  test("cuts readings into stretches no longer than asked, in order of chainage", () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({min: -1e4, max: 1e4, noNaN: true}), {minLength: 2, maxLength: 60}),
        fc.double({min: 1, max: 1e4, noNaN: true}),
        (list, length) => {
          const places = Float64Array.from(list);
          const {order, ends} = blocksOf(places, length);
          expect([...order].sort((a, b) => a - b)).toEqual([...places.keys()]);
          expect(ends.at(-1)).toBe(places.length);
          let first = 0;
          for (const end of ends) {
            expect(end).toBeGreaterThan(first);
            const [from, to] = [places[order[first]], places[order[end - 1]]];
            expect(to - from).toBeLessThanOrEqual(length * (1 + 1e-9));
            if (first > 0) expect(from).toBeGreaterThanOrEqual(places[order[first - 1]]);
            first = end;
          }
        },
      ),
      {seed: SEED},
    );
  });

  test("keeps readings at one place together", () => {
    const {order, ends} = blocksOf(Float64Array.from([...x, ...x]), 30);
    expect([order.length, ends.length]).toEqual([2 * COUNT, 8]);
    for (const end of ends.subarray(0, -1)) expect(order[end - 1] % COUNT).not.toBe(order[end] % COUNT);
  });

  test("measures an excess by its standard error", () => {
    // Differences 1, 2, 3, 6: mean 3, variance of the mean (4 + 1 + 0 + 9)/(4·3).
    const got = excess(Float64Array.of(2, 4, 6, 10), Float64Array.of(1, 2, 3, 4));
    absoluteClose(got, 3 / Math.sqrt(14 / 12), 1e-14, "rounding");
    expect(excess(Float64Array.of(2, 4), Float64Array.of(2, 4))).toBe(0);
  });

  test("is refused where the readings are not kept, with what to use instead", () => {
    const {places: _, ...pooled} = question(bump());
    expect(() => crossValidation.choose(pooled)).toThrowError(
      expect.objectContaining({
        code: "bound/readings-not-kept",
        exitStatus: 2,
        message: expect.stringContaining("balance"),
      }),
    );
    expect(() => boundRuleNamed("compare", 1).choose(pooled)).toThrowError(
      expect.objectContaining({code: "bound/compare-grid", exitStatus: 2, message: expect.stringContaining("balance")}),
    );
  });
});

describe("the corner", () => {
  /** The curve of modes given by hand. */
  const curveOf = (eigenvalues: number[], energies: number[], outside: number, data: number): Solver => ({
    ...bump(),
    ...modalSums(Float64Array.from(eigenvalues), Float64Array.from(energies), outside),
    data,
  });

  test("has the curvature of finite differences", () => {
    const solver = bump();
    const at = (t: number): readonly [number, number] => [
      0.5 * Math.log(solver.misfit(Math.exp(t))),
      Math.log(solver.norm(Math.exp(t))),
    ];
    const h = 1e-3;
    for (const share of [1e-6, 1e-4, 1e-2, 0.3, 3]) {
      const t = Math.log(share * solver.largest);
      const [a, b, c] = [at(t - h), at(t), at(t + h)];
      const [dx, dy] = [(c[0] - a[0]) / (2 * h), (c[1] - a[1]) / (2 * h)];
      const [ddx, ddy] = [(c[0] - 2 * b[0] + a[0]) / h ** 2, (c[1] - 2 * b[1] + a[1]) / h ** 2];
      const want = (dx * ddy - ddx * dy) / Math.hypot(dx, dy) ** 3;
      const got = curvatureAt(solver, Math.exp(t));
      // h² of the differences, and ε/h² of their cancellation where the misfit hardly moves.
      absoluteClose(got, want, 1e-4 * Math.max(1, Math.abs(want)), "second-order differences and cancellation");
    }
  });

  test("lies between what is signal and what is noise", () => {
    // Three strong modes with signal far above the noise, thirty weak ones that hold noise alone.
    const weak = Array.from({length: 30}, (_, k) => 1e-8 * 0.9 ** k);
    const solver = curveOf([3, 2, 1, ...weak], [1e6, 1e6, 1e6, ...weak.map(() => 1)], 60, 93);
    const found = cornerOf(solver)!;
    expect(found).toBeLessThan(1e-2);
    expect(found).toBeGreaterThan(1e-8);
    absoluteClose(solver.degreesOfFreedom(found), 3, 0.1, "three modes taken, none of the others");
    // As sharp as any point of a fine search between the two.
    for (let t = Math.log(1e-7); t < Math.log(0.1); t += 0.01)
      expect(curvatureAt(solver, found)).toBeGreaterThanOrEqual(curvatureAt(solver, Math.exp(t)) * (1 - 1e-6));
  });

  test("is not sought at the ends, and its want is told", () => {
    const flat = curveOf([1], [1e4], 1, 50);
    expect(cornerOf(flat)).toBeUndefined();
    expect(() => corner.choose(question(flat))).toThrowError(
      expect.objectContaining({
        code: "bound/no-corner",
        exitStatus: 3,
        message: expect.stringContaining("discrepancy"),
      }),
    );
    expect(cornerOf(curveOf([], [], 1, 50))).toBeUndefined();
  });
});

describe("the balance", () => {
  test("counts distances between estimates as they are", () => {
    const solver = bump();
    const {width} = operator.panels;
    for (const [a, b] of [
      [1e-1, 1e-2],
      [1e-3, 1e-5],
      [1e-5, 1e-5],
    ] as const) {
      const [one, other] = [a, b].map((share) => solver.estimate(share * solver.largest));
      const want = Math.sqrt(one.reduce((sum, f, j) => sum + (f - other[j]) ** 2 * width[j], 0));
      const got = distanceBetween(solver.modal!, a * solver.largest, b * solver.largest);
      absoluteClose(
        got,
        want,
        1e-9 * solver.norm(b * solver.largest),
        "rounding of estimates, modes below 1e-13 left out",
      );
    }
  });

  test("counts what noise makes of an estimate: every unit of noise in turn adds up to ψ²", () => {
    const readings = verticalReadings(x, new Float64Array(COUNT).fill(12), NOISE);
    const basis = regionalBasis(readings, 1);
    const solver = bump();
    const alpha = 1e-3 * solver.largest;
    let sum = 0;
    for (let i = 0; i < COUNT; ++i) {
      const unit = new Float64Array(COUNT);
      unit[i] = NOISE;
      sum += spectralSolver(whiten(operator, readings, unit, basis), 2).norm(alpha) ** 2;
    }
    absoluteClose(propagatedNoise(solver.modal!, alpha).mean / sum, 1, 1e-8, "modes below 1e-13 over 1e-3");
  });

  test("is the closed form for one mode", () => {
    // ‖f_α − f_β‖ = c√λ (α − β)/((λ + α)(λ + β)) ≤ κ √λ/(λ + β) for all β ↓ 0: c α/(λ + α) ≤ κ, κ² = 1 + 2√2.
    const kappa = Math.sqrt(1 + 2 * Math.SQRT2);
    for (const size of [5, 20, 300]) {
      const modal = {eigenvalues: Float64Array.of(4), energies: Float64Array.of(size * size)};
      const got = balanced(modal, 40, 1e-9);
      const want = (4 * kappa) / (size - kappa);
      expect(got).toBeLessThanOrEqual(want * (1 + 1e-6));
      // The next larger one of the grid, eight a decade, breaks it.
      expect(got * 10 ** (1 / 8)).toBeGreaterThan(want * (1 - 1e-6));
    }
  });

  test("goes down as the readings grow, up with the noise that pooling adds", () => {
    const {modal, largest, least} = bump();
    const {eigenvalues, energies} = modal!;
    fc.assert(
      fc.property(
        fc.double({min: 0.01, max: 100, noNaN: true}),
        fc.double({min: 1, max: 10, noNaN: true}),
        (size, more) => {
          const at = (factor: number, repeats?: number): number =>
            balanced(
              {
                eigenvalues,
                energies: energies.map((energy) => energy * factor),
                ...(repeats === undefined ? {} : {repeats: new Float64Array(eigenvalues.length).fill(repeats)}),
              },
              10 * largest,
              least,
            );
          expect(at(size * more)).toBeLessThanOrEqual(at(size));
          expect(at(size, more)).toBeGreaterThanOrEqual(at(size));
          expect(at(size, 1)).toBe(at(size));
        },
      ),
      {seed: SEED, numRuns: 25},
    );
  });
});
