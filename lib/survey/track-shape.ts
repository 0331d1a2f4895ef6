/** How a track runs: its course as a few knots, how far it departs from straight, and where it goes on beyond its ends. */
import {byChainage} from "./by-chainage.ts";

/** Means of stretches of a line, chainage increasing. */
export interface TrackKnots {
  readonly chainage: Float64Array;
  readonly value: Float64Array;
  /** Of the straight line through the knots, by least squares. */
  readonly slope: number;
}

/** Stretches at most, and stations in each at least where there are enough: both keep jitter out (heuristic). */
const MOST_KNOTS = 64;
const STATIONS_A_KNOT = 8;

/** @param chainage m, any order, at least two different */
export function trackKnots(chainage: Float64Array, value: Float64Array): TrackKnots {
  const order = byChainage(chainage);
  const count = Math.max(2, Math.min(MOST_KNOTS, Math.floor(order.length / STATIONS_A_KNOT)));
  const from = chainage[order[0]!]!;
  const length = chainage[order.at(-1)!]! - from;
  const stations = new Float64Array(count);
  const places = new Float64Array(count);
  const values = new Float64Array(count);
  for (const i of order) {
    const k = Math.min(count - 1, Math.floor(((chainage[i]! - from) / length) * count));
    stations[k]! += 1;
    places[k]! += chainage[i]! - from;
    values[k]! += value[i]!;
  }
  const filled = [...stations.keys()].filter((k) => stations[k]! > 0);
  const knots = Float64Array.from(filled, (k) => from + places[k]! / stations[k]!);
  const means = Float64Array.from(filled, (k) => values[k]! / stations[k]!);
  return withEnds({chainage: knots, value: means, slope: slopeOf(knots, means)}, from, from + length);
}

/** Knots are means, so they stop short of the ends: the course of the outer two is drawn out to them. */
function withEnds(knots: TrackKnots, from: number, to: number): TrackKnots {
  const {chainage: x, value: y, slope} = knots;
  const last = x.length - 1;
  const outward = (a: number, b: number, at: number) => y[a]! + ((y[b]! - y[a]!) * (at - x[a]!)) / (x[b]! - x[a]!);
  const chainage = [...x];
  const value = [...y];
  if (from < x[0]!) {
    chainage.unshift(from);
    value.unshift(outward(0, 1, from));
  }
  if (to > x[last]!) {
    chainage.push(to);
    value.push(outward(last, last - 1, to));
  }
  return {chainage: Float64Array.from(chainage), value: Float64Array.from(value), slope};
}

function slopeOf(x: Float64Array, y: Float64Array): number {
  const meanX = x.reduce((sum, a) => sum + a, 0) / x.length;
  const meanY = y.reduce((sum, a) => sum + a, 0) / y.length;
  let xy = 0;
  let xx = 0;
  for (let i = 0; i < x.length; ++i) {
    xy += (x[i]! - meanX) * (y[i]! - meanY);
    xx += (x[i]! - meanX) ** 2;
  }
  return xx > 0 ? xy / xx : 0;
}

/** Straight between knots; beyond the first and last along the straight line's slope. */
export function valueAt(knots: TrackKnots, chainage: number): number {
  const {chainage: x, value: y, slope} = knots;
  const last = x.length - 1;
  if (chainage <= x[0]!) return y[0]! + slope * (chainage - x[0]!);
  if (chainage >= x[last]!) return y[last]! + slope * (chainage - x[last]!);
  let [low, high] = [0, last];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle]! <= chainage) low = middle;
    else high = middle;
  }
  return y[low]! + ((y[high]! - y[low]!) * (chainage - x[low]!)) / (x[high]! - x[low]!);
}

export interface Bend {
  /** How much longer the course is than its straight line, m: chainage is off by so much from the distance flown. */
  readonly excess: number;
  /** Greatest departure of the course from its straight line, m. */
  readonly departure: number;
}

/** @param offset knots of the offset from the axis */
export function bendOf(offset: TrackKnots): Bend {
  const {chainage: x, value: y, slope} = offset;
  const meanX = x.reduce((sum, a) => sum + a, 0) / x.length;
  const meanY = y.reduce((sum, a) => sum + a, 0) / y.length;
  const residual = y.map((value, i) => value - meanY - slope * (x[i]! - meanX));
  const stretch = Math.hypot(1, slope);
  let excess = 0;
  for (let i = 1; i < x.length; ++i) {
    const straight = (x[i]! - x[i - 1]!) * stretch;
    // Across the straight line of this slope a difference of offsets is shorter by the same factor.
    excess += Math.hypot(straight, (residual[i]! - residual[i - 1]!) / stretch) - straight;
  }
  const departure = residual.reduce((most, value) => Math.max(most, Math.abs(value) / stretch), 0);
  return {excess, departure};
}
