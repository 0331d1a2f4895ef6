/** A boundary that rises and falls: broken lines, panels on them, and readings above them. */
import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {levelRowInto} from "../../lib/continuation/field-on-level.ts";
import {type BoundaryLine, boundaryAt, breaksWithin} from "../../lib/geometry/boundary-line.ts";
import type {Support} from "../../lib/geometry/interval.ts";
import {gaussLegendre} from "../../lib/numeric/quadrature.ts";
import {continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {applyInto, forwardOperator} from "../../lib/operators/forward.ts";
import {type Functional, fieldAt, meanOver} from "../../lib/operators/functional.ts";
import {boundaryOfPanels, panelsOn} from "../../lib/operators/panels.ts";
import {readingsOf, verticalReadings} from "../../lib/operators/readings.ts";
import {amplitudeIm, amplitudeRe, kernelAt, type Response} from "../../lib/potential/kernel.ts";
import {pairOver} from "../../lib/potential/pair.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {VERTICAL} from "../harness/interval-case.ts";
import {metres} from "../harness/supports.ts";
import {evenly} from "../harness/synthetic-line.ts";

const SEED = 33;
const RADIAN = Math.PI / 180;
const line = (x: readonly number[], y: readonly number[]): BoundaryLine => ({
  x: Float64Array.from(x),
  y: Float64Array.from(y),
});
const RESPONSES: readonly Response[] = [VERTICAL, {re: 0, im: 1, order: 0}, {re: 0.6, im: -0.7, order: 1}];

describe("a broken line", () => {
  const ridge = line([0, 10, 30], [2, 8, 4]);

  test("is straight between its points and level beyond its ends; none at all is zero", () => {
    expect([-5, 0, 5, 10, 20, 30, 99].map((x) => boundaryAt(ridge, x))).toEqual([2, 2, 5, 8, 6, 4, 4]);
    expect(boundaryAt(undefined, 3)).toBe(0);
    expect(boundaryAt(line([4], [7]), -1)).toBe(7);
    expect(boundaryAt(line([4], [7]), 9)).toBe(7);
  });

  test("breaks at its points strictly inside", () => {
    expect(breaksWithin(ridge, -1, 40)).toEqual([0, 10, 30]);
    expect(breaksWithin(ridge, 0, 30)).toEqual([10]);
    expect(breaksWithin(ridge, 11, 29)).toEqual([]);
    expect(breaksWithin(undefined, 0, 30)).toEqual([]);
  });

  test("is what its panels make of it, to the bit at their ends", () => {
    const panels = panelsOn([{from: -4, to: 36}], 5, ridge);
    const broken = boundaryOfPanels(panels)!;
    for (let j = 0; j < panels.count; ++j) {
      expect(panels.yFrom[j]).toBe(boundaryAt(ridge, panels.from[j]));
      expect(boundaryAt(broken, panels.from[j])).toBe(panels.yFrom[j]);
      expect(boundaryAt(broken, panels.to[j])).toBe(panels.yTo[j]);
      absoluteClose(
        boundaryAt(broken, panels.centre[j]),
        0.5 * (panels.yFrom[j] + panels.yTo[j]),
        1e-14,
        "rounding: panels are straight",
      );
    }
    expect(boundaryOfPanels(panelsOn([{from: -4, to: 36}], 5))).toBeUndefined();
  });

  test("is itself off the panels, where levels are asked for too", () => {
    const rough = line([0, 7, 10, 20, 26, 30, 45, 60], [2, 9, 1, 8, 3, 4, 12, 0]);
    const panels = panelsOn(
      [
        {from: 8, to: 18},
        {from: 30, to: 40},
      ],
      5,
      rough,
    );
    const broken = boundaryOfPanels(panels)!;
    expect([...broken.x]).toEqual([0, 7, 8, 13, 18, 20, 26, 30, 35, 40, 45, 60]);
    for (const x of [-3, 0, 5, 7, 19, 20, 23, 26, 29, 41, 45, 50, 60, 99])
      expect(boundaryAt(broken, x)).toBeCloseTo(boundaryAt(rough, x), 12);
    // On a panel it is the panel.
    expect(boundaryAt(broken, 10)).not.toBeCloseTo(1, 1);
  });
});

describe("a plane that rises by 20°", () => {
  const slope = Math.tan(20 * RADIAN);
  const FAR = 1e6;
  const plane = line([-FAR, FAR], [-FAR * slope, FAR * slope]);
  const support: Support = [{from: -FAR, to: FAR}];

  test("of density f has the field f cos²θ = 0.883 f over it, at any height and down to it", () => {
    // The logarithm turns by π over the whole plane; what lies beyond 1,000 km takes 2 × 100/1e6 of it away at most.
    const panels = panelsOn(support, 1e4, plane);
    const row = new Float64Array(panels.count);
    const read = (x: number, above: number): number =>
      levelRowInto(row, 0, panels, x, x * slope, above, VERTICAL).reduce((sum, entry) => sum + entry, 0);
    for (const above of [100, 3, 0.01, 0])
      for (const x of [0, 77, -1234]) absoluteClose(read(x, above), Math.cos(20 * RADIAN) ** 2, 1e-3, "the ends");
    absoluteClose(Math.cos(20 * RADIAN) ** 2, 0.883, 5e-4, "digits of the figure");
    // At the middle the ends cancel but for the height over their distance.
    absoluteClose(read(0, 3), Math.cos(20 * RADIAN) ** 2, 1e-5, "3/1e6");
    absoluteClose(read(0, 0), Math.cos(20 * RADIAN) ** 2, 1e-9, "nothing but rounding");
  });

  test("reads so by the forward operator too, and 0.883 of what the operator over flat ground reads", () => {
    const readings = verticalReadings(Float64Array.of(0), Float64Array.of(30), 1);
    const ones = (panels: ReturnType<typeof panelsOn>) => new Float64Array(panels.count).fill(1);
    const [tilted, flat] = [plane, undefined].map((boundary) => {
      const panels = panelsOn(support, 5e3, boundary);
      return applyInto(new Float64Array(1), forwardOperator(readings, panels), ones(panels))[0];
    });
    absoluteClose(tilted / flat, Math.cos(20 * RADIAN) ** 2, 1e-4, "30/1e6 at either end");
  });
});

/** A hill 12 m high and 25 m wide, as a fine broken line. */
const hillAt = (x: number): number => 12 * Math.exp(-((x / 25) ** 2));
const HILL: BoundaryLine = {x: evenly(-200, 200, 801), y: evenly(-200, 200, 801).map(hillAt)};

describe("readings above a hill", () => {
  const x = evenly(-100, 100, 21);
  const z = x.map((t) => hillAt(t) + 6 + Math.sin(t));
  const panels = panelsOn([{from: -150, to: 150}], 1.5, HILL);

  test.each(RESPONSES)("agree with quadrature along the ground: $re + i $im, order $order", (response) => {
    const readings = readingsOf([{x, z, response, noise: 1}]);
    const {matrix} = forwardOperator(readings, panels);
    const rule = gaussLegendre(16);
    for (let i = 0; i < x.length; ++i)
      for (let j = 0; j < panels.count; ++j) {
        let want = 0;
        const half = 0.5 * panels.width[j];
        for (let k = 0; k < 16; ++k) {
          const share = 0.5 * (1 + rule.nodes[k]);
          const y = panels.yFrom[j] + share * (panels.yTo[j] - panels.yFrom[j]);
          want +=
            half *
            rule.weights[k] *
            kernelAt(
              amplitudeRe(response),
              amplitudeIm(response),
              response.order,
              panels.from[j] + share * panels.width[j] - x[i],
              z[i] - y,
            );
        }
        absoluteClose(matrix[i * panels.count + j], want, 1e-14, "16 nodes on a panel a quarter of the height wide");
      }
  });

  test("refuse a sensor under the hill, by its place", () => {
    const buried = verticalReadings(Float64Array.of(0, 60), Float64Array.of(11, 5), 1);
    expect(() => forwardOperator(buried, panels)).toThrowError(
      expect.objectContaining({code: "potential/station-below-boundary", exitStatus: 3}),
    );
  });
});

describe("the continuum over uneven ground", () => {
  const support: Support = [
    {from: -150, to: -10},
    {from: 4, to: 150},
  ];
  const x = evenly(-120, 120, 17);
  const zero = line([-160, -31, 7, 12, 140], [0, 0, 0, 0, 0]);
  const channels = (z: Float64Array) => readingsOf(RESPONSES.map((response) => ({x, z, response, noise: 0.5})));

  test("answers by nodes what closed forms answer, where the broken line has height zero", () => {
    const z = x.map((t) => 9 + 3 * Math.sin(t));
    const flat = continuumOf(channels(z), support);
    const broken = continuumOf(channels(z), support, zero);
    const count = flat.count;
    const size = (i: number, j: number): number =>
      Math.sqrt(pairOver(support, flat.poles[i], flat.poles[i]) * pairOver(support, flat.poles[j], flat.poles[j]));
    const nodes = nodesFor(broken, 0, count);
    const matrix = nodeMatrix(broken, nodes, 0, count);
    for (let i = 0; i < count; ++i)
      for (let j = 0; j <= i; ++j) {
        let sum = 0;
        for (let k = 0; k < nodes.count; ++k) sum += matrix[i * nodes.count + k] * matrix[j * nodes.count + k];
        const want = pairOver(support, flat.poles[i], flat.poles[j]) / 0.25;
        const limit = flat.order[i] + flat.order[j] === 2 ? 1e-8 : 1e-9;
        absoluteClose(sum, want, limit * (size(i, j) / 0.25), "16 nodes on an element; poles of order 2, 3 or 4");
      }
    const asked: [Functional, Functional][] = [
      // Low over long elements by nodes of its own, high by those of the readings.
      ...[4, 60].flatMap((height) =>
        RESPONSES.map((response): [Functional, Functional] => [
          fieldAt(3, height, response, flat),
          fieldAt(3, height, response, broken),
        ]),
      ),
      [meanOver({from: -40, to: 30}, support), meanOver({from: -40, to: 30}, support, zero)],
    ];
    for (const [closed, byNodes] of asked) {
      absoluteClose(byNodes.normSquared / closed.normSquared, 1, 1e-9, "16 nodes on an element");
      const other = byNodes.respondInto(new Float64Array(count), broken, 0, count);
      const seen = closed.respondInto(new Float64Array(count), flat, 0, count);
      for (let i = 0; i < count; ++i) {
        const scale = Math.sqrt(closed.normSquared * (pairOver(support, flat.poles[i], flat.poles[i]) / 0.25));
        absoluteClose(other[i], seen[i], 1e-9 * scale, "16 nodes on an element");
      }
    }
  });

  test("integrates products of readings over a hill as a fine quadrature does", () => {
    const z = x.map((t) => hillAt(t) + 7 + 2 * Math.sin(t));
    const continuum = continuumOf(channels(z), support, HILL);
    const {count} = continuum;
    const nodes = nodesFor(continuum, 0, count);
    const matrix = nodeMatrix(continuum, nodes, 0, count);
    const rule = gaussLegendre(8);
    const fine = new Float64Array(count * count);
    const row = new Float64Array(count);
    // Eight nodes on every half metre, where the broken line breaks.
    for (const {from, to} of support)
      for (let left = from; left < to - 1e-9; left += 0.5)
        for (let k = 0; k < 8; ++k) {
          const t = left + 0.25 * (1 + rule.nodes[k]);
          const weight = 0.25 * rule.weights[k];
          for (let i = 0; i < count; ++i)
            row[i] =
              kernelAt(
                continuum.aRe[i],
                continuum.aIm[i],
                continuum.order[i],
                t - continuum.x[i],
                continuum.z[i] - boundaryAt(HILL, t),
              ) / 0.5;
          for (let i = 0; i < count; ++i) for (let j = 0; j <= i; ++j) fine[i * count + j] += weight * row[i] * row[j];
        }
    for (let i = 0; i < count; ++i)
      for (let j = 0; j <= i; ++j) {
        let sum = 0;
        for (let k = 0; k < nodes.count; ++k) sum += matrix[i * nodes.count + k] * matrix[j * nodes.count + k];
        const size = Math.sqrt(fine[i * count + i] * fine[j * count + j]);
        absoluteClose(
          sum / size,
          fine[i * count + j] / size,
          1e-11,
          "elements end where the line breaks, half a metre",
        );
      }
  });

  test("finds its nodes on a cliff under a low sensor", () => {
    // 40 m up within 2 cm, the sensor a metre above its foot: elements shrink until they keep their distance.
    const cliff = line([-50, 0, 0.02, 50], [0, 0, 40, 40]);
    const continuum = continuumOf(
      verticalReadings(Float64Array.of(-3, 0), Float64Array.of(1, 1), 1),
      [{from: -50, to: 50}],
      cliff,
    );
    const nodes = nodesFor(continuum, 0, 2);
    expect(nodes.count).toBeLessThan(2000);
    const covered = nodes.rootWeight.reduce((sum, w) => sum + w * w, 0);
    absoluteClose(covered, 100, 1e-10, "weights add up to the length");
  });

  test("a mean over a strip on a slope is the integral of the kernel along it", () => {
    fc.assert(
      fc.property(metres(-1.2, 1.2), metres(2, 30), metres(-60, 60), (slope, above, at) => {
        const rising = line([-100, 100], [-100 * slope, 100 * slope]);
        const sensor = Float64Array.of(at);
        const readings = readingsOf(
          RESPONSES.map((response) => ({x: sensor, z: Float64Array.of(at * slope + above), response, noise: 1})),
        );
        const whole: Support = [{from: -80, to: 80}];
        const continuum = continuumOf(readings, whole, rising);
        const got = meanOver({from: -20, to: 25}, whole, rising).respondInto(new Float64Array(3), continuum, 0, 3);
        const rule = gaussLegendre(16);
        for (let i = 0; i < 3; ++i) {
          let want = 0;
          let size = 0;
          for (let left = -20; left < 25; left += 0.5)
            for (let k = 0; k < 16; ++k) {
              const t = left + 0.25 * (1 + rule.nodes[k]);
              const value = kernelAt(
                continuum.aRe[i],
                continuum.aIm[i],
                continuum.order[i],
                t - at,
                continuum.z[i] - t * slope,
              );
              want += (0.25 * rule.weights[k] * value) / 45;
              size += (0.25 * rule.weights[k] * Math.abs(value)) / 45;
            }
          assertClose(got[i], want, {factor: 1e4, scale: size, because: "90 elements, and chainage over the distance"});
        }
      }),
      {seed: SEED, numRuns: 60},
    );
  });
});
