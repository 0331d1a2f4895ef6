/** The continuum by quadrature against the closed forms of potential/pair.ts, which have their own tables. */
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import type {Support} from "../../lib/geometry/interval.ts";
import {clip} from "../../lib/geometry/interval.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {type Continuum, continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {densityAt, meanOver} from "../../lib/operators/functional.ts";
import {gramProduct} from "../../lib/operators/gram-product.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {pairOver} from "../../lib/potential/pair.ts";
import {poissonKernel} from "../../lib/potential/poisson.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {readAt} from "../harness/interval-case.ts";
import {metres, unions} from "../harness/supports.ts";

const SEED = 31;
const stations = fc
  .array(fc.tuple(metres(-300, 900), metres(2, 60)), {minLength: 2, maxLength: 12})
  .map((list) => ({x: Float64Array.from(list, ([x]) => x), z: Float64Array.from(list, ([, z]) => z)}));

/** The whitened Gram matrix in closed form. */
function closedGram({support, count, poles, noise}: Continuum): Float64Array {
  return Float64Array.from({length: count * count}, (_, k) => {
    const [i, j] = [Math.floor(k / count), k % count];
    return pairOver(support, poles[i], poles[j]) / (noise[i] * noise[j]);
  });
}

const largest = (values: Float64Array): number => values.reduce((most, value) => Math.max(most, Math.abs(value)), 0);

describe("the continuum", () => {
  test("sorts its stations and remembers where they stood", () => {
    const {place, x, z} = continuumOf(verticalReadings(Float64Array.of(5, -2, 9, -2), Float64Array.of(1, 2, 3, 4), 1), [
      {from: 0, to: 1},
    ]);
    expect([...place]).toEqual([1, 3, 0, 2]);
    expect([...x]).toEqual([-2, -2, 5, 9]);
    expect([...z]).toEqual([2, 4, 1, 3]);
  });

  test("integrates products of responses to 3e-11 of the largest, over unions and uneven heights", () => {
    fc.assert(
      fc.property(unions, stations, (support, {x, z}) => {
        const continuum = continuumOf(verticalReadings(x, z, 0.1), support);
        const nodes = nodesFor(continuum, 0, continuum.count);
        const matrix = nodeMatrix(continuum, nodes, 0, continuum.count);
        const gram = closedGram(continuum);
        const scale = largest(gram);
        const n = continuum.count;
        for (let i = 0; i < n; ++i)
          for (let j = 0; j < n; ++j) {
            let sum = 0;
            for (let k = 0; k < nodes.count; ++k) sum += matrix[i * nodes.count + k] * matrix[j * nodes.count + k];
            absoluteClose(
              sum / scale,
              gram[i * n + j] / scale,
              3e-11,
              "ρ^(−32) = 6e-13 on the ellipse of the poles, times 32 since they are double",
            );
          }
      }),
      {seed: SEED, numRuns: 60},
    );
  });

  test("does so for a window of the stations as well", () => {
    const support: Support = [{from: -500, to: 900}];
    const x = Float64Array.from({length: 30}, (_, i) => 14 * i);
    const z = x.map((_, i) => 12 + 5 * Math.sin(i));
    const continuum = continuumOf(verticalReadings(x, z, 0.1), support);
    const [first, last] = [7, 15];
    const nodes = nodesFor(continuum, first, last);
    const matrix = nodeMatrix(continuum, nodes, first, last);
    const gram = closedGram(continuum);
    for (let i = first; i < last; ++i)
      for (let j = first; j < last; ++j) {
        let sum = 0;
        for (let k = 0; k < nodes.count; ++k)
          sum += matrix[(i - first) * nodes.count + k] * matrix[(j - first) * nodes.count + k];
        absoluteClose(sum / gram[i * 30 + j], 1, 1e-11, "the stations of the window set the elements");
      }
    // Elements grow with the distance from the stations: a long line must not cost nodes where nothing is read.
    expect(nodes.count).toBeLessThan(nodesFor(continuum, 0, 30).count);
  });

  test("multiplies by the Gram matrix, and finds norms of combinations, as the closed form does", () => {
    fc.assert(
      fc.property(unions, stations, fc.integer(), (support, {x, z}, seed) => {
        const continuum = continuumOf(verticalReadings(x, z, 0.1), support);
        const n = continuum.count;
        const gram = closedGram(continuum);
        const vectors = normalDeviates(seededRandom(seed), 2 * n);
        const gramTimes = gramProduct(continuum, 0);
        const scale = largest(gram) * n * largest(vectors);
        for (let t = 0; t < 2; ++t) {
          const own = vectors.subarray(t * n, (t + 1) * n);
          const product = gramTimes(own);
          let norm = 0;
          for (let i = 0; i < n; ++i) {
            let sum = 0;
            for (let j = 0; j < n; ++j) sum += gram[i * n + j] * vectors[t * n + j];
            absoluteClose(product[i] / scale, sum / scale, 3e-11, "as its entries");
            norm += sum * vectors[t * n + i];
          }
          const got = product.reduce((total, value, i) => total + value * own[i], 0);
          const size = scale * n * largest(vectors);
          absoluteClose(got / size, norm / size, 3e-11, "as its entries");
        }
      }),
      {seed: SEED, numRuns: 40},
    );
  });
});

