/**
 * The lines on a map, coloured by the average source; where coordinates are not known, the lines
 * one under another along chainage. Scale from the data: chainage is in metres, whatever the coordinates are.
 */
import {scaleLinear} from "d3-scale";
import {clip} from "../../geometry/interval.ts";
import {partsOf} from "../../inverse/nouns.ts";
import type {LineStudy} from "../../study/outcome.ts";
import {deliveryOf} from "../delivery.ts";
import {nameText} from "../html.ts";
import {metreText, tickFormat} from "../number-text.ts";
import {classColour, type Ramp, rampLegend, rampOver} from "./ramp.ts";
import {figureSvg, lineMark, px, textMark, textWidth} from "./svg.ts";

/** What the map keeps of a line: a few points, since a survey may have thousands of lines. */
export interface MapLine {
  readonly id: string;
  /** Place and average source between neighbouring points; `value` has one entry less. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly value: Float64Array;
  readonly placed: boolean;
  /** Metres of chainage between the ends, for the scale. */
  readonly length: number;
  /** Spans of `x`, `y` taken by the strips: start and end place of each. */
  readonly strips: readonly (readonly [number, number, number, number])[];
}

/** @param most segments kept */
export function mapLine(study: LineStudy, most: number): MapLine {
  const {line, panels, averages} = study;
  const {toField} = deliveryOf(study.observable);
  const first = Math.min(...ends(line.stations.chainage));
  const last = Math.max(...ends(line.stations.chainage));
  const locate = line.locate ?? ((chainage: number): readonly [number, number] => [chainage, 0]);
  const from = Math.max(first, panels.from[0]!);
  const to = Math.min(last, panels.to[panels.count - 1]!);
  const within: number[] = [];
  for (let j = 0; j < panels.count; ++j) if (panels.centre[j]! >= from && panels.centre[j]! <= to) within.push(j);
  const segments = Math.max(1, Math.min(most, within.length));
  const x = new Float64Array(segments + 1);
  const y = new Float64Array(segments + 1);
  const value = new Float64Array(segments);
  for (let k = 0; k <= segments; ++k) {
    const chainage = first + ((last - first) * k) / segments;
    [x[k], y[k]] = locate(chainage);
  }
  const count = new Float64Array(segments);
  for (const j of within) {
    const k = Math.min(segments - 1, Math.floor((segments * (panels.centre[j]! - first)) / (last - first || 1)));
    value[k]! += toField(averages.value[j]!);
    ++count[k]!;
  }
  for (let k = 0; k < segments; ++k) value[k] = count[k]! > 0 ? value[k]! / count[k]! : Number.NaN;
  const strips = study.strips
    .flatMap(({strip}) => clip({from: first, to: last}, partsOf(strip)))
    .map((part) => [...locate(part.from), ...locate(part.to)] as const);
  return {id: line.id, x, y, value, placed: line.locate !== undefined, length: last - first, strips};
}

/** Least and greatest entry without spreading a long array. */
const ends = (values: Float64Array): readonly [number, number] =>
  values.reduce<[number, number]>(
    (range, value) => [Math.min(range[0], value), Math.max(range[1], value)],
    [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY],
  );

const WIDTH = 860;
const LEGEND = 64;
const INSET = 26;
const TALLEST = 560;

