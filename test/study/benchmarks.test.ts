/**
 * Models whose scores were computed by other programs: how well the source at ground level comes back from noisy
 * readings. Errors are root-mean-square over root-mean-square of the truth, the mean of many draws of white noise.
 */
import {describe, expect, test} from "vitest";
import {levelRowInto} from "../../lib/continuation/field-on-level.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {readingsOf, verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten, whitenData} from "../../lib/operators/whitened.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {gravityGradient} from "../../lib/potential/gravity-gradient.ts";
import type {Response} from "../../lib/potential/kernel.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {dataCoefficients, singularSystem} from "../../lib/spectral/singular-system.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {MASSES, massesAt} from "../harness/four-masses.ts";
import {VERTICAL} from "../harness/interval-case.ts";
import {evenly, plainSettings, syntheticLine, withNoise} from "../harness/synthetic-line.ts";

const level0 = {kind: "above-boundary", height: 0} as const;
const most = (values: Float64Array): number => values.reduce((m, v) => Math.max(m, Math.abs(v)), 0);

const chainage = evenly(-200, 200, 401);
const inner = chainage.map((_, i) => i).filter((i) => Math.abs(chainage[i]) <= 120);
/** Root-mean-square error over root-mean-square of the truth `depth` below the line, on |x| ≤ 120. */
function score(values: Float64Array, depth: number): number {
  let error = 0;
  let truth = 0;
  for (const i of inner) {
    const want = massesAt(chainage[i], depth);
    error += (values[i] - want) ** 2;
    truth += want ** 2;
  }
  return Math.sqrt(error / truth);
}
const DRAWS = 16;

describe("a long line over four line masses, 10 m up, 1 m between readings", () => {
  const clean = chainage.map((x) => massesAt(x, 0));
  const support = [{from: -400, to: 400, group: undefined}];

  test.each([
    [0.001, 0.007],
    [0.01, 0.026],
    [0.05, 0.08],
  ])("by the discrepancy rule, noise %d of the largest reading: error below %d over 16 draws", (share, limit) => {
    // Measured: 0.0057, 0.022, 0.070. Other programs: Fourier Tikhonov 0.007/0.024/0.071, this operator
    // written elsewhere 0.006/0.023/0.070 (eight draws each).
    const noise = share * most(clean);
    const panels = panelsOn(support, 2.5);
    const readings = verticalReadings(chainage, new Float64Array(401).fill(10), noise);
    const operator = forwardOperator(readings, panels);
    const rows = new Float64Array(401 * panels.count);
    for (let i = 0; i < 401; ++i) levelRowInto(rows, i * panels.count, panels, chainage[i], 0, 0, VERTICAL);
    let sum = 0;
    for (let draw = 0; draw < 16; ++draw) {
      const values = withNoise(clean, noise, 100 + draw);
      const solver = spectralSolver(whiten(operator, readings, values, regionalBasis(readings, -1)), 0);
      const {multiplier} = discrepancy.choose({solver, supportLength: 800, lines: 1, largestNorm: solver.norm});
      const density = solver.estimate(multiplier);
      const found = applyInto(new Float64Array(401), {readings: 401, panels, matrix: rows}, density);
      sum += score(found, 10) / 16;
      if (draw > 0) continue;
      // The walk of the program gives the same, and intervals that hold the truth.
      const line = syntheticLine({chainage, clearance: 10, values, noise});
      const study = studyLine(line, plainSettings({support, regional: -1, levels: [level0]}));
      absoluteClose(score(study.levels[0].value, 10) / score(found, 10), 1, 1e-6, "the same modes and multiplier");
      const {value, lower, upper} = study.levels[0];
      for (const i of inner) {
        expect(lower[i]).toBeLessThan(massesAt(chainage[i], 10));
        expect(upper[i]).toBeGreaterThan(massesAt(chainage[i], 10));
        expect(value[i]).toBeGreaterThan(lower[i]);
        expect(value[i]).toBeLessThan(upper[i]);
      }
    }
    expect(sum).toBeLessThan(limit);
  });
});

