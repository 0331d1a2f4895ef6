/** Intervals against another program's continuum, against their own definition, and against truths made to break them. */
import {describe, expect, test} from "vitest";
import type {Support} from "../../lib/geometry/interval.ts";
import {clip, totalLength} from "../../lib/geometry/interval.ts";
import {foldedNormalQuantile} from "../../lib/numeric/normal.ts";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {densityAt, type Functional, meanOver} from "../../lib/operators/functional.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {readingsOf, verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import {amplitudeIm, amplitudeRe, kernelAt, type Response} from "../../lib/potential/kernel.ts";
import {poissonKernel} from "../../lib/potential/poisson.ts";
import {singularSystem} from "../../lib/spectral/singular-system.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {type IntervalCase, intervalsOf, readAt, VERTICAL} from "../harness/interval-case.ts";
import {referenceTable} from "../harness/reference-table.ts";
import {evenly} from "../harness/synthetic-line.ts";

const ALONG: Response = {re: 0, im: 1, order: 0};
const GRADIENT: Response = {re: 0, im: -1, order: 1};
const SLANTING: Response = {re: 0.7, im: 0.4, order: 0};

/** Four Gauss nodes on every half metre: enough for heights of metres and strips from metre to metre. */
function fineNodes(support: Support) {
  const rule = gaussLegendre(4);
  const at: number[] = [];
  const weight: number[] = [];
  for (const {from, to} of support)
    for (let left = from; left < to - 1e-9; left += 0.5)
      for (let k = 0; k < 4; ++k) {
        at.push(left + 0.25 * (1 + rule.nodes[k]));
        weight.push(0.25 * rule.weights[k]);
      }
  return {at: Float64Array.from(at), weight: Float64Array.from(weight)};
}

/** q as a function on the nodes. */
const meanAs = (from: number, to: number) => (t: number) => (t > from && t < to ? 1 / (to - from) : 0);
const fieldAs = (x: number, z: number) => (t: number) => poissonKernel(t - x, z);

/** The weights c of some answers, one reading at a time: answers are linear in the readings. */
function weightsOf(given: IntervalCase, functionals: readonly Functional[]): Float64Array[] {
  const weights = functionals.map(() => new Float64Array(given.x.length));
  for (let i = 0; i < given.x.length; ++i) {
    const values = new Float64Array(given.x.length);
    values[i] = 1;
    const solver = intervalsOf({...given, values});
    functionals.forEach((functional, k) => {
      weights[k][i] = solver.interval(functional).value;
    });
  }
  return weights;
}

/** r = q − Σ c_i p_i on the nodes, its norm, and what the source M r/‖r‖ is and looks like. */
function worstSource({x, z, support, bound}: IntervalCase, weights: Float64Array, q: (t: number) => number) {
  const {at, weight} = fineNodes(support);
  const rest = at.map((t) => q(t) - x.reduce((sum, xi, i) => sum + weights[i] * poissonKernel(t - xi, z[i]), 0));
  const norm = Math.sqrt(rest.reduce((sum, r, k) => sum + r * r * weight[k], 0));
  const f = rest.map((r) => (bound * r) / norm);
  const readings = x.map((xi, i) => at.reduce((sum, t, k) => sum + weight[k] * f[k] * poissonKernel(t - xi, z[i]), 0));
  const asked = at.reduce((sum, t, k) => sum + weight[k] * f[k] * q(t), 0);
  return {norm, readings, asked};
}

const dot = (a: Float64Array, b: Float64Array): number => a.reduce((sum, entry, i) => sum + entry * b[i], 0);

/** Support 100:500, 20 m up, stations every 4 m from 0 to 600, noise 0.005, M = 20. */
const PLAIN = {
  x: evenly(0, 600, 151),
  z: new Float64Array(151).fill(20),
  support: [{from: 100, to: 500}],
  noise: 0.005,
  bound: 20,
  degree: -1,
} as const;
const STRIP = meanOver({from: 240, to: 300}, PLAIN.support);

