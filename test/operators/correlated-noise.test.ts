/** Correlated noise is whitened exactly, everywhere alike, and white noise is left as it was. */
import {describe, expect, test} from "vitest";
import {type Continuum, continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {unwhitened, whitened} from "../../lib/operators/correlated-noise.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {densityAt, type Functional, fieldAt, meanOver} from "../../lib/operators/functional.ts";
import {gramProduct} from "../../lib/operators/gram-product.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten} from "../../lib/operators/whitened.ts";
import type {Response} from "../../lib/potential/kernel.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {VERTICAL} from "../harness/interval-case.ts";

const ALONG: Response = {re: 0, im: 1, order: 0};
const SUPPORT = [{from: -40, to: 160}];
/** Uneven, from 0.2 to 13 m, and out of order as a file may have them. */
const X = Float64Array.of(100, 96, 83, 82.8, 0, 3, 9, 22, 35, 41, 44, 46, 60, 61.5, 72);
const Z = X.map((x) => 14 + 2 * Math.sin(x / 11));
const [SIGMA, LENGTH] = [0.3, 20];

const readingsWith = (noiseLength: number | undefined, sigmas = [SIGMA, 4 * SIGMA]): Readings =>
  readingsOf([
    {x: X, z: Z, response: VERTICAL, noise: sigmas[0]!, noiseLength},
    {x: X, z: Z, response: ALONG, noise: sigmas[1]!, noiseLength},
  ]);
const RED = readingsWith(LENGTH);
/** The same readings as they come: noise one and white. */
const RAW = readingsWith(0, [1, 1]);
const {count} = RED;

const unit = (i: number): Float64Array => Float64Array.from({length: count}, (_, k) => (k === i ? 1 : 0));
/** W, a column for each reading. */
const columnsOf = (readings: Readings): Float64Array[] =>
  Array.from({length: count}, (_, i) => whitened(unit(i), readings));

describe("the whitening", () => {
  const covariance = (i: number, j: number): number =>
    RED.channel[i] === RED.channel[j]
      ? (RED.channel[i] === 0 ? 1 : 16) * SIGMA ** 2 * Math.exp(-Math.abs(RED.x[i]! - RED.x[j]!) / LENGTH)
      : 0;

  test("turns the covariance of two channels over uneven stations into one: W C Wᵀ = 1", () => {
    const w = columnsOf(RED);
    for (let a = 0; a < count; ++a)
      for (let b = 0; b < count; ++b) {
        let sum = 0;
        for (let i = 0; i < count; ++i) for (let j = 0; j < count; ++j) sum += w[i]![a]! * covariance(i, j) * w[j]![b]!;
        absoluteClose(sum, a === b ? 1 : 0, 1e-13, "rounding, grown by 1/(1 − ρ²), here 50 at the most");
      }
  });

  test("is undone", () => {
    const values = X.map((x) => Math.cos(x));
    const both = Float64Array.of(...values, ...values.map((v) => 3 - v));
    unwhitened(whitened(both, RED), RED.x, RED).forEach((value, i) => {
      absoluteClose(value, both[i]!, 1e-14, "rounding");
    });
  });

  test("where neighbours owe each other nothing is that of white noise, to the bit", () => {
    const white = readingsWith(undefined);
    expect(white.correlated).toBe(false);
    expect(readingsWith(0)).toEqual(white);
    // 0.2 m over 1e-4 m: e^(−2000) is 0 in double precision.
    const {before: _, ...limit} = readingsWith(1e-4);
    expect(limit).toEqual({...limit, noise: white.noise, rho: white.rho, correlated: false});
  });

  test("tends to white noise as the length does to 0", () => {
    const near = whitened(RED.x, readingsWith(0.2 / 36));
    const white = whitened(RED.x, readingsWith(0));
    // e^(−36) = 2e-16 of a neighbour.
    near.forEach((value, i) => {
      absoluteClose(value, white[i]!, 1e-12 * Math.abs(white[i]!) + 1e-12, "e^(−36) of readings up to 100/0.3");
    });
  });
});

/** W times a list over the readings in the order of `continuum`. */
function times(continuum: Continuum, values: Float64Array): Float64Array {
  const raw = new Float64Array(count);
  continuum.place.forEach((i, k) => {
    raw[i] = values[k]!;
  });
  const white = whitened(raw, RED);
  return Float64Array.from(continuum.place, (i) => white[i]!);
}

describe.each([
  ["a flat boundary", undefined],
  ["a broken one", {x: Float64Array.of(-40, 50, 160), y: Float64Array.of(0, 3, -1)}],
] as const)("on %s, what was whitened is W times what was not", (_, boundary) => {
  const red = continuumOf(RED, SUPPORT, boundary);
  const raw = continuumOf(RAW, SUPPORT, boundary);
  const nodes = nodesFor(red, 0, count);
  const dense = nodeMatrix(red, nodes, 0, count);
  const column = (matrix: Float64Array, k: number): Float64Array =>
    Float64Array.from({length: count}, (_, i) => matrix[i * nodes.count + k]!);

  test("responses at the nodes, also of a window whose first reading leans on one outside", () => {
    const plain = nodeMatrix(raw, nodes, 0, count);
    for (let k = 0; k < nodes.count; k += 7) {
      const want = times(red, column(plain, k));
      column(dense, k).forEach((value, i) => {
        absoluteClose(value, want[i]!, 1e-14, "rounding");
      });
    }
    expect(nodeMatrix(red, nodes, 9, 21)).toEqual(dense.slice(9 * nodes.count, 21 * nodes.count));
    expect(red.before.slice(9, 21).some((k) => k >= 0 && k < 9)).toBe(true);
  });

  const functionals: readonly (readonly [string, (continuum: Continuum) => Functional])[] = [
    ["a mean", () => meanOver({from: 30, to: 70}, SUPPORT, boundary)],
    ["a point of the boundary", () => densityAt(48, boundary)],
    ["the field at a point", (continuum) => fieldAt(48, 6, ALONG, continuum)],
    // So near that shared nodes will not do.
    ["the field near the boundary", (continuum) => fieldAt(48, 3.5, VERTICAL, continuum)],
  ];
  test.each(functionals)("responses to %s, whole and in a window", (_, made) => {
    const want = times(red, made(raw).respondInto(new Float64Array(count), raw, 0, count));
    const got = made(red).respondInto(new Float64Array(count), red, 0, count);
    const size = Math.max(...want.map(Math.abs));
    got.forEach((value, i) => {
      absoluteClose(value / size, want[i]! / size, 1e-9, "nodes that reach 1e-12 of a response, and closed forms");
    });
    const window = made(red).respondInto(new Float64Array(count), red, 9, 21);
    for (let i = 9; i < 21; ++i) absoluteClose(window[i - 9]! / size, want[i]! / size, 1e-9, "as above");
  });

  test("the Gram matrix times vectors, and the norm of weighted responses", () => {
    const weights = Float64Array.from({length: count}, (_, i) => Math.sin(3 * i + 1));
    const sums = Float64Array.from({length: nodes.count}, (_, k) =>
      column(dense, k).reduce((sum, p, i) => sum + p * weights[i]!, 0),
    );
    const norm = sums.reduce((sum, s) => sum + s * s, 0);
    const gram = gramProduct(red, 0)(weights);
    const square = gram.reduce((sum, value, i) => sum + value * weights[i]!, 0);
    absoluteClose(square / norm, 1, 1e-12, "rounding of sums that cancel");
    const size = Math.max(...gram.map(Math.abs));
    gram.forEach((value, i) => {
      const want = sums.reduce((sum, s, k) => sum + s * dense[i * nodes.count + k]!, 0);
      absoluteClose(value / size, want / size, 1e-13, "rounding");
    });
  });
});

test("panels, data and regional are whitened alike", () => {
  const panels = panelsOn(SUPPORT, 4);
  const operator = forwardOperator(RED, panels);
  const none = regionalBasis(RED, -1);
  const values = RED.x.map((x) => Math.cos(x / 9));
  const system = whiten(operator, RED, values, none);
  expect(system.data).toEqual(whitened(values, RED));
  for (const j of [0, 20, panels.count - 1]) {
    const panel = Float64Array.from({length: count}, (_, i) => operator.matrix[i * panels.count + j]!);
    whitened(panel, RED).forEach((value, i) => {
      absoluteClose(system.matrix[i * panels.count + j]! * system.rootWidth[j]!, value, 1e-14, "rounding");
    });
  }
  // Any straight line in each channel is taken out of the data without a trace.
  const basis = regionalBasis(RED, 1);
  expect(basis.terms).toBe(4);
  const lifted = values.map((v, i) => v + (RED.channel[i] === 0 ? 5 - 0.1 * RED.x[i]! : 0.2 * RED.x[i]! - 40));
  const [bare, moved] = [values, lifted].map((v) => whiten(operator, RED, v, basis).data);
  bare!.forEach((value, i) => {
    absoluteClose(moved![i]!, value, 1e-12, "rounding of readings up to 100 over a noise of 0.04");
  });
});
