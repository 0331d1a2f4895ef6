/**
 * Readings evenly spaced at one height, and the source zone cut into cells aligned with them: the operator is a few
 * Toeplitz matrices, one for each cell that falls on a spacing, and the inner products of readings are one more, less
 * what the source zone does not hold.
 */
import {toeplitzProduct} from "../numeric/fft.ts";
import {kernelOverPiece} from "../potential/kernel.ts";
import {logarithmOver, type Pole, pairOver} from "../potential/pair.ts";
import type {Panels} from "./panels.ts";
import type {Readings} from "./readings.ts";

/** Whitened by noise and root of width, as B of the normal equations: B acts on f √w. */
export interface LevelCells {
  readonly readings: number;
  readonly count: number;
  /** Standard deviation of the noise that whitens, SI. */
  readonly noise: number;
  readonly from: Float64Array;
  readonly to: Float64Array;
  /** B u; `target` (readings) must not alias `source` (cells). */
  applyInto(target: Float64Array, source: Float64Array): Float64Array;
  /** Bᵀ c. */
  adjointInto(target: Float64Array, data: Float64Array): Float64Array;
  /** Σ_j B_ij² of each reading. */
  readonly rowEnergies: Float64Array;
  /** The diagonals of BBᵀ if cells went on for ever, as many as were asked. */
  endless(diagonals: number): Float64Array;
}

/** Share of the spacing by which stations may stray and still count as even; and of the height. */
const EVEN = 1e-6;
const LEVEL = 1e-9;
/** Beyond this many heights the endless sums go over into integrals: cells there are thin against their distance. */
const FAR = 400;

export interface LevelLine {
  readonly x: number;
  readonly spacing: number;
  readonly height: number;
}

/** The spacing and height of readings of one kind that are level and even, their noise white; undefined for any others. */
export function levelLine({
  count,
  x,
  z,
  aRe,
  aIm,
  order,
  noise,
  correlated,
  stretches,
}: Readings): LevelLine | undefined {
  if (count < 3 || correlated || stretches !== undefined) return undefined;
  const spacing = (x[count - 1] - x[0]) / (count - 1);
  if (!(spacing > 0)) return undefined;
  for (let i = 0; i < count; ++i) {
    if (!(Math.abs(x[i] - x[0] - i * spacing) <= EVEN * spacing)) return undefined;
    if (!(Math.abs(z[i] - z[0]) <= LEVEL * z[0])) return undefined;
    if (aRe[i] !== aRe[0] || aIm[i] !== aIm[0] || order[i] !== order[0] || noise[i] !== noise[0]) return undefined;
  }
  return {x: x[0], spacing, height: z[0]};
}

/**
 * @param readings in increasing chainage
 * @returns undefined where they are not of one kind, level and even, with white noise, or the boundary is not flat
 */