describe("half-widths in the continuum", () => {
  const rows = referenceTable("strip-intervals");

  test.each(rows)(
    "agree with numpy: $kind $first $second, regional $degree, noise $noise, swing $swing, support $support",
    (row) => {
      const support = row.support.split(" ").map((part) => {
        const [from, to] = part.split(":").map(Number);
        return {from, to};
      });
      const [begin, end, step] = row.stations.split(":").map(Number);
      const x = Float64Array.from({length: Math.round((end - begin) / step) + 1}, (_, i) => begin + step * i);
      const [first, second] = [Number(row.first), Number(row.second)];
      const {halfWidth} = intervalsOf({
        x,
        z: x.map((t) => Number(row.height) + Number(row.swing) * Math.sin(t / 37)),
        support,
        noise: Number(row.noise),
        bound: Number(row.bound),
        degree: Number(row.degree),
        confidence: Number(row.level),
      }).interval(row.kind === "mean" ? meanOver({from: first, to: second}, support) : readAt(first, second, support));
      // `a` is found to half a per cent, of which the width, flat there, feels 1e-5; modes left out cost below 1e-4.
      // A strip that is hardly seen would have it beyond 400/M², where the search ends, and gains 4e-4 by it.
      const hardlySeen = row.first === "400";
      absoluteClose(halfWidth / Number(row.half_width), 1, hardlySeen ? 5e-4 : 1e-4, "search for a, modes left out");
    },
  );

  test("lie within half a per cent of the 0.5186 computed elsewhere for a set-up that leaves stations and noise open", () => {
    // That figure belongs to support 100:500, height 20, strip 240:300; stations and noise were not stated, so ours differ.
    expect(rows.length).toBeGreaterThan(20);
    const {halfWidth} = intervalsOf(PLAIN).interval(STRIP);
    absoluteClose(halfWidth, 0.51696, 1e-5, "our own set-up");
    absoluteClose(halfWidth / 0.5186, 1, 0.005, "stations and noise not stated there");
  });

  test("are all bias where nothing can be read, and nothing off the support", () => {
    const blind = intervalsOf({...PLAIN, noise: 1e6, values: new Float64Array(151).fill(3e6)});
    const {value, halfWidth} = blind.interval(STRIP);
    expect(value).toBe(0);
    absoluteClose(halfWidth, 20 / Math.sqrt(60), 1e-15, "closed form");
    const off = meanOver({from: 20, to: 90}, PLAIN.support);
    expect(intervalsOf(PLAIN).interval(off)).toEqual({value: 0, halfWidth: 0});
  });

  test("grow with noise, bound and confidence, and shrink with the length averaged over", () => {
    const of = (own: Partial<IntervalCase>, functional = STRIP) =>
      intervalsOf({...PLAIN, ...own}).interval(functional).halfWidth;
    expect(of({noise: 0.01})).toBeGreaterThan(of({}));
    expect(of({bound: 25})).toBeGreaterThan(of({}));
    expect(of({confidence: 0.99})).toBeGreaterThan(of({}));
    expect(of({degree: 1})).toBeGreaterThan(of({}));
    expect(of({}, meanOver({from: 230, to: 310}, PLAIN.support))).toBeLessThan(of({}));
  });
});

describe("half-widths are what they say: cv(b/s)·s of their own weights", () => {
  const uneven = (n: number, height: number) =>
    Float64Array.from({length: n}, (_, i) => height * (1 + 0.2 * Math.sin(i)));
  const parts: Support = [
    {from: 0, to: 250},
    {from: 270, to: 620},
  ];
  const line = {x: evenly(-30, 650, 69), z: uneven(69, 10), noise: 0.02, bound: 0.5 * Math.sqrt(600)};
  test.each([
    {name: "whole line", layout: "whole", degree: -1},
    {name: "whole line, regional", layout: "whole", degree: 2},
    {name: "windows", layout: "windows", degree: -1},
    {name: "windows, regional", layout: "windows", degree: 2},
  ] as const)("$name", ({layout, degree}) => {
    const given: IntervalCase = {...line, support: parts, degree, layout};
    const asked = [
      [meanOver({from: 240, to: 300}, parts), meanAs(240, 300)],
      [readAt(331, 4, parts), fieldAs(331, 4)],
      // Longer than two windows: a sum of pieces.
      [meanOver({from: 100, to: 500}, parts), meanAs(100, 500)],
    ] as const;
    const all = weightsOf(
      given,
      asked.map(([functional]) => functional),
    );
    asked.forEach(([functional, q], k) => {
      const weights = all[k];
      const {norm, readings, asked: truth} = worstSource(given, weights, q);
      const deviation = given.noise * Math.sqrt(dot(weights, weights));
      const bias = given.bound * norm;
      const want = foldedNormalQuantile(bias / deviation, 0.95) * deviation;
      const {halfWidth} = intervalsOf(given).interval(functional);
      absoluteClose(halfWidth / want, 1, 1e-6, "quadrature of the check; ‖q‖² less what is explained cancels");
      // The source M r/‖r‖ is wrong by all of the bias.
      absoluteClose((truth - dot(weights, readings)) / bias, 1, 1e-6, "quadrature of the check");
      for (let power = 0; power <= degree; ++power) {
        const polynomial = given.x.map((x) => (x / 650) ** power);
        const size = Math.sqrt(dot(weights, weights) * dot(polynomial, polynomial));
        absoluteClose(dot(weights, polynomial) / size, 0, 1e-9, "the weights must not react to the regional");
      }
    });
  });
});

