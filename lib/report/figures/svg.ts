/** Scraps of SVG that every figure uses. Colours and type stand in the page's style sheet, by class. */
import {area, line} from "d3-shape";
import {type Band, type Curve, decimatedBand, decimatedCurve} from "./decimate.ts";

/** A coordinate to a tenth of a pixel. */
export const px = (value: number): string => String(Math.round(value * 10) / 10 + 0);

const curvePath = (curve: Curve): string =>
  line<number>()
    .x((i) => curve.x[i]!)
    .y((i) => curve.y[i]!)
    .defined((i) => Number.isFinite(curve.y[i]!))
    .digits(1)(curve.x.keys()) ?? "";

const bandPath = (band: Band): string =>
  area<number>()
    .x((i) => band.x[i]!)
    .y0((i) => band.low[i]!)
    .y1((i) => band.high[i]!)
    .defined((i) => Number.isFinite(band.low[i]!) && Number.isFinite(band.high[i]!))
    .digits(1)(band.x.keys()) ?? "";

/** A curve through points in px, thinned out. */
export const curveMark = (kind: string, x: ArrayLike<number>, y: ArrayLike<number>): string =>
  `<path class="${kind}" d="${curvePath(decimatedCurve(x, y))}"/>`;

/** A band between ordinates in px, thinned out; y grows downward, so `low` is the upper edge on the page. */
export const bandMark = (kind: string, x: ArrayLike<number>, low: ArrayLike<number>, high: ArrayLike<number>): string =>
  `<path class="${kind}" d="${bandPath(decimatedBand(x, low, high))}"/>`;

export const lineMark = (kind: string, x1: number, y1: number, x2: number, y2: number): string =>
  `<line class="${kind}" x1="${px(x1)}" y1="${px(y1)}" x2="${px(x2)}" y2="${px(y2)}"/>`;

export const boxMark = (kind: string, x: number, y: number, width: number, height: number): string =>
  `<rect class="${kind}" x="${px(x)}" y="${px(y)}" width="${px(Math.max(0, width))}" height="${px(Math.max(0, height))}"/>`;

/** @param text markup: escape names first */
export const textMark = (kind: string, x: number, y: number, text: string): string =>
  `<text class="${kind}" x="${px(x)}" y="${px(y)}">${text}</text>`;

/** Width that a text of this size takes at most, px: an average sans-serif letter is about 0.56 em wide (a heuristic). */
export const textWidth = (text: string, size: number): number => 0.56 * size * text.length;

/**
 * A figure of its own height. @param description what it shows, escaped, for those who do not see it
 */
export const figureSvg = (width: number, height: number, description: string, content: string): string =>
  `<svg viewBox="0 0 ${px(width)} ${px(height)}" width="${px(width)}" height="${px(height)}" role="img" aria-label="${description}">${content}</svg>`;

/** Cuts off what runs beyond a frame: an inner `svg` clips without needing an id. Its origin stays that of the page. */
export const clipped = (x: number, y: number, width: number, height: number, content: string): string =>
  `<svg x="${px(x)}" y="${px(y)}" width="${px(width)}" height="${px(height)}" viewBox="${px(x)} ${px(y)} ${px(width)} ${px(height)}">${content}</svg>`;
