/** Ties on the boundary, means of f, in the intervals: against a dense reference, their limits, and truths made to leave them. */
import {describe, expect, test} from "vitest";
import {boundaryAt} from "../../lib/geometry/boundary-line.ts";
import {choleskyInPlace, choleskySolveInto} from "../../lib/numeric/cholesky.ts";
import {foldedNormalQuantile} from "../../lib/numeric/normal.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {minimise} from "../../lib/numeric/roots.ts";
import {fieldAt, meanOver} from "../../lib/operators/functional.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {binomialLimits} from "../harness/binomial-limits.ts";
import {type FineNodes, fineNodes, inner, scaledTo} from "../harness/fine-continuum.ts";
import {VERTICAL} from "../harness/interval-case.ts";
import {evenly} from "../harness/synthetic-line.ts";
import {type Mean, type TiedCase, tied} from "../harness/tied-case.ts";

const SUPPORT = [{from: -40, to: 240}];
const HILLS = {x: Float64Array.of(-40, 30, 90, 160, 240), y: Float64Array.of(0, 3, -2, 4, 1)};
const X = evenly(0, 200, 41);
const FLAT: TiedCase = {
  x: X,
  z: X.map((t) => 12 + 2 * Math.sin(t / 23)),
  support: SUPPORT,
  noise: 0.05,
  bound: 20,
  means: [],
};
const SLOPING: TiedCase = {...FLAT, z: X.map((t) => 12 + boundaryAt(HILLS, t)), boundary: HILLS};
const SOFT: Mean = {stretch: {from: 60, to: 78}, tolerance: 0.1};
const EXACT: Mean = {stretch: {from: 95, to: 111}, tolerance: 0};
const OVERLAPPING: Mean = {stretch: {from: 104, to: 124}, tolerance: 0};
const TIES = [SOFT, EXACT, OVERLAPPING];

/** Strips that hold, cross, and miss a stretch, and points above; as functionals and as functions of chainage. */
const asked = ({boundary, ...given}: TiedCase) => {
  const {continuum} = tied({...given, ...(boundary === undefined ? {} : {boundary})});
  return [
    ...[
      [60, 78],
      [70, 100],
      [95, 130],
      [150, 170],
    ].map(([from = 0, to = 0]) => ({
      q: meanOver({from, to}, SUPPORT, boundary),
      on: (t: number) => (t > from && t < to ? 1 / (to - from) : 0),
    })),
    ...[66, 100, 140].map((x) => {
      const z = 4 + boundaryAt(boundary, x);
      return {
        q: fieldAt(x, z, VERTICAL, continuum),
        on: (t: number) => poisson(t - x, z - boundaryAt(boundary, t)),
      };
    }),
  ];
};
/** The downward component of a line mass, per unit of f; written out. */
const poisson = (s: number, drop: number): number => drop / (Math.PI * (s * s + drop * drop));

const BREAKS = [30, 90, 160, 60, 78, 70, 100, 95, 130, 150, 170, 111, 104, 124];
const NODES = fineNodes(-40, 240, 0.5, BREAKS);

/** Functions on the nodes with all that is known exactly taken out of them, by Gram and Schmidt. */
function beside(nodes: FineNodes, means: readonly Mean[]): (f: Float64Array) => Float64Array {
  const known: Float64Array[] = [];
  const rest = (f: Float64Array): Float64Array =>
    known.reduce((left, e) => {
      const dot = inner(nodes, left, e);
      return left.map((v, k) => v - dot * e[k]!);
    }, f);
  for (const {stretch} of means.filter(({tolerance}) => tolerance === 0))
    known.push(scaledTo(nodes, rest(onStretch(nodes, stretch)), 1));
  return rest;
}
const onStretch = ({at}: FineNodes, {from, to}: Mean["stretch"]): Float64Array =>
  at.map((t) => (t > from && t < to ? 1 / (to - from) : 0));

/** Whitened responses on the nodes, in increasing chainage. */
function rowsOf({x, z, noise, boundary, means}: TiedCase, nodes: FineNodes): readonly Float64Array[] {
  const rest = beside(nodes, means);
  const rows = [
    ...Array.from(x, (xi, i) => ({
      x: xi,
      row: nodes.at.map((t) => poisson(t - xi, z[i]! - boundaryAt(boundary, t)) / noise),
    })),
    ...means
      .filter(({tolerance}) => tolerance > 0)
      .map(({stretch, tolerance}) => ({
        x: 0.5 * (stretch.from + stretch.to),
        row: onStretch(nodes, stretch).map((v) => v / tolerance),
      })),
  ];
  return rows.sort((a, b) => a.x - b.x).map(({row}) => rest(row));
}