describe("coverage", () => {
  const DRAWS = 2000;
  const covered = (
    given: IntervalCase,
    weights: Float64Array,
    clean: Float64Array,
    asked: number,
    halfWidth: number,
  ) => {
    const random = seededRandom(11);
    let inside = 0;
    for (let draw = 0; draw < DRAWS; ++draw) {
      let value = 0;
      for (let i = 0; i < clean.length; ++i) value += weights[i] * (clean[i] + given.noise * random.normal());
      if (Math.abs(value - asked) <= halfWidth) ++inside;
    }
    return inside / DRAWS;
  };
  /** Three standard errors of a share of 0.95. */
  const ERROR = 3 * Math.sqrt((0.95 * 0.05) / DRAWS);
  const coarse: IntervalCase = {...PLAIN, x: evenly(0, 600, 61), z: new Float64Array(61).fill(20)};

  test.each([-1, 1])("is the stated 95 per cent for the worst source of all, regional %d", (degree) => {
    const given = {...coarse, degree};
    const [weights] = weightsOf(given, [STRIP]);
    const {readings, asked} = worstSource(given, weights, meanAs(240, 300));
    const {halfWidth} = intervalsOf(given).interval(STRIP);
    const share = covered(given, weights, readings, asked, halfWidth);
    // For this source the promise is met exactly, not more than met.
    absoluteClose(share, 0.95, ERROR, "three standard errors of 2,000 draws");
    // The weights are those of the answers.
    const noisy = readings.map((r, i) => r + 0.005 * Math.sin(7 * i));
    absoluteClose(intervalsOf({...given, values: noisy}).interval(STRIP).value, dot(weights, noisy), 1e-9, "linear");
  });

  test("is at least that for sources drawn at random in the ball, under any regional", () => {
    const given = {...coarse, degree: 1};
    const [weights] = weightsOf(given, [STRIP]);
    const {halfWidth} = intervalsOf(given).interval(STRIP);
    const {at, weight} = fineNodes(given.support);
    for (const seed of [1, 2, 3, 4]) {
      const amplitudes = normalDeviates(seededRandom(seed), 30);
      const shape = at.map((t) =>
        amplitudes.reduce((sum, a, k) => sum + (a / (1 + 0.1 * k)) * Math.cos((Math.PI * k * (t - 100)) / 400), 0),
      );
      const norm = Math.sqrt(shape.reduce((sum, f, k) => sum + f * f * weight[k], 0));
      const f = shape.map((value) => (given.bound * value) / norm);
      const clean = given.x.map(
        (x, i) =>
          at.reduce((sum, t, k) => sum + weight[k] * f[k] * poissonKernel(t - x, given.z[i]), 0) + 40 - 0.07 * seed * x,
      );
      const asked = at.reduce((sum, t, k) => sum + weight[k] * f[k] * meanAs(240, 300)(t), 0);
      expect(covered(given, weights, clean, asked, halfWidth)).toBeGreaterThan(0.95 - ERROR);
    }
  });

  test.each([
    {name: "the field along the line, read down", asked: {re: 0, im: 1, order: 0}, read: [VERTICAL]},
    {name: "the downward component, read along and as gradient", asked: VERTICAL, read: [ALONG, GRADIENT]},
    {name: "a slanting gradient, read as a slanting field", asked: {re: 0.6, im: 0.5, order: 1}, read: [SLANTING]},
  ] as const)("of a level is the stated 95 per cent for its worst source: $name", ({asked, read}) => {
    const [x, z] = [evenly(0, 600, 41), new Float64Array(41).fill(20)];
    const readings = readingsOf(
      read.map((response) => ({x, z, response, noise: response.order === 0 ? 0.005 : 0.005 / 20})),
    );
    const {count, noise} = readings;
    const given: IntervalCase = {...PLAIN, x: readings.x, z: readings.z, readings, degree: 1};
    const point = readAt(310, 8, PLAIN.support, asked);
    const [weights] = weightsOf(given, [point]);
    const {at, weight} = fineNodes(PLAIN.support);
    const kernel = ({re, im, order}: Response, s: number, drop: number): number =>
      kernelAt(amplitudeRe({re, im, order}), amplitudeIm({re, im, order}), order, s, drop);
    const q = at.map((t) => kernel(asked, t - 310, 8));
    // r = q − Σ c_i p_i: the source M r/‖r‖ is wrong by all of the bias.
    const responses = Array.from({length: count}, (_, i) =>
      at.map((t) => kernelAt(readings.aRe[i], readings.aIm[i], readings.order[i], t - readings.x[i], readings.z[i])),
    );
    const rest = q.map((value, k) => value - responses.reduce((sum, p, i) => sum + weights[i] * p[k], 0));
    const norm = Math.sqrt(rest.reduce((sum, r, k) => sum + r * r * weight[k], 0));
    const f = rest.map((r, k) => (weight[k] * PLAIN.bound * r) / norm);
    const clean = responses.map((p) => dot(p, f));
    const truth = dot(q, f);
    const {halfWidth} = intervalsOf(given).interval(point);
    // The width is that of these weights: s and b by sums that know nothing of modes.
    const deviation = Math.sqrt(weights.reduce((sum, c, i) => sum + (c * noise[i]) ** 2, 0));
    const bias = PLAIN.bound * norm;
    absoluteClose(halfWidth / (foldedNormalQuantile(bias / deviation, 0.95) * deviation), 1, 1e-6, "quadrature");
    const random = seededRandom(12);
    let inside = 0;
    for (let draw = 0; draw < DRAWS; ++draw) {
      let value = 0;
      for (let i = 0; i < count; ++i) value += weights[i] * (clean[i] + noise[i] * random.normal());
      if (Math.abs(value - truth) <= halfWidth) ++inside;
    }
    absoluteClose(inside / DRAWS, 0.95, ERROR, "three standard errors of 2,000 draws");
  });

  test("would be far less if panels a quarter of the height wide stood for the continuum", () => {
    // What averages away inside a panel is bias too: about 0.55 of such intervals cover, as computed elsewhere.
    const {x, z, support, noise, bound} = PLAIN;
    const readingsAt = verticalReadings(x, z, noise);
    const operator = forwardOperator(readingsAt, panelsOn(support, 5));
    const {panels} = operator;
    const system = whiten(operator, readingsAt, new Float64Array(151), regionalBasis(readingsAt, -1));
    const modes = singularSystem(system.matrix, 151, panels.count);
    const q = panels.centre.map(
      (_, j) =>
        clip({from: 240, to: 300}, [{from: panels.from[j], to: panels.to[j]}]).reduce((l, p) => l + p.to - p.from, 0) /
        60 /
        system.rootWidth[j],
    );
    const seen = Float64Array.from({length: modes.count}, (_, k) => {
      let sum = 0;
      for (let j = 0; j < panels.count; ++j) sum += modes.right[k * panels.count + j] * q[j];
      return sum * Math.sqrt(modes.eigenvalues[k]);
    });
    let best = {width: Infinity, weights: new Float64Array()};
    for (let log = -2; log < 8; log += 0.1) {
      const a = Math.exp(log) / (bound * bound);
      const weights = new Float64Array(151);
      let left = dot(q, q);
      for (let k = 0; k < modes.count; ++k) {
        const g = seen[k] / (modes.eigenvalues[k] + a);
        left -= g * g * (modes.eigenvalues[k] + 2 * a);
        for (let i = 0; i < 151; ++i) weights[i] += (g * modes.left[k * 151 + i]) / noise;
      }
      const deviation = noise * Math.sqrt(dot(weights, weights));
      const width = foldedNormalQuantile((bound * Math.sqrt(left)) / deviation, 0.95) * deviation;
      if (width < best.width) best = {width, weights};
    }
    const {readings, asked} = worstSource(PLAIN, best.weights, meanAs(240, 300));
    const share = covered(PLAIN, best.weights, readings, asked, best.width);
    absoluteClose(
      best.width / intervalsOf(PLAIN).interval(STRIP).halfWidth,
      0.471 / 0.5186,
      0.01,
      "as computed elsewhere",
    );
    absoluteClose(share, 0.55, 0.06, "as computed elsewhere for stations and noise that were not stated");
  });
});

