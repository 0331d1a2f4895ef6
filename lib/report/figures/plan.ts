/** Half-width of strips against their width, or against clearance where one width was asked; a curve a combination. */
import {scaleLinear} from "d3-scale";
import type {Plan, PlanCase} from "../../study/plan.ts";
import {deliveryOf} from "../delivery.ts";
import {escaped} from "../html.ts";
import {exactText, metreText} from "../number-text.ts";
import {abscissaFigures, abscissaGrid, type Frame, frameGround, frameTitle, ordinate} from "./frame.ts";
import {curveMark, figureSvg, px, textMark} from "./svg.ts";

const WIDTH = 860;
const HEIGHT = 300;
const LEFT = 76;
const TOP = 26;
const INNER = {width: 500, height: HEIGHT - TOP - 48} as const;
/** More curves cannot be told apart; the table has all. */
const MOST_CURVES = 8;
/** Least distance between the names of curves, px. */
const NAME_ROOM = 14;

interface Curve {
  readonly name: string;
  readonly x: readonly number[];
  readonly y: readonly number[];
}

/** What tells one combination from the others: only what varies. */
function nameOf({settings}: Plan, one: PlanCase, without: "width" | "clearance"): string {
  const {observables, clearances, spacings, noises, bounds} = settings;
  const delivery = deliveryOf(one.observable);
  const parts = [
    observables.length > 1 ? one.observable.name : "",
    without !== "clearance" && clearances.length > 1 ? `${metreText(one.clearance)} m high` : "",
    spacings.length > 1 ? `every ${metreText(one.spacing)} m` : "",
    noises.length > 1 ? `${exactText(Number(delivery.toReading(one.noise).toPrecision(4)))} ${delivery.reading}` : "",
    bounds.length > 1 ? one.bound.text : "",
  ].filter((part) => part !== "");
  return escaped(parts.length === 0 ? one.observable.name : parts.join(", "));
}

/** One curve a name, its points by abscissa. */
function gathered(points: readonly {readonly name: string; readonly x: number; readonly y: number}[]): Curve[] {
  return [...new Set(points.map(({name}) => name))].map((name) => {
    const own = points.filter((point) => point.name === name).sort((a, b) => a.x - b.x);
    return {name, x: own.map(({x}) => x), y: own.map(({y}) => y)};
  });
}

/** @returns the figure of half-widths, markup */
export function halfWidthFigure(plan: Plan): string {
  const {settings, cases} = plan;
  const delivery = deliveryOf(settings.observables[0]!);
  const by = settings.stripWidths.length > 1 ? "width" : "clearance";
  const curves = gathered(
    cases.flatMap((one) =>
      one.strips.map(({width, middle}) => ({
        name: nameOf(plan, one, by),
        x: by === "width" ? width : one.clearance,
        y: delivery.toDensity(middle),
      })),
    ),
  );
  const abscissa = by === "width" ? "Width of the strip, m" : "Clearance, m";
  return curvesFigure(curves, `Half-width of the mean of a strip, ${delivery.density}`, abscissa);
}

/** @returns the figure of resolution against clearance, markup */
export function resolutionFigure(plan: Plan): string {
  const curves = gathered(
    plan.cases.map((one) => ({name: nameOf(plan, one, "clearance"), x: one.clearance, y: one.resolution})),
  );
  return curvesFigure(curves, "Resolution, m", "Clearance, m");
}

function curvesFigure(all: readonly Curve[], title: string, abscissa: string): string {
  const curves = all.slice(0, MOST_CURVES);
  const xs = curves.flatMap(({x}) => x);
  const frame: Frame = {
    left: LEFT,
    top: TOP,
    ...INNER,
    x: scaleLinear([0, 1.06 * Math.max(...xs)], [LEFT, LEFT + INNER.width]),
    y: ordinate([0, ...curves.flatMap(({y}) => y)], TOP, INNER.height),
  };
  const parts = [frameGround(frame), abscissaGrid(frame)];
  for (const {x, y} of curves) {
    const [px_, py] = [x.map(frame.x), y.map(frame.y)];
    if (x.length > 1) parts.push(curveMark("average", px_, py));
    for (let k = 0; k < x.length; ++k)
      parts.push(`<circle class="point" cx="${px(px_[k]!)}" cy="${px(py[k]!)}" r="3"/>`);
  }
  // Names stand beside the last points, from the top down, and give each other room.
  let lowest = -Infinity;
  for (const {name, y} of [...curves].sort((a, b) => b.y.at(-1)! - a.y.at(-1)!)) {
    const at = Math.max(frame.y(y.at(-1)!) + 4, lowest + NAME_ROOM);
    parts.push(textMark("key", LEFT + INNER.width + 8, at, name));
    lowest = at;
  }
  parts.push(abscissaFigures(frame, abscissa), frameTitle(frame, title, []));
  if (all.length > curves.length)
    parts.push(textMark("key end", LEFT + INNER.width, TOP - 8, `${curves.length} of ${all.length} combinations`));
  return figureSvg(WIDTH, HEIGHT, escaped(title), parts.join(""));
}