/** The shortest half-width, by a Gram matrix on the nodes and its Cholesky factor. */
function shortest(given: TiedCase, rows: readonly Float64Array[], q: Float64Array): number {
  const n = rows.length;
  const gram = Float64Array.from({length: n * n}, (_, k) => inner(NODES, rows[Math.floor(k / n)]!, rows[k % n]!));
  const pq = Float64Array.from(rows, (row) => inner(NODES, row, q));
  const width = (logA: number): number => {
    const a = Math.exp(logA);
    const factor = gram.map((g, k) => (Math.floor(k / n) === k % n ? g + a : g));
    choleskyInPlace(factor, n);
    const c = choleskySolveInto(new Float64Array(n), factor, pq, n);
    const {deviation, bias} = measured(given, rows, q, c);
    return foldedNormalQuantile(bias / deviation, 0.95) * deviation;
  };
  const unit = -2 * Math.log(given.bound);
  return minimise(width, unit + Math.log(0.02), unit + Math.log(400), 1e-4).value;
}
const missed = (rows: readonly Float64Array[], q: Float64Array, c: Float64Array): Float64Array =>
  q.map((v, k) => rows.reduce((sum, row, i) => sum - c[i]! * row[k]!, v));
function measured({bound}: TiedCase, rows: readonly Float64Array[], q: Float64Array, c: Float64Array) {
  const r = missed(rows, q, c);
  return {deviation: Math.hypot(...c), bias: bound * Math.sqrt(inner(NODES, r, r))};
}

describe.each([
  ["flat", FLAT],
  ["following the ground", SLOPING],
] as const)("on a boundary %s", (_, plain) => {
  const given = {...plain, means: TIES};
  const rows = rowsOf(given, NODES);
  const rest = beside(NODES, TIES);

  test("half-widths are the shortest there are, and what their weights say", () => {
    const {intervals, affine} = tied(given);
    for (const {q, on} of asked(given)) {
      const onNodes = rest(NODES.at.map(on));
      const {halfWidth} = intervals.interval(q);
      // `a` is found to half a per cent, of which the width feels 1e-5; modes left out cost below 1e-4.
      absoluteClose(halfWidth / shortest(given, rows, onNodes), 1, 1e-4, "search for a, modes left out");
      const {weights, deviation, bias, halfWidth: own} = affine(q);
      const dense = measured(given, rows, onNodes, weights);
      absoluteClose(dense.deviation / deviation, 1, 1e-6, "what the modes lose in orthogonality");
      absoluteClose(dense.bias / bias, 1, 1e-6, "a difference of squares that cancels");
      expect(halfWidth).toBe(own);
    }
  });

  test("an exact mean pins itself, and any combination of exact means", () => {
    const means = [SOFT, {...EXACT, value: 0.03}, {...OVERLAPPING, value: -0.02}];
    for (const kind of ["single", "simultaneous"] as const) {
      const {intervals} = tied({...plain, means, kind});
      for (const [{stretch}, value] of [
        [EXACT, 0.03],
        [OVERLAPPING, -0.02],
      ] as const) {
        const found = intervals.interval(meanOver(stretch, SUPPORT, plain.boundary));
        absoluteClose(found.value, value, 1e-12, "rounding");
        expect(found.halfWidth).toBe(0);
      }
    }
  });

  test("a tolerance that goes to nothing leads to the exact mean", () => {
    const {intervals} = tied({...plain, means: [{...EXACT, value: 2}]});
    const near = tied({...plain, means: [{...EXACT, value: 2, tolerance: 1e-3}]});
    for (const {q} of asked(plain)) {
      const [limit, close] = [intervals.interval(q), near.intervals.interval(q)];
      // A tolerance of 1e-3 beside half-widths above 0.5 adds (1e-3/0.5)²/2 = 2e-6 at most; the search for a, 1e-5.
      absoluteClose(close.halfWidth / limit.halfWidth, 1, 2e-5, "tolerance and search for a");
      absoluteClose((close.value - limit.value) / limit.halfWidth, 0, 5e-3, "the value moves with a, to first order");
    }
  });
});

test("adding a mean never lengthens an interval", () => {
  const random = seededRandom(11);
  for (let trial = 0; trial < 40; ++trial) {
    const base = trial % 2 === 0 ? FLAT : SLOPING;
    const means = Array.from({length: 3}, (_, k) => {
      const from = -40 + 200 * random.uniform();
      const tolerance = (trial + k) % 3 === 0 ? 0 : 10 ** (-2 + 3 * random.uniform());
      return {stretch: {from, to: from + 3 + 60 * random.uniform()}, tolerance};
    });
    const functionals = asked(base).map(({q}) => q);
    let before = functionals.map(() => Infinity);
    for (let known = 0; known <= means.length; ++known) {
      const {intervals} = tied({...base, means: means.slice(0, known)});
      const now = functionals.map((q) => intervals.interval(q).halfWidth);
      now.forEach((width, k) => {
        // Each search for `a` costs 1e-5 of the width at most, modes left out 1e-4.
        expect(width).toBeLessThanOrEqual(before[k]! * (1 + 1.2e-4));
      });
      before = now;
    }
  }
});