/** @param unit of the source */
export function mapFigure(lines: readonly MapLine[], unit: string): string {
  if (lines.length === 0) return "";
  const ramp = rampOver(lines.flatMap((line) => [...line.value]));
  const placed = lines.every((line) => line.placed);
  const view = placed ? mapView(lines) : stackedView(lines);
  const height = view.height + LEGEND + 2 * INSET;
  const wide = Math.max(1.5, Math.min(6, 260 / lines.length));
  const parts: string[] = [];
  lines.forEach((line, k) => {
    for (const [x1, y1, x2, y2] of line.strips)
      parts.push(
        `<line class="mapstrip" stroke-width="${px(wide + 7)}" x1="${px(view.x(x1))}" y1="${px(view.y(y1, k))}" x2="${px(view.x(x2))}" y2="${px(view.y(y2, k))}"/>`,
      );
  });
  lines.forEach((line, k) => {
    const xs = Array.from(line.x, (x) => view.x(x));
    const ys = Array.from(line.y, (y) => view.y(y, k));
    const outline = xs.map((x, i) => `${i === 0 ? "M" : "L"}${px(x)},${px(ys[i]!)}`).join("");
    parts.push(`<path class="casing" stroke-width="${px(wide + 1.6)}" d="${outline}"/>`);
    parts.push(...colouredRuns(line, ramp, xs, ys, wide));
  });
  parts.push(...lineNames(lines, view), ...view.furniture);
  parts.push(rampLegend(ramp, WIDTH - 220 - INSET, height - LEGEND + 8, `Average source, ${unit}`));
  if (lines.some((line) => line.strips.length > 0)) {
    const y = height - LEGEND + 29;
    parts.push(
      `<line class="mapstrip" stroke-width="12" x1="${WIDTH - 400}" y1="${y}" x2="${WIDTH - 376}" y2="${y}"/>`,
    );
    parts.push(textMark("key", WIDTH - 370, y + 4, "strip asked about"));
  }
  return figureSvg(WIDTH, height, `Map of ${lines.length} lines coloured by the average source`, parts.join(""));
}

/** Neighbouring segments of one colour class are one path. */
function colouredRuns(line: MapLine, ramp: Ramp, xs: readonly number[], ys: readonly number[], wide: number): string[] {
  const paths: string[] = [];
  let k = 0;
  while (k < line.value.length) {
    if (Number.isNaN(line.value[k]!)) {
      ++k;
      continue;
    }
    const colour = ramp.classOf(line.value[k]!);
    let path = `M${px(xs[k]!)},${px(ys[k]!)}`;
    while (k < line.value.length && !Number.isNaN(line.value[k]!) && ramp.classOf(line.value[k]!) === colour) {
      ++k;
      path += `L${px(xs[k]!)},${px(ys[k]!)}`;
    }
    paths.push(`<path class="run" stroke="${classColour(colour)}" stroke-width="${px(wide)}" d="${path}"/>`);
  }
  return paths;
}

interface View {
  readonly height: number;
  readonly x: (x: number) => number;
  readonly y: (y: number, line: number) => number;
  /** Scale bar, north arrow or axis. */
  readonly furniture: readonly string[];
}

function mapView(lines: readonly MapLine[]): View {
  const [west, east] = range(lines, (line) => line.x);
  const [south, north] = range(lines, (line) => line.y);
  // Metres per unit of the coordinates, east and north, found by comparing them with chainage.
  const degrees = looksLikeDegrees(lines);
  const shrink = degrees ? Math.cos((((south + north) / 2) * Math.PI) / 180) : 1;
  const metres = metresPerUnit(lines, shrink);
  const spanX = Math.max((east - west) * shrink, (north - south) * 1e-3, Number.MIN_VALUE);
  const spanY = Math.max(north - south, spanX * 1e-3);
  const room = WIDTH - 2 * INSET - 60;
  const scale = Math.min(room / spanX, TALLEST / spanY);
  const height = Math.max(60, spanY * scale);
  const left = INSET + (WIDTH - 2 * INSET - spanX * scale) / 2;
  const bottom = INSET + (height + spanY * scale) / 2;
  const furniture = [scaleBar(INSET, height + 2 * INSET + 30, metres / scale)];
  // Only of a projected system in metres is it known that up is grid north and a metre a metre.
  if (!degrees && Math.abs(metres - 1) < 0.02) furniture.push(northArrow(WIDTH - INSET - 14, INSET + 6));
  return {
    height,
    x: (x) => left + (x - west) * shrink * scale,
    y: (y) => bottom - (y - south) * scale,
    furniture,
  };
}

