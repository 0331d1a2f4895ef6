/** What the differences at crossings come to, all together and line by line. SI. */
import {median} from "./order-statistics.ts";

export interface MisTieFigures {
  /** Differences that have a value. */
  readonly count: number;
  readonly mean: number;
  readonly rms: number;
  /** Median of their sizes. */
  readonly medianSize: number;
  /** 1.4826 times the median distance from their median: the standard deviation, were they normal; outliers do not move it. */
  readonly robustDeviation: number;
  readonly median: number;
  /** Of their sizes. */
  readonly largest: number;
}

/** 1/Φ⁻¹(¾). */
const NORMAL = 1.482602218505602;
/** Robust standard deviations beyond which a difference is an outlier: 1 in 1.7 million were they normal (heuristic). */
const OUTLIER = 5;
/** Differences below which a spread tells nothing of outliers (heuristic). */
const LEAST_FOR_OUTLIERS = 8;

/** @param differences NaN where there is none; figures are NaN where there are none at all */
export function misTieFigures(differences: Float64Array): MisTieFigures {
  const values = differences.filter((value) => !Number.isNaN(value));
  let sum = 0;
  let squares = 0;
  let largest = values.length === 0 ? Number.NaN : 0;
  for (const value of values) {
    sum += value;
    squares += value * value;
    largest = Math.max(largest, Math.abs(value));
  }
  const middle = median(values);
  return {
    count: values.length,
    mean: sum / values.length,
    rms: Math.sqrt(squares / values.length),
    medianSize: median(values.map(Math.abs)),
    robustDeviation: NORMAL * median(values.map((value) => Math.abs(value - middle))),
    median: middle,
    largest,
  };
}

/** Numbers of the differences that lie far from all others, the farthest first. */
export function outliersOf(differences: Float64Array, figures: MisTieFigures): readonly number[] {
  if (figures.count < LEAST_FOR_OUTLIERS) return [];
  const limit = OUTLIER * figures.robustDeviation;
  const away = (i: number): number => Math.abs(differences[i]! - figures.median);
  const found: number[] = [];
  for (let i = 0; i < differences.length; ++i) if (away(i) > limit) found.push(i);
  return found.sort((i, j) => away(j) - away(i) || i - j);
}

/** The differences of one line, this line less the other, of each crossing it has. */
export interface LineDifferences {
  /** Crossings, by number. */
  readonly crossings: Uint32Array;
  /** +1 where the line is the first of the two, else −1. */
  readonly sign: Int8Array;
}

/** @param lines how many there are; @param first, second lines of each crossing */
export function byLine(lines: number, first: Uint32Array, second: Uint32Array): readonly LineDifferences[] {
  const counts = new Uint32Array(lines);
  for (const side of [first, second]) for (const line of side) ++counts[line]!;
  const made = Array.from(counts, (count) => ({crossings: new Uint32Array(count), sign: new Int8Array(count)}));
  counts.fill(0);
  for (let i = 0; i < first.length; ++i)
    for (const [line, sign] of [
      [first[i]!, 1],
      [second[i]!, -1],
    ] as const) {
      const place = counts[line]!++;
      made[line]!.crossings[place] = i;
      made[line]!.sign[place] = sign;
    }
  return made;
}

/** @param differences first less second, of every crossing; NaN where there is none */
export const ofLine = ({crossings, sign}: LineDifferences, differences: Float64Array): Float64Array =>
  Float64Array.from(crossings, (i, k) => sign[k]! * differences[i]!);
