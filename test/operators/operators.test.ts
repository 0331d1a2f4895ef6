import fc from "fast-check";
import {describe, expect, test} from "vitest";
import type {Support} from "../../lib/geometry/interval.ts";
import {totalLength} from "../../lib/geometry/interval.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {adjointInto, applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {projectOutInPlace, projectOutOfColumnsInPlace, regionalBasis} from "../../lib/operators/regional.ts";
import {whiten, whitenData} from "../../lib/operators/whitened.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {metres, unions} from "../harness/supports.ts";
import {evenly} from "../harness/synthetic-line.ts";

const SEED = 30;
const deviates = (count: number, seed: number) => normalDeviates(seededRandom(seed), count);
const dot = (a: Float64Array, b: Float64Array): number => a.reduce((sum, entry, i) => sum + entry * b[i], 0);

const stations = fc
  .array(fc.tuple(metres(-300, 900), metres(0.5, 60)), {minLength: 1, maxLength: 30})
  .map((list) => ({x: Float64Array.from(list, ([x]) => x), z: Float64Array.from(list, ([, z]) => z)}));

describe("panels", () => {
  test("cover the support without gap or overlap, none wider than asked", () => {
    fc.assert(
      fc.property(unions, metres(0.5, 400), (support, width) => {
        const panels = panelsOn(support, width);
        expect(panels.components.map(({interval}) => interval)).toEqual(support);
        for (const {interval, first, count, edges} of panels.components) {
          expect(edges.length).toBe(count + 1);
          expect([edges[0], edges[count]]).toEqual([interval.from, interval.to]);
          for (let k = 0; k < count; ++k) {
            const j = first + k;
            expect([panels.from[j], panels.to[j]]).toEqual([edges[k], edges[k + 1]]);
            expect(panels.width[j]).toBe(panels.to[j] - panels.from[j]);
            expect(panels.centre[j]).toBeGreaterThan(panels.from[j]);
            expect(panels.centre[j]).toBeLessThan(panels.to[j]);
            // A billionth over: a length that is a whole number of widths must not get one more panel by rounding.
            expect(panels.width[j]).toBeLessThanOrEqual(width * (1 + 1e-8));
          }
        }
        const covered = panels.width.reduce((sum, w) => sum + w, 0);
        assertClose(covered, totalLength(support), {factor: 4 * panels.count, scale: 1000, because: "n sums"});
        expect(panels.components.reduce((sum, {count}) => sum + count, 0)).toBe(panels.count);
      }),
      {seed: SEED},
    );
  });

  test("come as many as the width goes into the length", () => {
    expect(panelsOn([{from: 0, to: 30}], 0.1).count).toBe(300);
    expect(panelsOn([{from: 0, to: 30}], 7).count).toBe(5);
    expect(panelsOn([{from: 0, to: 3}], 7).count).toBe(1);
  });
});

describe("the forward operator", () => {
  test("passes ⟨Ax, y⟩ = ⟨x, Aᵀy⟩ on random unions of intervals", () => {
    fc.assert(
      fc.property(unions, stations, metres(2, 60), fc.integer(), (support, {x, z}, width, seed) => {
        const operator = forwardOperator(verticalReadings(x, z, 1), panelsOn(support, width));
        const f = deviates(operator.panels.count, seed);
        const d = deviates(x.length, seed + 1);
        const field = applyInto(new Float64Array(x.length), operator, f);
        const back = adjointInto(new Float64Array(f.length), operator, d);
        const size = Math.sqrt(dot(f, f) * dot(d, d));
        assertClose(dot(field, d), dot(f, back), {
          factor: f.length + d.length,
          scale: size,
          because: "sums of n products; entries of A below one",
        });
      }),
      {seed: SEED},
    );
  });

  test("passes it whitened and freed of the regional as well", () => {
    fc.assert(
      fc.property(
        unions,
        metres(2, 60),
        fc.integer({min: -1, max: 3}),
        fc.integer(),
        (support, width, degree, seed) => {
          const x = evenly(-100, 500, 40);
          const readings = verticalReadings(x, new Float64Array(40).fill(15), 0.3);
          const operator = forwardOperator(readings, panelsOn(support, width));
          const basis = regionalBasis(readings, degree);
          const system = whiten(operator, readings, deviates(40, seed), basis);
          const f = deviates(operator.panels.count, seed + 2);
          const d = deviates(40, seed + 3);
          const weighted = f.map((value, j) => value * system.rootWidth[j]);
          // (QA/σ√w)(√w f) = Q(Af)/σ, and its transpose on y is Aᵀ(Qy)/(σ√w).
          const field = applyInto(new Float64Array(40), operator, f);
          const whitened = whitenData(field, readings, basis);
          const back = adjointInto(new Float64Array(f.length), operator, projectOutInPlace(d.slice(), basis));
          let forward = 0;
          for (let i = 0; i < 40; ++i) {
            let sum = 0;
            for (let j = 0; j < f.length; ++j) sum += system.matrix[i * f.length + j] * weighted[j];
            const because = "n products over σ";
            assertClose(sum, whitened[i], {factor: 8 * f.length, scale: Math.sqrt(dot(f, f)) / 0.3, because});
            forward += sum * d[i];
          }
          let adjoint = 0;
          for (let j = 0; j < f.length; ++j) adjoint += (f[j] * back[j]) / 0.3;
          const scale = (Math.sqrt(dot(f, f) * dot(d, d)) * Math.sqrt(f.length)) / 0.3;
          assertClose(forward, adjoint, {factor: 8 * f.length, scale, because: "sums of n products"});
        },
      ),
      {seed: SEED, numRuns: 40},
    );
  });

  test("sees a constant density on the support as its harmonic measure", () => {
    fc.assert(
      fc.property(unions, stations, metres(2, 60), (support, {x, z}, width) => {
        const operator = forwardOperator(verticalReadings(x, z, 1), panelsOn(support, width));
        const ones = new Float64Array(operator.panels.count).fill(1);
        applyInto(new Float64Array(x.length), operator, ones).forEach((field, i) => {
          const want = support.reduce((sum, {from, to}) => sum + harmonicMeasure(x[i], z[i], from, to), 0);
          assertClose(field, want, {factor: 16, scale: 1, because: "8ε an entry"});
        });
      }),
      {seed: SEED},
    );
  });

  test("refuses a station on the boundary", () => {
    expect(() =>
      forwardOperator(
        verticalReadings(Float64Array.of(0, 5), Float64Array.of(3, 0), 1),
        panelsOn([{from: 0, to: 1}], 1),
      ),
    ).toThrow(expect.objectContaining({code: "potential/station-below-boundary"}));
  });
});

