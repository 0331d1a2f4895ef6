/** Averaging kernels at a handful of places beside one another on one scale, and the width along the line below. */
import {scaleLinear} from "d3-scale";
import type {AveragingKernel} from "../../inverse/nouns.ts";
import type {LineStudy} from "../../study/outcome.ts";
import {nameText} from "../html.ts";
import {metreText} from "../number-text.ts";
import {abscissaFigures, abscissaGrid, type Frame, frameGround, frameTitle, ordinate} from "./frame.ts";
import {boxMark, clipped, curveMark, figureSvg, textMark} from "./svg.ts";

const WIDTH = 860;
const LEFT = 68;
const RIGHT = 14;
const GAP = 12;
const KERNEL = {top: 46, height: 110} as const;
const WIDTHS = {top: 236, height: 110} as const;

/** Empty where nothing is resolved. */
export function kernelsFigure(study: LineStudy): string {
  const {kernels, resolution, panels, line} = study;
  if (kernels.length === 0) return "";
  const room = (WIDTH - LEFT - RIGHT - GAP * (kernels.length - 1)) / kernels.length;
  const y = ordinate([0, ...kernels.flatMap(({value}) => [...value])], KERNEL.top, KERNEL.height);
  const parts = kernels.map((kernel, k) => {
    const left = LEFT + k * (room + GAP);
    const offsets = kernel.chainage.map((t) => t - kernel.at);
    const x = scaleLinear([offsets[0]!, offsets.at(-1)!], [left, left + room]);
    const frame: Frame = {left, top: KERNEL.top, width: room, height: KERNEL.height, x, y};
    return kernelPlot(frame, kernel, offsets, k === 0);
  });

  const stations = line.stations.chainage;
  const first = stations.reduce((a, b) => Math.min(a, b), Infinity);
  const last = stations.reduce((a, b) => Math.max(a, b), -Infinity);
  const below = [...panels.centre.keys()].filter((j) => panels.centre[j]! >= first && panels.centre[j]! <= last);
  const widths = below.map((j) => resolution.local[j]!);
  const frame: Frame = {
    left: LEFT,
    ...WIDTHS,
    width: WIDTH - LEFT - RIGHT,
    x: scaleLinear([first, last], [LEFT, WIDTH - RIGHT]),
    y: ordinate([0, ...widths], WIDTHS.top, WIDTHS.height),
  };
  const along = below.map((j) => frame.x(panels.centre[j]!));
  parts.push(
    frameGround(frame),
    abscissaGrid(frame),
    curveMark(
      "average",
      along,
      widths.map((width) => (Number.isFinite(width) ? frame.y(width) : Number.NaN)),
    ),
    frameTitle(frame, "Width of the averaging kernel, m", [{mark: "line", kind: "average", text: "1/R(x, x)"}]),
    abscissaFigures(frame, "Chainage, m"),
    textMark(
      "title",
      LEFT,
      18,
      "Averaging kernels R(x, ·), 1/m: what the estimate at x is an average of the source with",
    ),
  );
  const description = `Line ${nameText(line.id)}: averaging kernels at ${kernels.length} places, and their width along chainage`;
  return figureSvg(WIDTH, WIDTHS.top + WIDTHS.height + 44, description, parts.join(""));
}

function kernelPlot(
  frame: Frame,
  {at, width, value}: AveragingKernel,
  offsets: Float64Array,
  withFigures: boolean,
): string {
  const {left, top, width: room, height, x, y} = frame;
  const box = boxMark("expected", x(-width / 2), y(1 / width), x(width / 2) - x(-width / 2), y(0) - y(1 / width));
  const curve = curveMark("average", Array.from(offsets, x), Array.from(value, y));
  return [
    withFigures ? frameGround(frame) : boxMark("ground", left, top, room, height),
    clipped(left, top, room, height, box + curve),
    textMark("key", left, top - 8, `x = ${metreText(at)} m, width ${metreText(Number(width.toPrecision(3)))} m`),
    textMark("tick", left, top + height + 15, `−${metreText(-offsets[0]!)}`),
    textMark("tick middle", left + room / 2, top + height + 15, "t − x, m"),
    textMark("tick end", left + room, top + height + 15, metreText(offsets.at(-1)!)),
  ].join("");
}
