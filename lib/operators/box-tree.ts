/**
 * Boxes of chainage over readings and sources, each level's twice as long as those below, and how many terms their
 * expansions need. What two boxes that are no neighbours say to each other falls off by a known ratio a term, the
 * radius of one over the distance to the edge of the other: lengths and terms are chosen by that bound.
 */
import type {Readings} from "./readings.ts";

/** Straight pieces of the boundary in increasing chainage, m: panels, or points of no length. */
export interface Sources {
  readonly count: number;
  readonly from: Float64Array;
  readonly to: Float64Array;
  readonly centre: Float64Array;
  readonly yFrom: Float64Array;
  readonly yTo: Float64Array;
}

interface BoxLevel {
  readonly count: number;
  /** Length of a box, m. */
  readonly length: number;
  /** Middles, x and z of each box: of its sources, and of its readings. */
  readonly sources: Float64Array;
  readonly targets: Float64Array;
  /** Whether a box holds any. */
  readonly holds: {readonly sources: Uint8Array; readonly targets: Uint8Array};
  /** Boxes that speak to each other at this level: no neighbours, but the boxes above them are. */
  readonly pairSource: Int32Array;
  readonly pairTarget: Int32Array;
}

export interface BoxTree {
  /** Leaves first. */
  readonly levels: readonly BoxLevel[];
  readonly leaves: number;
  readonly terms: number;
  /** Readings in the order of the leaves, `readingFrom[b] … readingFrom[b + 1] − 1` those of leaf b. */
  readonly readingAt: Int32Array;
  readonly readingFrom: Int32Array;
  /** Sources `sourceFrom[b] … sourceFrom[b + 1] − 1` are those of leaf b. */
  readonly sourceFrom: Int32Array;
}

/** A ratio above this needs too many terms; the boxes are made longer instead, up to so many times. */
const STEEPEST = 0.45;
const MOST_DOUBLINGS = 40;

/**
 * @param leaf length of the smallest boxes, m; made longer where expansions need it
 * @param leftOut what an expansion may leave out, over the kernel at the distance of the boxes
 */
export function boxTree(readings: Readings, sources: Sources, leaf: number, leftOut: number): BoxTree {
  const low = Math.min(least(readings.x), sources.from[0]);
  const high = Math.max(most(readings.x), sources.to[sources.count - 1]);
  // No more leaves than there is to put in them.
  let length = Math.max(leaf, (high - low) / (readings.count + sources.count));
  for (let tries = 0; ; ++tries, length *= 2) {
    const tree = treeOf(readings, sources, low, high, length);
    const ratio = steepest(tree);
    if (ratio <= STEEPEST || tree.levels.every(({pairSource}) => pairSource.length === 0) || tries === MOST_DOUBLINGS)
      return {...tree, terms: termsFor(ratio, leftOut)};
  }
}

/** The remainder of a geometric series. */
const termsFor = (ratio: number, leftOut: number): number =>
  ratio > 0 ? Math.max(2, Math.ceil(Math.log(leftOut * (1 - ratio)) / Math.log(ratio))) : 2;

interface Extent {
  readonly xLow: Float64Array;
  readonly xHigh: Float64Array;
  readonly zLow: Float64Array;
  readonly zHigh: Float64Array;
}

const extent = (count: number): Extent => ({
  xLow: new Float64Array(count).fill(Infinity),
  xHigh: new Float64Array(count).fill(-Infinity),
  zLow: new Float64Array(count).fill(Infinity),
  zHigh: new Float64Array(count).fill(-Infinity),
});

function include({xLow, xHigh, zLow, zHigh}: Extent, b: number, x: number, z: number): void {
  xLow[b] = Math.min(xLow[b], x);
  xHigh[b] = Math.max(xHigh[b], x);
  zLow[b] = Math.min(zLow[b], z);
  zHigh[b] = Math.max(zHigh[b], z);
}

/** Of boxes twice as long. */
function above(below: Extent): Extent {
  const result = extent((below.xLow.length + 1) >> 1);
  for (let b = 0; b < below.xLow.length; ++b)
    if (below.xLow[b] <= below.xHigh[b]) {
      include(result, b >> 1, below.xLow[b], below.zLow[b]);
      include(result, b >> 1, below.xHigh[b], below.zHigh[b]);
    }
  return result;
}

interface MeasuredLevel extends BoxLevel {
  readonly sourceRadius: Float64Array;
  readonly targetRadius: Float64Array;
}

interface MeasuredTree extends Omit<BoxTree, "terms"> {
  readonly levels: readonly MeasuredLevel[];
}