describe("whitening", () => {
  test("makes squared lengths the misfit and ‖f‖² in L²", () => {
    const support: Support = [
      {from: -20, to: 31},
      {from: 40, to: 50},
    ];
    const x = evenly(-30, 60, 19);
    const noise = 0.02;
    const readings = verticalReadings(x, new Float64Array(19).fill(7), noise);
    const operator = forwardOperator(readings, panelsOn(support, 4));
    const {panels} = operator;
    const values = deviates(19, 3);
    const system = whiten(operator, readings, values, regionalBasis(readings, -1));
    const f = deviates(panels.count, 4);
    let norm = 0;
    let inL2 = 0;
    for (let j = 0; j < panels.count; ++j) {
      norm += (f[j] * system.rootWidth[j]) ** 2;
      inL2 += f[j] ** 2 * panels.width[j];
    }
    assertClose(norm, inL2, {factor: 2 * panels.count, scale: inL2, because: "rounding of roots"});
    const field = applyInto(new Float64Array(19), operator, f);
    let misfit = 0;
    let plain = 0;
    for (let i = 0; i < 19; ++i) {
      let model = 0;
      for (let j = 0; j < panels.count; ++j) model += system.matrix[i * panels.count + j] * f[j] * system.rootWidth[j];
      misfit += (system.data[i] - model) ** 2;
      plain += ((values[i] - field[i]) / noise) ** 2;
    }
    assertClose(misfit, plain, {factor: 200, scale: plain, because: "sums of 20 products"});
  });
});

/** One channel read at these chainages. */
const channelAt = (x: Float64Array) => verticalReadings(x, new Float64Array(x.length).fill(1), 1);

describe("the regional", () => {
  const uneven = Float64Array.from({length: 57}, (_, i) => 5_000 + 9 * i + 3 * Math.sin(i));

  test.each([0, 1, 2, 3])("of degree %d is orthonormal and spans the polynomials", (degree) => {
    const basis = regionalBasis(channelAt(uneven), degree);
    expect(basis.terms).toBe(degree + 1);
    const row = (k: number) => basis.rows.subarray(k * basis.count, (k + 1) * basis.count);
    for (let k = 0; k <= degree; ++k)
      for (let l = 0; l <= k; ++l)
        absoluteClose(dot(row(k), row(l)), k === l ? 1 : 0, 4e-15, "orthonormalised twice: rounding of 57 products");
    for (let power = 0; power <= degree; ++power) {
      const polynomial = uneven.map((x) => ((x - 5_200) / 300) ** power);
      const size = Math.sqrt(dot(polynomial, polynomial));
      const left = projectOutInPlace(polynomial, basis);
      absoluteClose(Math.sqrt(dot(left, left)) / size, 0, 1e-14, "rounding of the chainage, 5e3 ε over 3e2");
    }
    const beyond = uneven.map((x) => ((x - 5_200) / 300) ** (degree + 1));
    const size = Math.sqrt(dot(beyond, beyond));
    const left = projectOutInPlace(beyond, basis);
    expect(Math.sqrt(dot(left, left)) / size).toBeGreaterThan(0.05);
  });

  test("is projected out once for all: twice changes nothing", () => {
    const basis = regionalBasis(channelAt(uneven), 2);
    const once = projectOutInPlace(deviates(57, 8), basis);
    const twice = projectOutInPlace(once.slice(), basis);
    twice.forEach((value, i) => {
      absoluteClose(value, once[i], 2e-15, "rounding");
    });
    for (let k = 0; k < basis.terms; ++k)
      absoluteClose(dot(once, basis.rows.subarray(57 * k, 57 * k + 57)), 0, 4e-15, "rounding of 57 products");
  });

  test("leaves every column of a matrix as it leaves a vector", () => {
    const basis = regionalBasis(channelAt(uneven), 2);
    const matrix = deviates(57 * 3, 9);
    const columns = [0, 1, 2].map((j) =>
      projectOutInPlace(
        Float64Array.from({length: 57}, (_, i) => matrix[3 * i + j]),
        basis,
      ),
    );
    projectOutOfColumnsInPlace(matrix, 3, basis);
    for (let i = 0; i < 57; ++i)
      for (let j = 0; j < 3; ++j) absoluteClose(matrix[3 * i + j], columns[j][i], 4e-15, "rounding of 57 products");
  });

  test("keeps no more terms than the stations can tell apart, and none for degree −1", () => {
    expect(regionalBasis(channelAt(uneven), -1).terms).toBe(0);
    expect(regionalBasis(channelAt(Float64Array.of(3, 3, 3)), 1).terms).toBe(1);
    expect(regionalBasis(channelAt(Float64Array.of(3, 8, 3, 8)), 3).terms).toBe(2);
    expect(regionalBasis(channelAt(Float64Array.of(7)), 2).terms).toBe(1);
  });
});
