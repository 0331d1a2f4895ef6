/**
 * Values to colours: cividis, perceptually uniform and read alike with red-green blindness
 * (Nuñez, Anderton & Renslow, PLoS ONE 13 (2018) e0199239), on a range that leaves out the outermost values.
 */
import {scaleLinear} from "d3-scale";
import {interpolateCividis} from "d3-scale-chromatic";
import {tickFormat} from "../number-text.ts";
import {boxMark, lineMark, px, textMark} from "./svg.ts";

export interface Ramp {
  readonly low: number;
  readonly high: number;
  /** Number of the colour class, 0 … CLASSES − 1. */
  classOf(value: number): number;
}

const CLASSES = 32;

export const classColour = (index: number): string => interpolateCividis((index + 0.5) / CLASSES);

/** Share of the values beyond either end of the range: a spike must not take all the colours. */
const TAIL = 0.01;

/** @param values finite entries count; a constant gets a range around it */
export function rampOver(values: Float64Array | readonly number[]): Ramp {
  // Typed arrays sort by value, and several times as quickly.
  const sorted = new Float64Array(values).filter(Number.isFinite).sort();
  let low = sorted.length > 0 ? quantile(sorted, TAIL) : 0;
  let high = sorted.length > 0 ? quantile(sorted, 1 - TAIL) : 1;
  if (!(high > low)) {
    const air = Math.abs(low) * 0.1 || 1;
    low -= air;
    high += air;
  }
  return {
    low,
    high,
    classOf: (value) => Math.max(0, Math.min(CLASSES - 1, Math.floor((CLASSES * (value - low)) / (high - low)))),
  };
}

function quantile(sorted: Float64Array, share: number): number {
  const place = share * (sorted.length - 1);
  const left = Math.floor(place);
  const right = Math.min(left + 1, sorted.length - 1);
  return sorted[left]! + (place - left) * (sorted[right]! - sorted[left]!);
}

const LEGEND_WIDTH = 220;

/** A bar with its figures: 220 px by 44 px from (left, top). @param title escaped */
export function rampLegend(ramp: Ramp, left: number, top: number, title: string): string {
  const scale = scaleLinear([ramp.low, ramp.high], [left, left + LEGEND_WIDTH]);
  const step = LEGEND_WIDTH / CLASSES;
  const parts = [textMark("key", left, top + 10, title)];
  for (let k = 0; k < CLASSES; ++k)
    parts.push(
      `<rect x="${px(left + k * step)}" y="${px(top + 16)}" width="${px(step + 0.6)}" height="10" fill="${classColour(k)}"/>`,
    );
  parts.push(boxMark("outline", left, top + 16, LEGEND_WIDTH, 10));
  const ticks = scale.ticks(4);
  const format = tickFormat(ticks);
  for (const tick of ticks) {
    parts.push(lineMark("stub", scale(tick), top + 26, scale(tick), top + 30));
    parts.push(textMark("tick middle", scale(tick), top + 42, format(tick)));
  }
  return parts.join("");
}
