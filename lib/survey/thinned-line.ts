/** A line as a few block means, to be set against its neighbours, and its value at any chainage. */
import {byChainage} from "./by-chainage.ts";
import type {SurveyLine} from "./line.ts";
import {GAP} from "./line-figures.ts";
import {median} from "./order-statistics.ts";

export interface ThinnedLine {
  readonly id: string;
  readonly group: string;
  readonly direction: 1 | -1;
  readonly meanOffset: number;
  /** Increasing, m. */
  readonly chainage: Float64Array;
  /** SI, of the first channel. */
  readonly values: Float64Array;
  /** Median step of the block means, m. */
  readonly spacing: number;
}

export const MOST_POINTS = 2000;

export function thinned(line: SurveyLine): ThinnedLine {
  const {chainage, offset, count} = line.stations;
  const order = byChainage(chainage);
  const block = Math.ceil(count / MOST_POINTS);
  const points = Math.ceil(count / block);
  const places = new Float64Array(points);
  const values = new Float64Array(points);
  for (let p = 0; p < points; ++p) {
    const end = Math.min(count, (p + 1) * block);
    const inBlock = end - p * block;
    for (let i = p * block; i < end; ++i) {
      places[p]! += chainage[order[i]!]! / inBlock;
      values[p]! += line.channels[0]!.values[order[i]!]! / inBlock;
    }
  }
  const steps: number[] = [];
  for (let p = 1; p < points; ++p) if (places[p]! > places[p - 1]!) steps.push(places[p]! - places[p - 1]!);
  return {
    id: line.id,
    group: line.group,
    direction: line.direction,
    meanOffset: offset.reduce((sum, value) => sum + value, 0) / count,
    chainage: places,
    values,
    spacing: median(steps),
  };
}

/** Straight between the neighbouring points; NaN outside the line and in its gaps. */
export function thinnedValue(line: ThinnedLine, at: number): number {
  const {chainage, values, spacing} = line;
  const last = chainage.length - 1;
  if (!(at >= chainage[0]! && at <= chainage[last]!)) return NaN;
  let [low, high] = [0, last];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (chainage[middle]! <= at) low = middle;
    else high = middle;
  }
  const step = chainage[high]! - chainage[low]!;
  if (!(step > 0)) return values[low]!;
  if (step > GAP * spacing) return at === chainage[low]! ? values[low]! : at === chainage[high]! ? values[high]! : NaN;
  return values[low]! + ((values[high]! - values[low]!) * (at - chainage[low]!)) / step;
}
