/** The simultaneous band against another program, a closed form, and truths and noise made to leave it. */
import {describe, expect, test} from "vitest";
import type {Support} from "../../lib/geometry/interval.ts";
import {chiSquaredQuantile} from "../../lib/numeric/chi-squared.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {type Functional, meanOver} from "../../lib/operators/functional.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {projectOutInPlace, projectOutOfColumnsInPlace, regionalBasis} from "../../lib/operators/regional.ts";
import {harmonicMeasure, poissonKernel} from "../../lib/potential/poisson.ts";
import {dataModes} from "../../lib/spectral/singular-system.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {bandOf, type IntervalCase, intervalsOf, readAt} from "../harness/interval-case.ts";
import {referenceTable} from "../harness/reference-table.ts";
import {evenly} from "../harness/synthetic-line.ts";

describe("ends against functions that reach them, by numpy", () => {
  test.each(referenceTable("simultaneous"))("$kind $first $second, noise $noise, degree $degree", (row) => {
    const number = (name: string): number => Number(row[name]);
    const spans = (name: string): number[] => row[name]!.split(":").map(Number);
    const [from, to] = spans("support");
    const [begin, end, step] = spans("stations");
    const support = [{from: from!, to: to!}];
    const x = evenly(begin!, end!, Math.round((end! - begin!) / step!) + 1);
    const z = x.map((t) => number("height") + number("swing") * Math.sin(t / 37));
    const noise = number("noise");
    const values = x.map(
      (t, i) =>
        2 * harmonicMeasure(t, z[i]!, 240, 300) - harmonicMeasure(t, z[i]!, 330, 420) + noise * Math.sin(7 * i * i),
    );
    const [first, second] = [number("first"), number("second")];
    const functional =
      row["kind"] === "mean" ? meanOver({from: first, to: second}, support) : readAt(first, second, support);
    const given = {
      x,
      z,
      support,
      noise,
      bound: number("bound"),
      degree: number("degree"),
      values,
      layout: "whole",
    } as const;
    const {value, halfWidth} = bandOf({...given, confidence: number("level")}).interval(functional);
    const width = number("upper") - number("lower");
    // The search for α ends within 1e-3 in ln α, of which an end feels the square.
    absoluteClose((value - halfWidth - number("lower")) / width, 0, 1e-6, "search for α");
    absoluteClose((value + halfWidth - number("upper")) / width, 0, 1e-6, "search for α");
  });
});

test("one reading: the greatest value over a slab cut out of a ball", () => {
  const support = [{from: -400, to: 400}];
  const [noise, bound, reading] = [0.5, 3, 0.2];
  const chi = Math.sqrt(chiSquaredQuantile(0.05, 1));
  const p = readAt(0, 10, support);
  const given = {x: Float64Array.of(0), z: Float64Array.of(10), support, noise, bound, degree: -1};
  const band = bandOf({...given, values: Float64Array.of(reading)});
  for (const q of [p, readAt(3, 6, support), readAt(30, 10, support), meanOver({from: -5, to: 15}, support)]) {
    const along = q.respondInto(new Float64Array(1), oneReading(support), 0, 1)[0]! / Math.sqrt(p.normSquared);
    const across = Math.sqrt(Math.max(q.normSquared - along * along, 0));
    const greatest = (sign: number): number => {
      const free = (sign * bound * along) / Math.sqrt(q.normSquared);
      const [low, high] = [reading - chi * noise, reading + chi * noise].map((t) => t / Math.sqrt(p.normSquared));
      const a = Math.min(Math.max(free, low!), high!);
      return sign * along * a + across * Math.sqrt(bound * bound - a * a);
    };
    const {value, halfWidth} = band.interval(q);
    // The least α that is tried is 1e-6 of its unit: a relative 1e-6 where the bound does not matter at all.
    absoluteClose((value + halfWidth) / greatest(1), 1, 3e-6, "least α");
    absoluteClose((value - halfWidth) / -greatest(-1), 1, 3e-6, "least α");
  }
});

/** A continuum of one vertical reading at 10 m with unit noise. */
function oneReading(support: Support) {
  return continuumOf(verticalReadings(Float64Array.of(0), Float64Array.of(10), 1), support);
}

