/**
 * The figure of a line: readings with fit, residual, source and levels, one under another on
 * one chainage axis. Shaded flanks: support without stations above; tinted spans: the strips asked about.
 */
import {quantileSorted} from "d3-array";
import {scaleLinear} from "d3-scale";
import type {Interval} from "../../geometry/interval.ts";
import {partsOf, type Strip} from "../../inverse/nouns.ts";
import {BOUNDARY_FIELD} from "../../potential/level-quantity.ts";
import {DELIVERY_UNIT} from "../../quantities.ts";
import type {LineStudy} from "../../study/outcome.ts";
import {deliveryOf} from "../delivery.ts";
import {nameText} from "../html.ts";
import {intervalNoun} from "../interval-words.ts";
import {levelWords} from "../level-words.ts";
import {figureText, metreText, percentText} from "../number-text.ts";
import {abscissaFigures, abscissaGrid, type Frame, frameGround, frameTitle, ordinate, type Scale} from "./frame.ts";
import {bandMark, boxMark, clipped, curveMark, figureSvg, px, textMark, textWidth} from "./svg.ts";

const WIDTH = 860;
const LEFT = 68;
const RIGHT = 14;
const GAP = 34;
const HEIGHTS = {readings: 190, residual: 74, source: 200, level: 140} as const;

/** Levels that get a plot of their own; the others are in levels.csv. */
export const LEVELS_SHOWN = 5;

/** A jump this many times the median spacing is a gap and interrupts the curves (a heuristic). */
const GAP_FACTOR = 5;

export function profileFigure(study: LineStudy): string {
  const {line, conditioned, estimate, panels, averages} = study;
  const delivery = deliveryOf(study.observable);
  const order = byChainage(line.stations.chainage);
  const chainage = picked(line.stations.chainage, order);
  const first = chainage[0]!;
  const last = chainage.at(-1)!;
  const from = Math.min(first, panels.from[0]!);
  const to = Math.max(last, panels.to[panels.count - 1]!);
  const x = scaleLinear([from, to], [LEFT, WIDTH - RIGHT]);
  const breaks = gapsIn(chainage);
  /** Stations in px with a break at every gap, and ordinates likewise. */
  const across = withBreaks(chainage.map(x), breaks);
  const station = (values: ArrayLike<number>, y: Scale, factor: (si: number) => number): number[] =>
    withBreaks(
      picked(values, order).map((si) => y(factor(si))),
      breaks,
    );

  const parts: string[] = [];
  let top = 46;
  const frameOf = (height: number, y: (top: number) => Scale): Frame => {
    const frame = {left: LEFT, top, width: WIDTH - LEFT - RIGHT, height, x, y: y(top)};
    top += height + GAP;
    return frame;
  };
  const strips = study.strips.map((entry) => entry.strip);
  const behind = (frame: Frame): string =>
    frameGround(frame) + flanks(frame, first, last) + stripSpans(frame, strips) + abscissaGrid(frame);

  // Readings and fit.
  const {toReading, toField} = delivery;
  const [measuredBy] = conditioned.channels;
  const [explained] = estimate.channels;
  const fit = explained!.field.map((value, i) => value + explained!.regional[i]!);
  const readings = frameOf(HEIGHTS.readings, (t) =>
    ordinate([...measuredBy!.channel.values, ...fit, ...explained!.regional].map(toReading), t, HEIGHTS.readings),
  );
  const dotted = across.length <= (WIDTH - LEFT - RIGHT) / 2;
  const measured = station(measuredBy!.channel.values, readings.y, toReading);
  parts.push(
    stripNames(readings, strips),
    behind(readings),
    curveMark("regional", across, station(explained!.regional, readings.y, toReading)),
    dotted ? dots(across, measured) : curveMark("trace", across, measured),
    curveMark("fit", across, station(fit, readings.y, toReading)),
    frameTitle(readings, `Readings and fit, ${delivery.reading}`, [
      {mark: dotted ? "dot" : "line", kind: dotted ? "dot" : "trace", text: "reading"},
      {mark: "line", kind: "fit", text: "fit"},
      {mark: "line", kind: "regional", text: "regional"},
    ]),
  );

  // Residual, with twice the noise on either side.
  const noise = toReading(measuredBy!.noise);
  const residual = frameOf(HEIGHTS.residual, (t) =>
    ordinate([...explained!.residual.map(toReading), -2.2 * noise, 2.2 * noise], t, HEIGHTS.residual),
  );
  parts.push(
    behind(residual),
    boxMark("expected", LEFT, residual.y(2 * noise), residual.width, residual.y(-2 * noise) - residual.y(2 * noise)),
    curveMark("trace", across, station(explained!.residual, residual.y, toReading)),
    frameTitle(residual, `Residual, ${delivery.reading}`, [
      {mark: "box", kind: "expected", text: `twice the noise, ± ${figureText(2 * noise, 2)} ${delivery.reading}`},
    ]),
  );

  // Source: the average with its interval, and the one source on the panels.
  const centres = picked(panels.centre, undefined).map(x);
  const between = new Set(panels.components.slice(1).map((part) => part.first));
  const panelAcross = withBreaks(centres, between);
  const panel = (values: ArrayLike<number>, y: Scale): number[] =>
    withBreaks(
      picked(values, undefined).map((si) => y(toField(si))),
      between,
    );
  const under = (values: ArrayLike<number>): number[] =>
    picked(values, undefined).filter((_, j) => panels.centre[j]! >= first && panels.centre[j]! <= last);
  const covered = [...under(averages.lower), ...under(averages.upper), ...estimate.density].map(toField);
  const source = frameOf(HEIGHTS.source, (t) => ordinate([0, ...covered], t, HEIGHTS.source));
  const over = under(averages.averagedOver).sort((a, b) => a - b);
  const typical = over.length > 0 ? quantileSorted(over, 0.5)! : averages.averagedOver[0]!;
  parts.push(
    behind(source),
    clipped(
      LEFT,
      source.top,
      source.width,
      source.height,
      bandMark("band", panelAcross, panel(averages.upper, source.y), panel(averages.lower, source.y)) +
        curveMark("plain", panelAcross, panel(estimate.density, source.y)) +
        curveMark("average", panelAcross, panel(averages.value, source.y)),
    ),
    frameTitle(source, `Source on the boundary, ${delivery.field}`, [
      {mark: "line", kind: "average", text: `average over about ${metreText(typical)} m`},
      {mark: "box", kind: "band", text: `${percentText(study.confidence)} ${intervalNoun(study.intervals)}`},
      {mark: "line", kind: "plain", text: "one source that fits"},
    ]),
  );

  // Levels.
  let lowest = source;
  for (const level of study.levels.slice(0, LEVELS_SHOWN)) {
    const unit = DELIVERY_UNIT[level.dimension];
    const toLevel = (si: number): number => si / unit.factor;
    const drawn = [0, ...level.value, ...level.lower, ...level.upper].filter(Number.isFinite);
    const frame = frameOf(HEIGHTS.level, (t) => ordinate(drawn.map(toLevel), t, HEIGHTS.level));
    const bounded = level.lower.some(Number.isFinite);
    const name = level.quantity === BOUNDARY_FIELD.name ? "Field" : level.quantity;
    parts.push(
      behind(frame),
      bounded
        ? bandMark("band", across, station(level.upper, frame.y, toLevel), station(level.lower, frame.y, toLevel))
        : "",
      curveMark("average", across, station(level.value, frame.y, toLevel)),
      frameTitle(frame, `${name} ${levelWords(level.setting)}, ${unit.symbol}`, [
        {mark: "line", kind: "average", text: "field"},
        ...(bounded
          ? [
              {
                mark: "box",
                kind: "band",
                text: `${percentText(study.confidence)} ${intervalNoun(study.intervals)}`,
              } as const,
            ]
          : []),
      ]),
    );
    lowest = frame;
  }
  parts.push(abscissaFigures(lowest, "Chainage, m"));
  const description = `Line ${nameText(line.id)}: readings and fit, residual, source and levels along chainage`;
  return figureSvg(WIDTH, lowest.top + lowest.height + 44, description, parts.join(""));
}