describe("coverage over 1,000 draws", () => {
  const DRAWS = 1000;
  test.each([
    ["flat", FLAT, 0],
    ["following the ground", SLOPING, 0],
    ["flat, its exact mean not zero", FLAT, 2],
  ] as const)("is the stated one for the worst sources: %s", (_, plain, value) => {
    const rest = beside(NODES, TIES);
    const rows = rowsOf({...plain, means: TIES}, NODES);
    const random = seededRandom(5);
    const least = onStretch(NODES, EXACT.stretch).map((v) => v * 16 * value);
    for (const [place, {q, on}] of asked(plain).entries()) {
      if (place % 2 === 1) continue;
      const onNodes = NODES.at.map(on);
      const {affine} = tied({...plain, means: TIES});
      const {weights} = affine(q);
      const room = Math.sqrt(plain.bound ** 2 - inner(NODES, least, least));
      const worst = scaledTo(NODES, missed(rows, rest(onNodes), weights), room);
      const truth = worst.map((v, k) => v + least[k]!);
      const of = (p: Float64Array): number => inner(NODES, truth, p);
      const values = plain.x.map((xi, i) =>
        of(NODES.at.map((t) => poisson(t - xi, plain.z[i]! - boundaryAt(plain.boundary, t)))),
      );
      const means = TIES.map((mean) => ({...mean, value: of(onStretch(NODES, mean.stretch))}));
      const clean = tied({...plain, means, values}).intervals.interval(q);
      let inside = 0;
      for (let draw = 0; draw < DRAWS; ++draw) {
        const noise = weights.reduce((sum, c) => sum + c * random.normal(), 0);
        if (Math.abs(clean.value + noise - of(onNodes)) <= clean.halfWidth) ++inside;
      }
      const {lower, upper} = binomialLimits(inside, DRAWS, 0.9998);
      expect(upper).toBeGreaterThan(0.95);
      // Where means that are not zero use up part of the bound, the promise is more than kept.
      if (value === 0) expect(lower).toBeLessThan(0.95);
    }
  });

  test("is at least the stated one for all numbers of a simultaneous band at once", () => {
    const random = seededRandom(8);
    const functionals = asked(FLAT);
    const truth = scaledTo(
      NODES,
      NODES.at.map((t) => Math.sin(t / 9) + (t > 95 && t < 130 ? 2 : 0)),
      0.9 * FLAT.bound,
    );
    const of = (p: Float64Array): number => inner(NODES, truth, p);
    const clean = X.map((xi, i) => of(NODES.at.map((t) => poisson(t - xi, FLAT.z[i]!))));
    const means = TIES.map((mean) => ({...mean, value: of(onStretch(NODES, mean.stretch))}));
    const truths = functionals.map(({on}) => of(NODES.at.map(on)));
    let inside = 0;
    const draws = 150;
    for (let draw = 0; draw < draws; ++draw) {
      const values = clean.map((v) => v + FLAT.noise * random.normal());
      const noisy = means.map((mean) => ({...mean, value: mean.value + mean.tolerance * random.normal()}));
      const {intervals} = tied({...FLAT, means: noisy, values, kind: "simultaneous"});
      const all = functionals.every(({q}, k) => {
        const {value, halfWidth} = intervals.interval(q);
        return Math.abs(value - truths[k]!) <= halfWidth;
      });
      if (all) ++inside;
    }
    expect(binomialLimits(inside, draws, 0.9998).upper).toBeGreaterThan(0.95);
  });
});

test("windows lose little against the whole line, and never win", () => {
  const x = evenly(0, 800, 201);
  const long: TiedCase = {
    x,
    z: x.map(() => 10),
    support: [{from: -50, to: 850}],
    noise: 0.05,
    bound: 20,
    degree: 1,
    means: [
      SOFT,
      EXACT,
      {stretch: {from: 400, to: 430}, tolerance: 0},
      {stretch: {from: 600, to: 640}, tolerance: 0.02},
    ],
  };
  const [whole, windows] = [tied({...long, layout: "whole"}), tied({...long, layout: "windows"})];
  for (const [from, to] of [
    [60, 90],
    [100, 108],
    [390, 440],
    [600, 640],
    [610, 650],
    // Longer than a window.
    [50, 700],
  ] as const) {
    const q = meanOver({from, to}, long.support);
    const ratio = windows.intervals.interval(q).halfWidth / whole.intervals.interval(q).halfWidth;
    expect(ratio).toBeGreaterThan(1 - 2e-4);
    expect(ratio).toBeLessThan(1.015);
  }
});