/** Mean error of the source at ground level over draws of noise, by the discrepancy rule, for the four line masses. */
function meanScore(
  channels: readonly {readonly z: Float64Array; readonly response: Response; readonly clean: Float64Array}[],
  share: number,
  panel: number,
  depth: number,
): number {
  const readings = readingsOf(
    channels.map(({z, response, clean}) => ({x: chainage, z, response, noise: share * most(clean)})),
  );
  const panels = panelsOn([{from: -400, to: 400}], panel);
  const operator = forwardOperator(readings, panels);
  const basis = regionalBasis(readings, -1);
  const rows = new Float64Array(401 * panels.count);
  for (let i = 0; i < 401; ++i) levelRowInto(rows, i * panels.count, panels, chainage[i], 0, 0, VERTICAL);
  let sum = 0;
  for (let draw = 0; draw < DRAWS; ++draw) {
    const values = new Float64Array(readings.count);
    channels.forEach(({clean}, k) => {
      values.set(withNoise(clean, share * most(clean), 100 + draw + 1000 * k), 401 * k);
    });
    const solver = spectralSolver(whiten(operator, readings, values, basis), 0);
    const {multiplier} = discrepancy.choose({solver, supportLength: 800, lines: 1, largestNorm: solver.norm});
    const found = applyInto(new Float64Array(401), {readings: 401, panels, matrix: rows}, solver.estimate(multiplier));
    sum += score(found, depth) / DRAWS;
  }
  return sum;
}

describe("the same masses, field and gradient", () => {
  const gradientAt = (x: number): number =>
    MASSES.reduce((sum, [at, z, l]) => sum + (l * (z * z - (x - at) ** 2)) / ((x - at) ** 2 + z * z) ** 2, 0);

  test.each([
    // Measured: 0.0046, 0.0196, 0.0679; 0.0217, 0.0354, 0.0717. Printed for this operator written elsewhere, eight draws:
    // 0.005/0.020/0.067 and 0.020/0.033/0.068. At 20 m and 0.1 % a panel of a quarter of the height stands in the way:
    // it gives 0.0233 ± 0.0002, an eighth, the default with a gradient, 0.0217 ± 0.0003.
    {height: 10, share: 0.001, panel: 1.25, limit: 0.007},
    {height: 10, share: 0.01, panel: 1.25, limit: 0.024},
    {height: 10, share: 0.05, panel: 1.25, limit: 0.075},
    {height: 20, share: 0.001, panel: 2.5, limit: 0.022},
    {height: 20, share: 0.01, panel: 2.5, limit: 0.04},
    {height: 20, share: 0.05, panel: 2.5, limit: 0.08},
  ])(
    "$height m up, noise $share of the largest of each: below $limit over 16 draws",
    ({height, share, panel, limit}) => {
      const z = new Float64Array(401).fill(height);
      const got = meanScore(
        [
          {z, response: gravity.response(), clean: chainage.map((x) => massesAt(x, 0))},
          {z, response: gravityGradient.response(), clean: chainage.map(gradientAt)},
        ],
        share,
        panel,
        height,
      );
      expect(got).toBeLessThan(limit);
      // The gradient is worth it: the field alone does no better than this (printed 0.006/0.023/0.070, 0.036/0.075/0.185).
      if (height === 20) expect(got).toBeLessThan(0.8 * [0.036, 0.075, 0.185][[0.001, 0.01, 0.05].indexOf(share)]);
    },
  );
});