const X = evenly(0, 300, 31);
const Z = X.map((t) => 14 + 3 * Math.sin(t / 31));
const SUPPORT = [{from: -40, to: 340}];
const CASE = {x: X, z: Z, support: SUPPORT, noise: 0.05, bound: 20};
/** Sources are sums of plates of two metres: functions, not only numbers. */
const PLATES = evenly(-40, 338, 190);

const responses = Float64Array.from({length: 31 * 190}, (_, k) => {
  const i = Math.floor(k / 190);
  return harmonicMeasure(X[i]!, Z[i]!, PLATES[k % 190]!, PLATES[k % 190]! + 2);
});
const asked: readonly {readonly q: Functional; readonly on: Float64Array}[] = [
  ...[10, 40, 90, 150, 300].flatMap((width) =>
    [0, 60, 150, 230].map((from) => ({
      q: meanOver({from, to: from + width}, SUPPORT),
      // Ends are even, as those of the plates.
      on: PLATES.map((at) => (at >= from && at < from + width ? 2 / width : 0)),
    })),
  ),
  ...[1, 5, 14, 40].flatMap((height) =>
    [-20, 50, 148, 300].map((x) => ({
      q: readAt(x, height, SUPPORT),
      on: PLATES.map((at) => harmonicMeasure(x, height, at, at + 2)),
    })),
  ),
];
const dot = (one: Float64Array, other: Float64Array): number => one.reduce((sum, v, j) => sum + v * other[j]!, 0);
const scaledTo = (length: number, vector: Float64Array): Float64Array =>
  vector.map((v) => (v * length) / Math.sqrt(dot(vector, vector)));

/** The number of modes, over fine nodes; and χ of the event. */
function chiOf({noise, bound}: {noise: number; bound: number}): number {
  const basis = regionalBasis(verticalReadings(X, Z, noise), 1);
  const columns = 1520;
  const matrix = Float64Array.from({length: 31 * columns}, (_, k) => {
    const i = Math.floor(k / columns);
    return (Math.sqrt(0.25) * poissonKernel(-40 + 0.25 * ((k % columns) + 0.5) - X[i]!, Z[i]!)) / noise;
  });
  projectOutOfColumnsInPlace(matrix, columns, basis);
  const {count} = dataModes(matrix, 31, columns, 0.1 / (bound * bound));
  return Math.sqrt(chiSquaredQuantile(0.05, count));
}

/** How far the worst of all numbers is from the middle of the band, in half-widths. */
function worst(given: IntervalCase, source: Float64Array, noise: Float64Array): number {
  const values = X.map((t, i) => dot(responses.subarray(190 * i, 190 * (i + 1)), source) + noise[i]! + 5 - 0.02 * t);
  const band = bandOf({...given, values});
  return asked.reduce((most, {q, on}) => {
    const {value, halfWidth} = band.interval(q);
    return Math.max(most, Math.abs(dot(on, source) - value) / halfWidth);
  }, 0);
}

/** Norm over plates of two metres: ‖f‖² = 2 Σ f_j². */
const inBall = (bound: number, vector: Float64Array): Float64Array => scaledTo(bound / Math.SQRT2, vector);

/** Truth and noise against one of the numbers: what the readings see least of it, and noise that hides the rest. */
function against(k: number, sign: number, chi: number): {source: Float64Array; noise: Float64Array} {
  const {q, on} = asked[k % asked.length]!;
  const {weights} = intervalsOf({...CASE, layout: "whole"}).affine(q);
  const seen = PLATES.map((_, j) =>
    X.reduce((sum, _x, i) => sum + (weights[i]! * responses[190 * i + j]!) / CASE.noise, 0),
  );
  const source = inBall(
    0.999 * CASE.bound,
    on.map((v, j) => sign * (v - seen[j]!)),
  );
  return {source, noise: scaledTo(chi, weights).map((n) => -sign * CASE.noise * n)};
}

