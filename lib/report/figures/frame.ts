/** A plot's frame: where it stands, its scales, ticks that do not crowd, a title with the key of its marks. */
import {extent} from "d3-array";
import {type ScaleLinear, scaleLinear} from "d3-scale";
import {tickFormat} from "../number-text.ts";
import {boxMark, lineMark, px, textMark, textWidth} from "./svg.ts";

export type Scale = ScaleLinear<number, number>;

export interface Frame {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
  /** Chainage to px, ordinate to px. */
  readonly x: Scale;
  readonly y: Scale;
}

/** One entry of a key: how the mark looks, by class, and what it is. */
export interface KeyEntry {
  readonly mark: "line" | "box" | "dot";
  readonly kind: string;
  /** Escaped. */
  readonly text: string;
}

/** Least room between tick labels: px across, px down. */
const TICK_ROOM = {x: 90, y: 27} as const;

/** Scale that covers what `values` hold, with a little air; a constant gets room around it. */
export function ordinate(values: Iterable<number>, top: number, height: number): Scale {
  const [least, greatest] = extent(finite(values));
  const low = least ?? 0;
  const high = greatest ?? 1;
  const air = high > low ? 0.06 * (high - low) : Math.max(Math.abs(high) * 0.1, Number.MIN_VALUE * 1e10);
  return scaleLinear([low - air, high + air], [top + height, top]);
}

function* finite(values: Iterable<number>): Generator<number> {
  for (const value of values) if (Number.isFinite(value)) yield value;
}

/** Round values as far apart as `room`; at least two of them, since one alone tells no scale. */
function ticksOf(scale: Scale, room: number): readonly number[] {
  const [from, to] = scale.range();
  const wanted = Math.max(2, Math.floor(Math.abs(to! - from!) / room));
  for (let count = wanted; count < wanted + 4; ++count) {
    const ticks = scale.ticks(count);
    if (ticks.length >= 2) return ticks;
  }
  return scale.ticks(wanted);
}

/** Ground, horizontal grid lines and their figures; the zero line stands out. */
export function frameGround(frame: Frame): string {
  const {left, top, width, height, y} = frame;
  const ticks = ticksOf(y, TICK_ROOM.y);
  const format = tickFormat(ticks);
  const parts = [boxMark("ground", left, top, width, height)];
  for (const tick of ticks) {
    parts.push(lineMark(tick === 0 ? "zero" : "grid", left, y(tick), left + width, y(tick)));
    parts.push(textMark("tick end", left - 7, y(tick) + 4, format(tick)));
  }
  return parts.join("");
}

/** Vertical grid lines; they belong under the curves. */
export const abscissaGrid = ({top, height, x}: Frame): string =>
  ticksOf(x, TICK_ROOM.x)
    .map((tick) => lineMark("grid", x(tick), top, x(tick), top + height))
    .join("");

/** Figures below the frame and what they count. */
export function abscissaFigures({left, top, width, height, x}: Frame, title: string): string {
  const ticks = ticksOf(x, TICK_ROOM.x);
  const format = tickFormat(ticks);
  const parts = ticks.flatMap((tick) => [
    lineMark("stub", x(tick), top + height, x(tick), top + height + 4),
    textMark("tick middle", x(tick), top + height + 17, format(tick)),
  ]);
  parts.push(textMark("axis middle", left + width / 2, top + height + 35, title));
  return parts.join("");
}

/** Title above the frame at its left, key at its right; the key moves under the title when both do not fit. */
export function frameTitle(frame: Frame, title: string, key: readonly KeyEntry[]): string {
  const {left, top, width} = frame;
  const sizes = key.map((entry) => 24 + textWidth(entry.text, 11.5) + 14);
  let x = left + width - sizes.reduce((sum, size) => sum + size, 0) + 14;
  const parts = [textMark("title", left, top - 8, title)];
  key.forEach((entry, k) => {
    const y = top - 12;
    if (entry.mark === "line") parts.push(lineMark(entry.kind, x, y, x + 19, y));
    else if (entry.mark === "box") parts.push(boxMark(entry.kind, x, y - 5, 19, 10));
    else parts.push(`<circle class="${entry.kind}" cx="${px(x + 10)}" cy="${px(y)}" r="2"/>`);
    parts.push(textMark("key", x + 24, top - 8, entry.text));
    x += sizes[k]!;
  });
  return parts.join("");
}