/** Indices of the stations in increasing chainage. */
const byChainage = (chainage: Float64Array): readonly number[] =>
  Array.from(chainage.keys()).sort((a, b) => chainage[a]! - chainage[b]! || a - b);

const picked = (values: ArrayLike<number>, order: readonly number[] | undefined): number[] =>
  order === undefined ? Array.from(values) : order.map((i) => values[i]!);

/** Entries before which a gap lies. */
function gapsIn(chainage: readonly number[]): ReadonlySet<number> {
  const steps = chainage.slice(1).map((value, i) => value - chainage[i]!);
  const positive = steps.filter((step) => step > 0).sort((a, b) => a - b);
  const median = quantileSorted(positive, 0.5) ?? 0;
  return new Set(steps.flatMap((step, i) => (step > GAP_FACTOR * median ? [i + 1] : [])));
}

/** NaN in front of every entry at which a new piece begins. */
const withBreaks = (values: readonly number[], breaks: ReadonlySet<number>): number[] =>
  breaks.size === 0 ? [...values] : values.flatMap((value, i) => (breaks.has(i) ? [Number.NaN, value] : [value]));

/** A dot a reading; a zero-length stroke with round ends is the shortest way to say it. */
const dots = (x: readonly number[], y: readonly number[]): string =>
  `<path class="dots" d="${x.map((at, i) => (Number.isFinite(y[i]!) ? `M${px(at)},${px(y[i]!)}h0` : "")).join("")}"/>`;

/** Where the support has no station above it. */
function flanks(frame: Frame, first: number, last: number): string {
  const {left, top, width, height, x} = frame;
  const right = left + width;
  const parts: string[] = [];
  if (x(first) > left + 1) parts.push(boxMark("flank", left, top, x(first) - left, height));
  if (x(last) < right - 1) parts.push(boxMark("flank", x(last), top, right - x(last), height));
  return parts.join("");
}

const spanOf = (frame: Frame, strip: Interval): readonly [number, number] => {
  const clamp = (value: number): number => Math.min(frame.left + frame.width, Math.max(frame.left, value));
  return [clamp(frame.x(strip.from)), clamp(frame.x(strip.to))];
};

const stripSpans = (frame: Frame, strips: readonly Strip[]): string =>
  strips
    .flatMap(partsOf)
    .map((part) => {
      const [a, b] = spanOf(frame, part);
      return b > a ? boxMark("strip", a, frame.top, Math.max(1, b - a), frame.height) : "";
    })
    .join("");

/** Names over the topmost frame, left out where one would run into the one before. */
function stripNames(frame: Frame, strips: readonly Strip[]): string {
  let free = frame.left;
  const parts: string[] = [];
  for (const strip of [...strips].sort((a, b) => a.from - b.from)) {
    const [a, b] = spanOf(frame, strip);
    const name = strip.name.length > 24 ? `${strip.name.slice(0, 23)}…` : strip.name;
    const half = textWidth(name, 11.5) / 2;
    const middle = Math.max(frame.left + half, Math.min(frame.left + frame.width - half, (a + b) / 2));
    if (!(b > a) || middle - half < free) continue;
    parts.push(textMark("stripname middle", middle, frame.top - 28, nameText(name)));
    free = middle + half + 10;
  }
  return parts.join("");
}