describe("functionals", () => {
  const support: Support = [
    {from: -60, to: 40},
    {from: 55, to: 140},
  ];
  const continuum = continuumOf(
    verticalReadings(Float64Array.of(-30, 20, 90), Float64Array.of(12, 15, 9), 0.25),
    support,
  );

  /** ∫ over the parts by the midpoint rule on 1 cm: error (0.01/9)²/24 of the integrand at most, and of its ends. */
  const integral = (from: number, to: number, f: (t: number) => number): number => {
    const steps = Math.ceil((to - from) / 0.01);
    const step = (to - from) / steps;
    let sum = 0;
    for (let k = 0; k < steps; ++k) sum += f(from + (k + 0.5) * step);
    return sum * step;
  };

  test("a mean over a strip responds as the integral of the kernel over its part inside the support", () => {
    const strip = {from: 10, to: 80};
    const mean = meanOver(strip, support);
    const got = mean.respondInto(new Float64Array(3), continuum, 0, 3);
    for (let i = 0; i < 3; ++i) {
      const want = clip(strip, support).reduce(
        (sum, {from, to}) => sum + integral(from, to, (t) => poissonKernel(t - continuum.x[i], continuum.z[i])),
        0,
      );
      absoluteClose((got[i] * 0.25 * 70) / want, 1, 1e-6, "the midpoint rule of the check");
    }
    // 30 m and 25 m of 70 m lie on the support; q = 1/70 there.
    absoluteClose(mean.normSquared, 55 / 4900, 1e-17, "closed form");
  });

  test("a field at a point responds as the integral of two kernels", () => {
    const field = readAt(25, 6, support);
    const got = field.respondInto(new Float64Array(3), continuum, 0, 3);
    const inner = (x: number, z: number): number =>
      support.reduce(
        (sum, {from, to}) => sum + integral(from, to, (t) => poissonKernel(t - x, z) * poissonKernel(t - 25, 6)),
        0,
      );
    for (let i = 0; i < 3; ++i)
      absoluteClose((got[i] * 0.25) / inner(continuum.x[i], continuum.z[i]), 1, 1e-6, "the midpoint rule of the check");
    absoluteClose(field.normSquared / inner(25, 6), 1, 1e-6, "the midpoint rule of the check");
  });

  test("the field at a station's own place responds as that reading does", () => {
    const own = readAt(20, 15, support).respondInto(new Float64Array(3), continuum, 0, 3);
    const gram = closedGram(continuum);
    for (let i = 0; i < 3; ++i) absoluteClose((own[i] * 4) / gram[3 * i + 1], 1, 1e-14, "the same closed form");
  });

  test("f at a point of the boundary responds as the kernel, and has no norm", () => {
    const point = densityAt(33);
    expect(point.normSquared).toBe(Infinity);
    const got = point.respondInto(new Float64Array(2), continuum, 1, 3);
    for (const [i, x, z] of [
      [0, 20, 15],
      [1, 90, 9],
    ] as const) {
      const want = poissonKernel(33 - x, z) / 0.25;
      assertClose(got[i], want, {factor: 4, scale: want, because: "the same products in another order"});
    }
  });

  test("a mean off the support is zero for every source", () => {
    const off = meanOver({from: 41, to: 54}, support);
    expect(off.normSquared).toBe(0);
    expect([...off.respondInto(new Float64Array(3), continuum, 0, 3)]).toEqual([0, 0, 0]);
  });
});
