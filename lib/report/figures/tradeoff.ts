/** Misfit against norm, both logarithmic, with the chosen point; the steeper left arm fits less, the flat right arm costs norm. */
import {extent} from "d3-array";
import {type ScaleLogarithmic, scaleLog} from "d3-scale";
import type {LineStudy} from "../../study/outcome.ts";
import {deliveryOf} from "../delivery.ts";
import {nameText} from "../html.ts";
import {countText, exactText, figureText} from "../number-text.ts";
import {boxMark, clipped, curveMark, figureSvg, lineMark, px, textMark} from "./svg.ts";

const WIDTH = 400;
const HEIGHT = 290;
const LEFT = 68;
const TOP = 26;
const INNER = {width: WIDTH - LEFT - 14, height: HEIGHT - TOP - 48} as const;

export function tradeoffFigure(study: LineStudy): string {
  const {curve, estimate, choice} = study;
  const delivery = deliveryOf(study.observable);
  const norms: number[] = [];
  const misfits: number[] = [];
  for (let k = 0; k < curve.multiplier.length; ++k) {
    if (!(curve.norm[k]! > 0 && curve.misfit[k]! > 0)) continue;
    norms.push(delivery.toNorm(curve.norm[k]!));
    misfits.push(curve.misfit[k]!);
  }
  const chosen = {norm: delivery.toNorm(estimate.norm), misfit: estimate.misfit};
  const expected = study.estimate.readings;
  const x = logScale([...norms, chosen.norm], LEFT, LEFT + INNER.width);
  const y = logScale([...misfits, chosen.misfit, expected], TOP + INNER.height, TOP);
  const title = `Misfit against norm of line ${nameText(study.line.id)}`;
  if (x === undefined || y === undefined) return "";

  const parts: string[] = [boxMark("ground", LEFT, TOP, INNER.width, INNER.height)];
  for (const tick of logTicks(x)) {
    parts.push(lineMark("grid", x(tick), TOP, x(tick), TOP + INNER.height));
    parts.push(textMark("tick middle", x(tick), TOP + INNER.height + 17, tickText(tick)));
  }
  for (const tick of logTicks(y)) {
    parts.push(lineMark("grid", LEFT, y(tick), LEFT + INNER.width, y(tick)));
    parts.push(textMark("tick end", LEFT - 7, y(tick) + 4, tickText(tick)));
  }
  const bound = x(delivery.toNorm(choice.bound));
  const inside = bound > LEFT && bound < LEFT + INNER.width;
  parts.push(
    lineMark("target", LEFT, y(expected), LEFT + INNER.width, y(expected)),
    textMark("key end", LEFT + INNER.width - 5, y(expected) - 5, `number of readings, ${countText(expected)}`),
    inside ? lineMark("target", bound, TOP, bound, TOP + INNER.height) : "",
    inside ? textMark("key", bound + 5, TOP + 14, "bound") : "",
    clipped(LEFT, TOP, INNER.width, INNER.height, curveMark("average", norms.map(x), misfits.map(y))),
    `<circle class="chosen" cx="${px(x(chosen.norm))}" cy="${px(y(chosen.misfit))}" r="6"/>`,
    chosenLabel(x(chosen.norm), y(chosen.misfit)),
    textMark("title", LEFT, TOP - 9, "Misfit against norm of the source"),
    textMark("axis middle", LEFT + INNER.width / 2, HEIGHT - 8, `Norm, ${delivery.field}·√m`),
  );
  return figureSvg(WIDTH, HEIGHT, title, parts.join(""));
}

/** The curve is convex and falls, so that the corners below left and above right of the point are free of it. */
function chosenLabel(x: number, y: number): string {
  const below = y + 24 < TOP + INNER.height && x - 62 > LEFT;
  return below
    ? textMark("chosenname end", x - 8, y + 19, "chosen")
    : textMark("chosenname", x + 9, Math.max(TOP + 14, y - 9), "chosen");
}

const tickText = (tick: number): string => (tick >= 1e-3 && tick < 1e5 ? exactText(tick) : figureText(tick, 2));

type LogScale = ScaleLogarithmic<number, number>;

function logScale(values: readonly number[], from: number, to: number): LogScale | undefined {
  const [least, greatest] = extent(values.filter((value) => Number.isFinite(value) && value > 0));
  if (least === undefined || greatest === undefined) return undefined;
  const air = Math.max(1.12, (greatest / least) ** 0.05);
  return scaleLog([least / air, greatest * air], [from, to]);
}

/** Within a decade, finest first. */
const STEPS = [
  [1, 1.2, 1.5, 2, 2.5, 3, 4, 5, 6, 7, 8, 9],
  [1, 1.5, 2, 3, 4, 5, 6, 8],
  [1, 2, 3, 5],
  [1, 2, 5],
  [1, 3],
  [1],
] as const;

/** As many round numbers as their figures have room: 50 px across, 24 px down. */
function logTicks(scale: LogScale): readonly number[] {
  const [low, high] = scale.domain() as [number, number];
  const [a, b] = scale.range() as [number, number];
  const room = b > a ? 50 : 24;
  const decade = Math.abs(scale(10) - scale(1));
  const closest = (steps: readonly number[]): number =>
    Math.min(...steps.map((step, k) => Math.log10((steps[k + 1] ?? 10) / step)));
  const steps: readonly number[] = STEPS.find((candidate) => decade * closest(candidate) > room) ?? [1];
  const skip = Math.max(1, Math.ceil(room / decade));
  const ticks: number[] = [];
  for (let e = Math.floor(Math.log10(low)); e <= Math.log10(high); ++e)
    for (const step of steps) {
      const tick = Number(`${step}e${e}`);
      if (tick >= low && tick <= high && e % skip === 0) ticks.push(tick);
    }
  return ticks;
}