describe("holds all numbers at once", () => {
  const chi = chiOf(CASE);
  const basis = regionalBasis(verticalReadings(X, Z, CASE.noise), 1);
  const {normal, uniform} = seededRandom(97);
  const onSphere = (): Float64Array =>
    scaledTo(
      0.999 * chi * CASE.noise,
      projectOutInPlace(normalDeviates(seededRandom(Math.floor(1e9 * uniform())), 31), basis),
    );
  const random = (): Float64Array => {
    const smooth = Math.exp(6 * uniform());
    let before = 0;
    const rough = PLATES.map(() => {
      before += (normal() - before) / smooth;
      return before;
    });
    return inBall(CASE.bound * (uniform() < 0.5 ? 0.999 : uniform()), rough);
  };

  test("any source in the ball, noise anywhere on the sphere of the event", () => {
    let most = 0;
    for (let draw = 0; draw < 500; ++draw)
      most = Math.max(most, worst({...CASE, layout: "whole"}, random(), onSphere()));
    expect(most).toBeLessThanOrEqual(1);
    // Not because it were needlessly wide.
    expect(most).toBeGreaterThan(0.5);
  });

  test("sources and noise made against one of the numbers; beyond the event it can fail", () => {
    let most = 0;
    let beyond = 0;
    for (let k = 0; k < 2 * asked.length; ++k) {
      const sign = k < asked.length ? 1 : -1;
      const {source, noise} = against(k, sign, 0.999 * chi);
      most = Math.max(most, worst({...CASE, layout: "whole"}, source, noise));
      const twice = against(k, sign, 1.5 * chi);
      try {
        beyond = Math.max(beyond, worst({...CASE, layout: "whole"}, twice.source, twice.noise));
      } catch {
        // Then no source is left, which says so as well.
      }
    }
    expect(most).toBeLessThanOrEqual(1);
    expect(most).toBeGreaterThan(0.8);
    expect(beyond).toBeGreaterThan(1);
  });

  test("with normal noise, at least as often as stated", () => {
    const draws = 400;
    let missed = 0;
    for (let draw = 0; draw < draws; ++draw) {
      const noise = normalDeviates(seededRandom(draw), 31).map((n) => CASE.noise * n);
      if (
        worst(
          {...CASE, layout: "whole"},
          draw % 2 === 0 ? random() : against(draw >> 1, draw % 4 < 2 ? 1 : -1, 1).source,
          noise,
        ) > 1
      )
        ++missed;
    }
    // Three standard deviations of 400 trials at 5 %.
    expect(missed).toBeLessThanOrEqual(0.05 * draws + 3 * Math.sqrt(draws * 0.05 * 0.95));
  });

  test("never wider than the bound alone; where little of the bound is used, mostly wider than an interval for one number", () => {
    const values = X.map((t, i) => 0.6 * harmonicMeasure(t, Z[i]!, 100, 200) + CASE.noise * normal());
    const single = intervalsOf({...CASE, values, layout: "whole"});
    const band = bandOf({...CASE, values, layout: "whole"});
    const ratios = asked.map(({q}) => {
      const {halfWidth} = band.interval(q);
      expect(halfWidth).toBeLessThanOrEqual(CASE.bound * Math.sqrt(q.normSquared) * (1 + 1e-12));
      return halfWidth / single.interval(q).halfWidth;
    });
    expect(band.tally().asked).toBe(asked.length);
    // It looks at the readings, the interval does not: what these use up of the bound makes the band narrower.
    expect(Math.min(...ratios)).toBeGreaterThan(0.9);
    ratios.sort((a, b) => a - b);
    expect(ratios[ratios.length >> 1]).toBeGreaterThan(1.02);
  });

  test("far from the readings they add nothing, and it says so", () => {
    const band = bandOf({...CASE, support: [...SUPPORT, {from: 90_000, to: 90_100}]});
    band.interval(meanOver({from: 90_020, to: 90_030}, [{from: 90_000, to: 90_100}]));
    expect(band.tally()).toEqual({asked: 1, boundAlone: 1});
  });

  test("readings that no source within the bound comes near to are refused with the cheaper cure", () => {
    const values = X.map((t, i) => 40 * harmonicMeasure(t, Z[i]!, 100, 200));
    const given = {...CASE, values, layout: "whole"} as const;
    const refused =
      /\[?The bound or the noise is wrong\. Cheapest cure: the bound ([\d.]+) times larger; else the noise/;
    expect(() => bandOf(given).interval(asked[0]!.q)).toThrow(refused);
    let factor = 0;
    try {
      bandOf(given).interval(asked[0]!.q);
    } catch (error) {
      factor = Number(refused.exec((error as Error).message)?.[1]);
    }
    // More modes are read at a larger bound, which lets a little more pass and asks for a little more.
    expect(() => bandOf({...given, bound: 1.02 * factor * CASE.bound}).interval(asked[0]!.q)).not.toThrow();
    expect(() => bandOf({...given, bound: 0.95 * factor * CASE.bound}).interval(asked[0]!.q)).toThrow(refused);
  });
});

describe("on windows of a long line", () => {
  const x = evenly(0, 1400, 141);
  const z = x.map((t) => 9 + Math.sin(t / 50));
  const support = [{from: -50, to: 1450}];
  const given = {x, z, support, noise: 0.02, bound: 15, layout: "windows"} as const;
  const {normal, uniform} = seededRandom(5);
  const plates = Array.from({length: 30}, (_, k) => [50 * k - 50, 50 * k] as const);
  /** A mean over 50 m, others longer than a window, the field near and high. */
  const means = [
    [100, 150],
    [600, 750],
    [0, 1400],
    [-50, 900],
  ] as const;
  const points = [
    [333, 4],
    [800, 30],
    [1390, 9],
  ] as const;
  const field = (source: readonly number[], at: number, height: number): number =>
    plates.reduce((sum, [a, b], k) => sum + source[k]! * harmonicMeasure(at, height, a, b), 0);

  test("sources in the ball, a level and a slope, normal noise: at least as often as stated", () => {
    let missed = 0;
    const draws = 40;
    for (let draw = 0; draw < draws; ++draw) {
      const rough = plates.map(() => normal() + (draw % 2));
      const size = (given.bound * (0.5 + 0.49 * uniform())) / Math.sqrt(50 * rough.reduce((sum, v) => sum + v * v, 0));
      const source = rough.map((v) => size * v);
      const values = x.map((t, i) => field(source, t, z[i]!) + 3 + 0.01 * t + given.noise * normal());
      const band = bandOf({...given, values});
      const out = (q: Functional, truth: number): boolean => {
        const {value, halfWidth} = band.interval(q);
        return !(Math.abs(value - truth) <= halfWidth);
      };
      const outMean = means.some(([from, to]) => {
        const inside = plates.map(([a, b]) => Math.max(0, Math.min(b, to) - Math.max(a, from)));
        const sum = inside.reduce((total, length, k) => total + length * source[k]!, 0);
        return out(meanOver({from, to}, support), sum / (to - from));
      });
      if (outMean || points.some(([at, height]) => out(readAt(at, height, support), field(source, at, height))))
        ++missed;
    }
    // Three standard deviations of 40 trials at 5 %.
    expect(missed).toBeLessThanOrEqual(0.05 * draws + 3 * Math.sqrt(draws * 0.05 * 0.95));
  });

  test("no more than twice as wide as that of the whole line, which spends its chance to fail once", () => {
    const values = x.map((t, i) => harmonicMeasure(t, z[i]!, 300, 400) + given.noise * normal());
    const cut = bandOf({...given, values});
    const whole = bandOf({...given, values, layout: "whole"});
    for (const q of [meanOver({from: 320, to: 345}, support), readAt(333, 4, support), readAt(700, 9, support)]) {
      const ratio = cut.interval(q).halfWidth / whole.interval(q).halfWidth;
      expect(ratio).toBeGreaterThan(0.9);
      expect(ratio).toBeLessThan(2);
    }
  });

  test("a mean over two stretches is cut into means over its parts", () => {
    const stretches = [
      {from: 100, to: 300},
      {from: 700, to: 800},
    ];
    const whole = meanOver({from: 100, to: 800}, support, undefined, stretches);
    const parts = whole.cut!(7);
    // Of 100 m each: two in the first stretch, one in the other, none between.
    expect(parts.map(({share}) => share)).toEqual([1 / 3, 1 / 3, 1 / 3]);
    const readings = continuumOf(verticalReadings(x, z, 1), support);
    const sum = new Float64Array(x.length);
    for (const {mean, share} of parts)
      mean.respondInto(new Float64Array(x.length), readings, 0, x.length).forEach((value, i) => {
        sum[i]! += share * value;
      });
    whole.respondInto(new Float64Array(x.length), readings, 0, x.length).forEach((value, i) => {
      absoluteClose(sum[i]!, value, 1e-15, "rounding of sums below 1e-2");
    });
  });
});