function treeOf(readings: Readings, pieces: Sources, low: number, high: number, length: number): MeasuredTree {
  const leaves = Math.max(1, Math.ceil((high - low) / length));
  const leafOf = (x: number): number => Math.min(leaves - 1, Math.max(0, Math.floor((x - low) / length)));
  let sources = extent(leaves);
  let targets = extent(leaves);
  const sourceFrom = new Int32Array(leaves + 1);
  for (let j = 0; j < pieces.count; ++j) {
    const b = leafOf(pieces.centre[j]);
    ++sourceFrom[b + 1];
    include(sources, b, pieces.from[j], pieces.yFrom[j]);
    include(sources, b, pieces.to[j], pieces.yTo[j]);
  }
  const readingFrom = new Int32Array(leaves + 1);
  for (let i = 0; i < readings.count; ++i) {
    const b = leafOf(readings.x[i]);
    ++readingFrom[b + 1];
    include(targets, b, readings.x[i], readings.z[i]);
  }
  for (let b = 0; b < leaves; ++b) {
    sourceFrom[b + 1] += sourceFrom[b];
    readingFrom[b + 1] += readingFrom[b];
  }
  const readingAt = new Int32Array(readings.count);
  const next = readingFrom.slice();
  for (let i = 0; i < readings.count; ++i) readingAt[next[leafOf(readings.x[i])]++] = i;

  const levels: MeasuredLevel[] = [];
  for (let count = leaves, size = length; ; count = (count + 1) >> 1, size *= 2) {
    levels.push(levelOf(sources, targets, count, size));
    if (count <= 3) return {levels, leaves, sourceFrom, readingFrom, readingAt};
    sources = above(sources);
    targets = above(targets);
  }
}

function levelOf(sources: Extent, targets: Extent, count: number, length: number): MeasuredLevel {
  const pairSource: number[] = [];
  const pairTarget: number[] = [];
  const holds = {sources: holding(sources), targets: holding(targets)};
  for (let t = 0; t < count; ++t) {
    if (!holds.targets[t]) continue;
    const first = 2 * ((t >> 1) - 1);
    for (let s = Math.max(0, first); s < Math.min(count, first + 6); ++s)
      if (Math.abs(s - t) > 1 && holds.sources[s]) {
        pairSource.push(s);
        pairTarget.push(t);
      }
  }
  const source = middles(sources);
  const target = middles(targets);
  return {
    count,
    length,
    holds,
    sources: source.middle,
    targets: target.middle,
    sourceRadius: source.radius,
    targetRadius: target.radius,
    pairSource: Int32Array.from(pairSource),
    pairTarget: Int32Array.from(pairTarget),
  };
}

const holding = ({xLow, xHigh}: Extent): Uint8Array => Uint8Array.from(xLow, (low, b) => (low <= xHigh[b] ? 1 : 0));

function middles({xLow, xHigh, zLow, zHigh}: Extent): {readonly middle: Float64Array; readonly radius: Float64Array} {
  const middle = new Float64Array(2 * xLow.length);
  const radius = new Float64Array(xLow.length);
  for (let b = 0; b < xLow.length; ++b) {
    if (!(xLow[b] <= xHigh[b])) continue;
    middle[2 * b] = 0.5 * (xLow[b] + xHigh[b]);
    middle[2 * b + 1] = 0.5 * (zLow[b] + zHigh[b]);
    radius[b] = 0.5 * Math.hypot(xHigh[b] - xLow[b], zHigh[b] - zLow[b]);
  }
  return {middle, radius};
}

/** The largest ratio by which terms fall off, over all pairs of boxes. */
function steepest({levels}: MeasuredTree): number {
  let worst = 0;
  for (const {pairSource, pairTarget, sources, targets, sourceRadius, targetRadius} of levels)
    for (let pair = 0; pair < pairSource.length; ++pair) {
      const s = pairSource[pair];
      const t = pairTarget[pair];
      const far = Math.hypot(targets[2 * t] - sources[2 * s], targets[2 * t + 1] - sources[2 * s + 1]);
      const left = Math.min(far - targetRadius[t], far - sourceRadius[s]);
      const ratio =
        left > 0 ? Math.max(sourceRadius[s] / (far - targetRadius[t]), targetRadius[t] / (far - sourceRadius[s])) : 1;
      worst = Math.max(worst, ratio);
    }
  return worst;
}

const least = (values: Float64Array): number => values.reduce((low, value) => Math.min(low, value), Infinity);
const most = (values: Float64Array): number => values.reduce((high, value) => Math.max(high, value), -Infinity);