export function levelCells(readings: Readings, panels: Panels): LevelCells | undefined {
  const line = panels.flat ? levelLine(readings) : undefined;
  if (line === undefined) return undefined;
  const {x, spacing, height} = line;
  const n = readings.count;
  const widest = panels.width.reduce((most, width) => Math.max(most, width), 0);
  const split = Math.max(1, Math.ceil(spacing / widest - 1e-9));
  const width = spacing / split;
  const [aRe, aIm, order] = [readings.aRe[0], readings.aIm[0], readings.order[0]];
  const over = (from: number, to: number): number =>
    kernelOverPiece(aRe, aIm, order, from, height, to, height) / (readings.noise[0] * Math.sqrt(to - from));

  // Cell g lies between edges g and g + 1, edge g at x − Δ/2 + g w.
  const origin = x - 0.5 * spacing;
  const edge = (g: number): number => origin + g * width;
  const aligned = (g: number, i: number): number => over(edge(g) - (x + i * spacing), edge(g + 1) - (x + i * spacing));
  const from: number[] = [];
  const to: number[] = [];
  const blocks: {readonly at: number; readonly first: number; readonly count: number}[] = [];
  const odd: {readonly at: number; readonly column: Float64Array}[] = [];
  const addOdd = (a: number, b: number): void => {
    // A sliver left by rounding is no cell.
    if (!(b - a > EVEN * width)) return;
    odd.push({
      at: from.length,
      column: Float64Array.from({length: n}, (_, i) => over(a - (x + i * spacing), b - (x + i * spacing))),
    });
    from.push(a);
    to.push(b);
  };
  for (const {interval} of panels.components) {
    const low = Math.ceil((interval.from - origin) / width - EVEN);
    const high = Math.floor((interval.to - origin) / width + EVEN);
    if (high <= low) {
      addOdd(interval.from, interval.to);
      continue;
    }
    addOdd(interval.from, edge(low));
    blocks.push({at: from.length, first: low, count: high - low});
    for (let g = low; g < high; ++g) {
      from.push(edge(g));
      to.push(edge(g + 1));
    }
    addOdd(edge(high), interval.to);
  }
  const count = from.length;

  const phases = blocks.flatMap(({at, first, count: cells}) =>
    Array.from({length: Math.min(split, cells)}, (_, phase) => {
      const columns = Math.ceil((cells - phase) / split);
      const start = first + phase;
      const row = Float64Array.from({length: columns}, (_, j) => aligned(start + j * split, 0));
      const column = Float64Array.from({length: n}, (_, i) => aligned(start, i));
      return {at: at + phase, columns, product: toeplitzProduct(column, row)};
    }),
  );
  const part = new Float64Array(phases.reduce((most, {columns}) => Math.max(most, columns), 0));
  const seen = new Float64Array(n);

  const rowEnergies = new Float64Array(n);
  for (const {first, count: cells} of blocks) {
    const squares = squareSums((g) => aligned(g, 0) ** 2, first - (n - 1) * split, first + cells);
    for (let i = 0; i < n; ++i) rowEnergies[i] += squares(first - i * split, first - i * split + cells);
  }
  for (const {column} of odd) for (let i = 0; i < n; ++i) rowEnergies[i] += column[i] ** 2;

  return {
    readings: n,
    count,
    noise: readings.noise[0],
    from: Float64Array.from(from),
    to: Float64Array.from(to),
    rowEnergies,
    applyInto(target, source) {
      target.fill(0);
      for (const {at, columns, product} of phases) {
        for (let j = 0; j < columns; ++j) part[j] = source[at + j * split];
        product.applyInto(seen, part.subarray(0, columns));
        for (let i = 0; i < n; ++i) target[i] += seen[i];
      }
      for (const {at, column} of odd) for (let i = 0; i < n; ++i) target[i] += column[i] * source[at];
      return target;
    },
    adjointInto(target, data) {
      for (const {at, columns, product} of phases) {
        product.applyTransposeInto(part, data);
        for (let j = 0; j < columns; ++j) target[at + j * split] = part[j];
      }
      for (const {at, column} of odd) {
        let sum = 0;
        for (let i = 0; i < n; ++i) sum += column[i] * data[i];
        target[at] = sum;
      }
      return target;
    },
    endless(diagonals) {
      // Reading 0 and reading d share cells from one far end to the other; beyond, an integral.
      const reach = Math.ceil((FAR * height) / width);
      const sequence = Float64Array.from({length: 2 * reach + split * diagonals}, (_, k) => aligned(k - reach, 0));
      const correlations = correlationsOf(sequence, split, diagonals);
      const [low, high] = [edge(-reach) - x, edge(reach + split * diagonals) - x];
      return correlations.map((sum, d) => sum + outside(line, readings, low + d * spacing, high, d));
    },
  };
}

/** Sums of a sequence over stretches, by sums over blocks of it: no difference of large sums. */
function squareSums(entry: (g: number) => number, from: number, to: number): (a: number, b: number) => number {
  const values = Float64Array.from({length: to - from}, (_, k) => entry(from + k));
  // Binary levels: level l holds sums over 2^l entries.
  const levels: Float64Array[] = [values];
  while (levels[levels.length - 1].length > 1) {
    const below = levels[levels.length - 1];
    levels.push(Float64Array.from({length: below.length >> 1}, (_, k) => below[2 * k] + below[2 * k + 1]));
  }
  return (a, b) => {
    let sum = 0;
    let [left, right] = [a - from, b - from];
    for (let l = 0; left < right; ++l, left >>= 1, right >>= 1) {
      if (left & 1) sum += levels[l][left++];
      if (right & 1) sum += levels[l][--right];
    }
    return sum;
  };
}

/** Σ_k s_k s_{k − d·stride}, d = 0 … count − 1: the product of a Toeplitz matrix of s with s itself, by transforms. */
function correlationsOf(sequence: Float64Array, stride: number, count: number): Float64Array {
  const column = new Float64Array((count - 1) * stride + 1);
  column[0] = sequence[0];
  const all = toeplitzProduct(column, sequence).applyInto(new Float64Array(column.length), sequence);
  return Float64Array.from({length: count}, (_, d) => all[d * stride]);
}

/** Σ over the cells left of `low` and right of `high` of what readings 0 and d share there, as an integral. */
function outside(
  {spacing, height}: LevelLine,
  {aRe, aIm, order, noise}: Readings,
  low: number,
  high: number,
  d: number,
): number {
  const share = (support: readonly {from: number; to: number}[]): number => {
    const pole = (x: number): Pole => {
      const [logRe, logIm, slopeRe, slopeIm] = logarithmOver(support, x, height);
      return {x, z: height, aRe: aRe[0], aIm: aIm[0], order: order[0], logRe, logIm, slopeRe, slopeIm};
    };
    return pairOver(support, pole(0), pole(d * spacing)) / (noise[0] * noise[0]);
  };
  const endless = 1e9 * height;
  return share([{from: -endless, to: low}]) + share([{from: high, to: endless}]);
}
