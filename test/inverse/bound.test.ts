/** The multiplier by bound or misfit, the rules, the curve that they stand on. */
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {apparentNoise} from "../../lib/inverse/apparent-noise.ts";
import {assumedBound} from "../../lib/inverse/assumed-bound.ts";
import {estimateSource} from "../../lib/inverse/estimate.ts";
import {misfitTarget} from "../../lib/inverse/misfit-range.ts";
import {multiplierForMisfit, multiplierForNorm} from "../../lib/inverse/multiplier-for.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {tradeoffCurve} from "../../lib/inverse/tradeoff.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {projectOutInPlace, regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import type {Solver} from "../../lib/solvers/solver.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {evenly} from "../harness/synthetic-line.ts";

const SEED = 50;
const NOISE = 0.02;

/** A bump on 100:140, where the support from `from` to 240 may miss it, seen from 10 m, plus a slope; stations 0 to 240 every 4 m. */
function bumpLine({strength = 1, seed = 1, from = 0} = {}) {
  const x = evenly(0, 240, 61);
  const readings = verticalReadings(x, new Float64Array(61).fill(10), NOISE);
  const all = forwardOperator(readings, panelsOn([{from: 0, to: 240}], 2.5));
  const truth = all.panels.centre.map((t) => (t > 100 && t < 140 ? strength : 0));
  const clean = applyInto(new Float64Array(61), all, truth);
  const values = normalDeviates(seededRandom(seed), 61).map((e, i) => clean[i] + NOISE * e + 0.3 - 0.001 * x[i]);
  const basis = regionalBasis(readings, 1);
  const operator = forwardOperator(readings, panelsOn([{from, to: 240}], 2.5));
  return {readings, operator, basis, values, solver: spectralSolver(whiten(operator, readings, values, basis), 2)};
}

const question = (solver: Solver, lines = 1) => ({solver, supportLength: 240, lines, largestNorm: solver.norm});

describe("the multiplier for a norm", () => {
  test("meets any bound below the unbounded norm to 1e-9", () => {
    const {solver} = bumpLine();
    fc.assert(
      fc.property(fc.double({min: -14, max: -1e-6, noNaN: true}), (decades) => {
        const bound = solver.norm(0) * 10 ** decades;
        const alpha = multiplierForNorm(solver, bound);
        expect(alpha).toBeGreaterThan(0);
        absoluteClose(solver.norm(alpha) / bound, 1, 1e-9, "the promise; the root is sought to 1e-12");
      }),
      {seed: SEED, numRuns: 300},
    );
  });

  test("does so whatever the unit of the readings", () => {
    // Multipliers run from 1e-40 to 1e40 with the units; one near 1, whose logarithm is 0, is no special case.
    const {readings, operator, basis, values} = bumpLine();
    for (const unit of [1e-14, 1e-9, 1e-5, 1, 1e7, 1e14]) {
      const scaled = spectralSolver(
        whiten(
          operator,
          {...readings, noise: readings.noise.map((sigma) => sigma * unit)},
          values.map((v) => v * unit),
          basis,
        ),
        2,
      );
      for (const share of [0.9, 0.1, 1e-3]) {
        const bound = share * scaled.norm(0);
        absoluteClose(scaled.norm(multiplierForNorm(scaled, bound)) / bound, 1, 1e-9, "the promise");
      }
      const one = scaled.norm(1);
      if (one > 0 && one < scaled.norm(0))
        absoluteClose(scaled.norm(multiplierForNorm(scaled, one)) / one, 1, 1e-9, "the promise");
    }
  });

  test("is 0 where the bound does not hold the estimate back", () => {
    const {solver} = bumpLine();
    expect(multiplierForNorm(solver, solver.norm(0))).toBe(0);
    expect(multiplierForNorm(solver, 2 * solver.norm(0))).toBe(0);
  });
});

describe("the multiplier for a misfit", () => {
  test("meets any reachable target to 1e-9", () => {
    const {solver} = bumpLine();
    const [least, most] = [solver.misfit(0), solver.misfit(Infinity)];
    fc.assert(
      fc.property(fc.double({min: 1e-9, max: 1 - 1e-9, noNaN: true}), (share) => {
        const target = least + share * (most - least);
        const alpha = multiplierForMisfit(solver, target)!;
        absoluteClose(solver.misfit(alpha) / target, 1, 1e-9, "the promise; the root is sought to 1e-10");
      }),
      {seed: SEED, numRuns: 300},
    );
  });

  test("says when no multiplier reaches the target, and when every one does", () => {
    const {solver} = bumpLine();
    expect(multiplierForMisfit(solver, solver.misfit(0))).toBeUndefined();
    expect(multiplierForMisfit(solver, 0.5 * solver.misfit(0))).toBeUndefined();
    expect(multiplierForMisfit(solver, solver.misfit(Infinity))).toBe(Infinity);
  });
});

describe("a given bound", () => {
  test("rms:V is V √(length) and norm:V is V, in units of the boundary field", () => {
    const {solver} = bumpLine();
    expect(boundRuleNamed("rms:0.5", 1e-5).choose(question(solver)).bound).toBeCloseTo(0.5e-5 * Math.sqrt(240), 18);
    expect(boundRuleNamed("norm:3", 1e-9).choose(question(solver)).bound).toBeCloseTo(3e-9, 22);
  });

  test("that is active is met, and stands as given", () => {
    const {solver, readings, operator, basis, values} = bumpLine();
    const choice = boundRuleNamed("norm:4", 1).choose(question(solver));
    expect([choice.active, choice.basis, choice.bound, choice.notices.length]).toEqual([true, "given-bound", 4, 0]);
    const estimate = estimateSource(solver, choice, operator, readings, basis, values);
    const norm = Math.sqrt(estimate.density.reduce((sum, f, j) => sum + f * f * operator.panels.width[j], 0));
    absoluteClose(norm / 4, 1, 1e-9, "the promise");
    absoluteClose(estimate.norm / 4, 1, 1e-9, "the promise");
  });

  test("that is wider than the best fit needs is not active: multiplier 0, and a remark", () => {
    const {solver} = bumpLine();
    const choice = boundRuleNamed(`norm:${1.5 * solver.norm(0)}`, 1).choose(question(solver));
    expect([choice.active, choice.multiplier]).toEqual([false, 0]);
    expect(choice.notices).toEqual([expect.objectContaining({code: "bound/not-active", weight: "remark"})]);
    expect(choice.reason).toContain("0.667 M");
  });

  test("of pooled lines holds for the root-mean-square of their norms", () => {
    const {solver} = bumpLine();
    const choice = boundRuleNamed("norm:2", 1).choose(question(solver, 9));
    absoluteClose(solver.norm(choice.multiplier) / 6, 1, 1e-9, "the promise: 2 √9");
    expect(choice.bound).toBe(2);
  });

  test.each(["rms:0", "rms:-1", "norm:", "norm:abc", "rms:Infinity"])("%s is refused", (text) => {
    expect(() => boundRuleNamed(text, 1)).toThrowError(
      expect.objectContaining({code: "bound/not-positive", exitStatus: 2, message: expect.stringContaining(text)}),
    );
  });

  test("a rule that is none is refused with the ones there are", () => {
    expect(() => boundRuleNamed("guess", 1)).toThrowError(
      expect.objectContaining({code: "bound/unknown", exitStatus: 2, message: expect.stringContaining("discrepancy")}),
    );
  });
});

describe("the discrepancy rule", () => {
  test("takes the multiplier whose misfit is N + 2√(2N), and assumes a bound", () => {
    const {solver} = bumpLine();
    const choice = discrepancy.choose(question(solver));
    const target = 61 + 2 * Math.sqrt(122);
    expect(misfitTarget(61)).toBe(target);
    absoluteClose(solver.misfit(choice.multiplier) / target, 1, 1e-9, "the promise");
    expect([choice.basis, choice.active, choice.notices.length]).toEqual(["assumed-bound", false, 0]);
    expect(choice.bound).toBe(assumedBound(question(solver), choice.multiplier));
  });

  test("says when there is nothing but noise, and still assumes what could hide in it", () => {
    const {solver, readings, operator, basis, values} = bumpLine({strength: 0, seed: 3});
    expect(solver.misfit(Infinity)).toBeLessThan(misfitTarget(61));
    const choice = discrepancy.choose(question(solver));
    expect(choice.multiplier).toBe(Infinity);
    expect(choice.notices).toEqual([expect.objectContaining({code: "bound/nothing-but-noise", weight: "doubt"})]);
    // A source whose response just reaches the spread 2√(2N) of the noise has this norm along the strongest mode.
    const hidden = Math.sqrt((2 * Math.sqrt(122)) / solver.largest);
    expect(choice.bound).toBeGreaterThanOrEqual(2 * hidden);
    absoluteClose(
      choice.bound / (2 * Math.hypot(solver.norm(apparentNoise(solver)!.multiplier), hidden)),
      1,
      1e-14,
      "rounding",
    );
    const estimate = estimateSource(solver, choice, operator, readings, basis, values);
    expect(estimate.density.every((f) => f === 0)).toBe(true);
    expect(estimate.norm).toBe(0);
  });

  test("says when its target is out of reach, and takes the most likely multiplier", () => {
    const {solver} = bumpLine({from: 180});
    expect(solver.misfit(0)).toBeGreaterThan(misfitTarget(61));
    const choice = discrepancy.choose(question(solver));
    expect(choice.multiplier).toBe(apparentNoise(solver)!.multiplier);
    expect(choice.notices).toEqual([expect.objectContaining({code: "bound/target-out-of-reach", weight: "doubt"})]);
    expect(choice.notices[0].message).toMatch(/--noise.*--support/);
  });
});

describe("the estimate", () => {
  test("splits the readings into field, regional and residual, and its misfit is theirs", () => {
    const {solver, readings, operator, basis, values} = bumpLine();
    const choice = discrepancy.choose(question(solver));
    const {density, channels, misfit, norm} = estimateSource(solver, choice, operator, readings, basis, values);
    expect(channels.length).toBe(1);
    const [{field, regional, residual}] = channels;
    let squares = 0;
    values.forEach((value, i) => {
      absoluteClose(field[i] + regional[i] + residual[i], value, 1e-14, "rounding");
      squares += (residual[i] / NOISE) ** 2;
    });
    absoluteClose(squares / misfit, 1, 1e-9, "modes left out below 1e-13, over a multiplier of some 1e-4");
    const inL2 = Math.sqrt(density.reduce((sum, f, j) => sum + f * f * operator.panels.width[j], 0));
    absoluteClose(inL2 / norm, 1, 1e-12, "rounding");
    // The regional is in the span of the basis, the residual has nothing of it.
    const left = projectOutInPlace(Float64Array.from(regional), basis);
    left.forEach((value) => {
      absoluteClose(value, 0, 1e-14, "rounding");
    });
    const kept = projectOutInPlace(Float64Array.from(residual), basis);
    kept.forEach((value, i) => {
      absoluteClose(value, residual[i], 1e-15, "rounding");
    });
  });
});

describe("the trade-off curve", () => {
  test("is monotone, and convex in N² with slope −α", () => {
    const {solver} = bumpLine();
    const {multiplier, misfit, norm, degreesOfFreedom} = tradeoffCurve(solver);
    expect(multiplier.length).toBeGreaterThan(40);
    absoluteClose(multiplier[0] / solver.least, 1, 1e-12, "ends where double precision does");
    absoluteClose(multiplier.at(-1)! / (10 * solver.largest), 1, 1e-12, "ten times the largest eigenvalue");
    let steeper = -Infinity;
    for (let k = 1; k < multiplier.length; ++k) {
      expect(multiplier[k]).toBeGreaterThan(multiplier[k - 1]);
      expect(misfit[k]).toBeGreaterThan(misfit[k - 1]);
      expect(norm[k]).toBeLessThan(norm[k - 1]);
      expect(degreesOfFreedom[k]).toBeLessThan(degreesOfFreedom[k - 1]);
      // The chord of a convex curve lies between the slopes of its ends.
      const chord = -(misfit[k] - misfit[k - 1]) / (norm[k] ** 2 - norm[k - 1] ** 2);
      expect(chord).toBeGreaterThan(multiplier[k - 1] * (1 - 1e-6));
      expect(chord).toBeLessThan(multiplier[k] * (1 + 1e-6));
      expect(chord).toBeGreaterThan(steeper);
      steeper = chord;
    }
  });

  test("is empty where no reading sees the support", () => {
    const zero: Solver = {...bumpLine().solver, largest: 0, least: 0};
    expect(tradeoffCurve(zero).multiplier.length).toBe(0);
  });
});