/** Without coordinates: a row a line, chainage across. */
function stackedView(lines: readonly MapLine[]): View {
  const [from, to] = range(lines, (line) => line.x);
  const height = Math.max(40, Math.min(TALLEST, 24 * lines.length));
  const x = scaleLinear([from, to > from ? to : from + 1], [INSET + 90, WIDTH - INSET]);
  const step = height / lines.length;
  const axis = height + INSET + 8;
  const ticks = x.ticks(8);
  const format = tickFormat(ticks);
  const furniture = ticks.flatMap((tick) => [
    lineMark("stub", x(tick), axis, x(tick), axis + 4),
    textMark("tick middle", x(tick), axis + 17, format(tick)),
  ]);
  furniture.push(textMark("axis", INSET, axis + 40, "Chainage, m; the file holds no coordinates, so this is no map."));
  return {height, x: (value) => x(value), y: (_, line) => INSET + (line + 0.5) * step, furniture};
}

function range(lines: readonly MapLine[], of: (line: MapLine) => Float64Array): readonly [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const line of lines) {
    const [a, b] = ends(of(line));
    low = Math.min(low, a);
    high = Math.max(high, b);
  }
  return [low, high];
}

/** Degrees are small numbers, and a unit of them is some 100 km of chainage. */
function looksLikeDegrees(lines: readonly MapLine[]): boolean {
  const [west, east] = range(lines, (line) => line.x);
  const [south, north] = range(lines, (line) => line.y);
  return west >= -360 && east <= 360 && south >= -90 && north <= 90 && metresPerUnit(lines, 1) > 1000;
}

function metresPerUnit(lines: readonly MapLine[], shrink: number): number {
  let metres = 0;
  let units = 0;
  for (const {x, y, length} of lines) {
    const last = x.length - 1;
    metres += length;
    units += Math.hypot((x[last]! - x[0]!) * shrink, y[last]! - y[0]!);
  }
  return units > 0 && metres > 0 ? metres / units : 1;
}

/** The longest round length that takes no more than 160 px. */
export function scaleBar(left: number, y: number, metresPerPixel: number): string {
  const most = 160 * metresPerPixel;
  const power = 10 ** Math.floor(Math.log10(most));
  const length = [5, 2, 1].map((step) => step * power).find((step) => step <= most)!;
  const width = length / metresPerPixel;
  const text = length >= 1000 ? `${metreText(length / 1000)} km` : `${metreText(length)} m`;
  return [
    lineMark("scalebar", left, y, left + width, y),
    lineMark("scalebar", left, y - 4, left, y + 4),
    lineMark("scalebar", left + width, y - 4, left + width, y + 4),
    textMark("key middle", left + width / 2, y - 8, text),
  ].join("");
}

const northArrow = (x: number, top: number): string =>
  `<path class="arrow" d="M${px(x)},${px(top)}l6,18l-6,-4l-6,4z"/>${textMark("key middle", x, top + 32, "grid N")}`;

/** Names beside the starts of the lines, left out where they would run into one another. */
function lineNames(lines: readonly MapLine[], view: View): string[] {
  const taken: (readonly [number, number, number, number])[] = [];
  const parts: string[] = [];
  lines.forEach((line, k) => {
    const name = line.id.length > 14 ? `${line.id.slice(0, 13)}…` : line.id;
    const width = textWidth(name, 11) + 4;
    const x = view.x(line.x[0]!);
    const y = view.y(line.y[0]!, k);
    const x1 = view.x(line.x[line.x.length - 1]!);
    const y1 = view.y(line.y[line.y.length - 1]!, k);
    const across = Math.abs(x1 - x) > Math.abs(y1 - y);
    // Off the end of the line: beside it when the line runs across the page, above or below it otherwise.
    const left = across ? (x < x1 ? x - width - 6 : x + 6) : x - width / 2;
    const base = across ? y + 4 : y > y1 ? y + 17 : y - 9;
    const box = [left, base - 11, left + width, base + 2] as const;
    if (left < 0 || left + width > WIDTH) return;
    if (taken.some((other) => box[0] < other[2] && other[0] < box[2] && box[1] < other[3] && other[1] < box[3])) return;
    taken.push(box);
    parts.push(textMark("mapname", left, base, nameText(name)));
  });
  return parts;
}