describe("the same masses under a flight from 4 to 16 m over the ground", () => {
  const heights = chainage.map(
    (x) => 10 + 4 * Math.sin((2 * Math.PI * x) / 53) + 2 * Math.sin((2 * Math.PI * x) / 31 + 1),
  );
  const clean = chainage.map((x, i) => massesAt(x, 10 - heights[i]));
  const response = gravity.response();
  const lowest = heights.reduce((least, h) => Math.min(least, h), Infinity);

  test.each([
    // Measured: 0.0070, 0.0287, 0.0864; for a constant height 0.184, 0.125, 0.103. Printed: 0.0073/0.029/0.085 and
    // 18 %/12 %/10 %.
    {share: 0.001, limit: 0.0085, constant: [0.15, 0.21]},
    {share: 0.01, limit: 0.034, constant: [0.1, 0.15]},
    {share: 0.05, limit: 0.1, constant: [0.085, 0.12]},
  ])(
    "noise $share of the largest reading: below $limit over 16 draws, where a constant height fails",
    ({share, limit, constant}) => {
      const exact = meanScore([{z: heights, response, clean}], share, lowest / 4, 10);
      expect(exact).toBeLessThan(limit);
      const wrong = meanScore([{z: new Float64Array(401).fill(10), response, clean}], share, 2.5, 10);
      expect(wrong).toBeGreaterThan(constant[0]);
      expect(wrong).toBeLessThan(constant[1]);
      expect(wrong).toBeGreaterThan(exact);
    },
  );
});

describe("a short line over a source that ends where it does, 10 m up, 1 m between readings", () => {
  // Printed figures: 60 draws, the best multiplier for every draw, by the same operator written elsewhere. A draw
  // scatters by about a third on the shortest lines, so 60 of them by 4 %, theirs like ours; 240 draws are taken here.
  // Panels are 1 m: a quarter of the height costs up to 1.5× at 0.01 % noise, where waves shorter than h/2 count.
  test.each([
    {half: 20, share: 1e-4, printed: 0.117},
    {half: 20, share: 1e-3, printed: 0.187},
    {half: 40, share: 1e-4, printed: 0.021},
    {half: 40, share: 1e-3, printed: 0.053},
    {half: 40, share: 1e-2, printed: 0.133},
    {half: 100, share: 1e-4, printed: 0.004},
    {half: 100, share: 1e-2, printed: 0.044},
  ])("half-length $half m, noise $share: within 1.1 of $printed", ({half, share, printed}) => {
    const truth = (t: number): number =>
      (Math.abs(t + 0.4 * half) < 0.25 * half ? Math.cos((Math.PI * (t + 0.4 * half)) / (0.5 * half)) ** 2 : 0) +
      0.7 * Math.exp(-(((t - 0.5 * half) / (0.12 * half)) ** 2));
    const count = 2 * half;
    const x = evenly(0.5 - half, half - 0.5, count);
    const z = new Float64Array(count).fill(10);
    const support = [{from: -half, to: half}];
    const fine = forwardOperator(verticalReadings(x, z, 1), panelsOn(support, 0.02));
    const clean = applyInto(new Float64Array(count), fine, fine.panels.centre.map(truth));
    const noise = share * most(clean);
    const readings = verticalReadings(x, z, noise);
    const operator = forwardOperator(readings, panelsOn(support, 1));
    const basis = regionalBasis(readings, -1);
    const system = whiten(operator, readings, clean, basis);
    const modes = singularSystem(system.matrix, system.rows, system.columns);
    const {count: kept, eigenvalues} = modes;
    const wanted = x.map(truth);
    const power = wanted.reduce((sum, f) => sum + f * f, 0);
    const draws = half === 100 ? 60 : 240;
    let sum = 0;
    for (let draw = 1; draw <= draws; ++draw) {
      const coefficients = dataCoefficients(modes, whitenData(withNoise(clean, noise, draw), readings, basis));
      let best = Infinity;
      for (let decade = -13; decade < 1; decade += 0.1) {
        const alpha = eigenvalues[0] * 10 ** decade;
        let error = 0;
        // Panels and readings coincide: the source at a reading is that of its panel, 1 m wide.
        const found = new Float64Array(count);
        for (let k = 0; k < kept; ++k) {
          const weight = (Math.sqrt(eigenvalues[k]) * coefficients[k]) / (eigenvalues[k] + alpha);
          for (let i = 0; i < count; ++i) found[i] += weight * modes.right[k * count + i];
        }
        for (let i = 0; i < count; ++i) error += (found[i] - wanted[i]) ** 2;
        best = Math.min(best, error);
      }
      sum += Math.sqrt(best / power) / draws;
    }
    expect(operator.panels.count).toBe(count);
    expect(sum).toBeLessThan(1.1 * printed);
  });
});