describe("on a long line, windows of stations", () => {
  const setUps: [string, Support, Float64Array][] = [
    ["with an apron", [{from: -50, to: 850}], evenly(0, 800, 201)],
    ["that runs on beyond its support", [{from: 0, to: 800}], evenly(-100, 900, 251)],
    ["that ends with its support", [{from: 0, to: 800}], evenly(0, 800, 201)],
  ];
  const functionals = (support: Support): Functional[] => [
    meanOver({from: 400, to: 420}, support),
    meanOver({from: 380, to: 580}, support),
    readAt(401, 1, support),
    readAt(401, 5, support),
    readAt(401, 10, support),
    readAt(30, 5, support),
  ];

  test.each(setUps.flatMap(([name, support, x]) => [-1, 0, 1].map((degree) => ({name, support, x, degree}))))(
    "lose at most 1.5 %% against the whole line: 80 heights, $name, regional $degree",
    ({support, x, degree}) => {
      const given = {
        x,
        z: new Float64Array(x.length).fill(10),
        support,
        noise: 0.02,
        bound: 0.5 * Math.sqrt(totalLength(support)),
        degree,
      };
      const whole = intervalsOf({...given, layout: "whole"});
      const windows = intervalsOf({...given, layout: "windows"});
      for (const functional of functionals(support)) {
        const ratio = windows.interval(functional).halfWidth / whole.interval(functional).halfWidth;
        // Measured: below 1.001, and up to 1.011 where the support ends with the line and a level has to be told from it.
        expect(ratio).toBeLessThan(1.015);
        // The whole line is the best there is, to what modes left out cost.
        expect(ratio).toBeGreaterThan(1 - 1e-4);
      }
    },
  );

  test.each(setUps.flatMap(([name, support, x]) => [-1, 1].map((degree) => ({name, support, x, degree}))))(
    "lose at most a hundredth for a mean longer than a window, which looks at the whole line: $name, regional $degree",
    ({support, x, degree}) => {
      const given = {x, z: x.map((t) => 10 + Math.sin(t / 37)), support, noise: 0.002, bound: 15, degree};
      const whole = intervalsOf({...given, layout: "whole"});
      const windows = intervalsOf({...given, layout: "windows"});
      for (const {from, to} of [
        {from: 100, to: 750},
        {from: 20, to: 400},
        // Over all of the support only its ends are in doubt, and what is left of the middle has to cancel.
        support[0],
      ]) {
        const mean = meanOver({from, to}, support);
        const ratio = windows.interval(mean).halfWidth / whole.interval(mean).halfWidth;
        // Measured: at most 1.006; `a` is found to a tenth in ln a.
        expect(ratio).toBeLessThan(1.01);
        expect(ratio).toBeGreaterThan(1 - 1e-4);
      }
    },
  );

  test("are taken by themselves where the line is long, and answer alike across the seams", () => {
    // 600 stations and 90 heights: beyond what is one window.
    const x = evenly(0, 900, 601);
    const support = [{from: -50, to: 950}];
    const values = x.map((t) => 0.5 * Math.cos(t / 60) * Math.exp(-10 / 60));
    const given = {x, z: new Float64Array(601).fill(10), support, noise: 0.02, bound: 16, degree: 1, values};
    const bySize = intervalsOf(given);
    const windows = intervalsOf({...given, layout: "windows"});
    const whole = intervalsOf({...given, layout: "whole"});
    for (const at of [0, 119, 121, 300, 450, 700, 900]) {
      const field = readAt(at, 5, support);
      expect(bySize.interval(field)).toEqual(windows.interval(field));
      const [one, other] = [windows.interval(field), whole.interval(field)];
      expect(Math.abs(one.value - other.value)).toBeLessThan(one.halfWidth);
      expect(one.halfWidth / other.halfWidth).toBeLessThan(1.015);
    }
  });
});

describe("the averaging kernel", () => {
  test("is as wide as half the shortest wave carried, on a long line", () => {
    // R(x) = (1/π)∫ cos kx/(1 + αe^{2hk}) dk on the whole boundary, readings dense: R(0) = ln(1 + 1/α)/(2πh), derived.
    // Readings every Δ with whitened weight 1/σ² act as α σ² Δ there.
    const [h, step, noise] = [10, 1, 0.1];
    const x = evenly(-300, 300, 601);
    const solver = intervalsOf({
      x,
      z: new Float64Array(601).fill(h),
      support: [{from: -300, to: 300}],
      noise,
      bound: 1e4,
      degree: -1,
    });
    for (const share of [1e-2, 1e-4, 1e-6]) {
      const power = solver.resolvingPower(densityAt(0), share / (noise * noise * step));
      absoluteClose(power / (Math.log1p(1 / share) / (2 * Math.PI * h)), 1, 0.01, "thirty heights to either end");
    }
  });
});
