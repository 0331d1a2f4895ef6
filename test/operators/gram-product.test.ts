/** G c without a matrix: against the matrix of responses at the same nodes, and in what an interval makes of it. */
import {expect, test} from "vitest";
import {matVecInto, transposedMatVecInto} from "../../lib/numeric/matmul.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {type Continuum, continuumOf, nodeMatrix, nodesFor} from "../../lib/operators/continuum.ts";
import {meanOver} from "../../lib/operators/functional.ts";
import {gramProduct} from "../../lib/operators/gram-product.ts";
import {withKnownMeans} from "../../lib/operators/known-means.ts";
import {type ChannelReadings, readingsOf} from "../../lib/operators/readings.ts";
import {FIELD, GRADIENT, TOTAL_FIELD, unevenLine} from "../harness/uneven-line.ts";

const SUPPORT = [
  {from: -60, to: 900},
  {from: 1100, to: 1900},
];
const relief = {
  x: Float64Array.from({length: 60}, (_, k) => 40 * k - 200),
  y: Float64Array.from({length: 60}, (_, k) => -6 + 4 * Math.sin(k / 3)),
};

const line = (stations: number, options: Partial<Parameters<typeof unevenLine>[0]> = {}) =>
  unevenLine({stations, sway: 0.3, ...options}).readings;

/** A mean that was read beside two channels. */
function withMean(): Continuum {
  const {x, z} = line(200);
  const channels: ChannelReadings[] = [
    {x, z, response: FIELD, noise: 0.05},
    {x, z, response: GRADIENT, noise: 0.005},
    {x: Float64Array.of(400), z: new Float64Array(1), response: FIELD, noise: 0.01, stretch: {from: 350, to: 480}},
  ];
  return continuumOf(readingsOf(channels), SUPPORT);
}

const CASES: Record<string, () => Continuum> = {
  "one channel": () => continuumOf(line(380), SUPPORT),
  "field and gradient": () => continuumOf(line(200, {responses: [FIELD, GRADIENT]}), SUPPORT),
  "total field over relief": () => continuumOf(line(380, {responses: [TOTAL_FIELD]}), SUPPORT, relief),
  "correlated noise": () => continuumOf(line(380, {noiseLength: 12}), SUPPORT),
  "a mean among the readings": withMean,
  "known means": () => withKnownMeans(withMean(), [{from: 1200, to: 1260}]),
  "one reading": () => continuumOf(line(1), SUPPORT),
};

test.each(Object.entries(CASES))("%s: as the responses at all nodes", (_, made) => {
  const continuum = made();
  const {count} = continuum;
  const nodes = nodesFor(continuum, 0, count);
  const matrix = nodeMatrix(continuum, nodes, 0, count);
  const vector = normalDeviates(seededRandom(8), count);
  const timesGram = (of: Float64Array, by: Float64Array): Float64Array =>
    matVecInto(
      new Float64Array(count),
      by,
      transposedMatVecInto(new Float64Array(nodes.count), by, of, count, nodes.count),
      count,
      nodes.count,
    );
  const expected = timesGram(vector, matrix);
  // What rounding and expansions may change is a share of |G| |c|, entry by entry.
  const size = timesGram(vector.map(Math.abs), matrix.map(Math.abs));
  const found = gramProduct(continuum, 0)(vector);
  for (let i = 0; i < count; ++i) expect(Math.abs(found[i]! - expected[i]!)).toBeLessThan(2e-13 * size[i]!);
});

test("the worst bias of an estimate is the same by expansions and by all kernels", () => {
  const continuum = continuumOf(line(380), SUPPORT);
  const {count} = continuum;
  const nodes = nodesFor(continuum, 0, count);
  const matrix = nodeMatrix(continuum, nodes, 0, count);
  const mean = meanOver({from: 300, to: 340}, SUPPORT);
  const seen = mean.respondInto(new Float64Array(count), continuum, 0, count);
  const gram = gramProduct(continuum, 0);
  // The weights of a mean by steps of steepest descent: large where neighbours are set off against each other.
  let weights = new Float64Array(count);
  for (let step = 0; step < 200; ++step) {
    const image = gram(weights);
    weights = weights.map((c, i) => c + 0.005 * (seen[i]! - image[i]! - 0.01 * c));
  }
  const bias = (product: Float64Array): number =>
    weights.reduce((sum, c, i) => sum + c * (product[i]! - 2 * seen[i]!), mean.normSquared);
  const sums = transposedMatVecInto(new Float64Array(nodes.count), matrix, weights, count, nodes.count);
  const exact = bias(matVecInto(new Float64Array(count), matrix, sums, count, nodes.count));
  // Of the half of ‖q‖² that is left; intervals are to be right to 1e-9.
  expect(exact).toBeLessThan(0.9 * mean.normSquared);
  expect(Math.abs(bias(gram(weights)) / exact - 1)).toBeLessThan(1e-11);
});
