/**
 * A grid of any size as a picture of at most 600 pixels a side, gathered row by row (or column by
 * column): every pixel of the picture is the mean of a square of grid pixels that hold a value.
 */
import {interpolateCividis} from "d3-scale-chromatic";
import {encodePng} from "../../formats/png.ts";
import type {GridFrame} from "../../survey/survey.ts";
import {scaleBar} from "./map.ts";
import {type Ramp, rampLegend, rampOver} from "./ramp.ts";
import {boxMark, figureSvg, px, textMark} from "./svg.ts";

export interface GridPicture {
  /** Takes row (or column) `index`, SI; NaN has no value. */
  take(index: number, values: Float64Array): void;
  /** The figure. @param title escaped, with the unit. @param delivered SI to that unit */
  figure(title: string, delivered: (si: number) => number): string;
}

const LARGEST = 600;
/** On the page, px. */
const SHOWN = {width: 416, height: 520, top: 24} as const;
const SHADES = 256;

export function gridPicture(frame: GridFrame): GridPicture {
  const factor = Math.max(1, Math.ceil(Math.max(frame.width, frame.height) / LARGEST));
  const width = Math.ceil(frame.width / factor);
  const height = Math.ceil(frame.height / factor);
  const sum = new Float64Array(width * height);
  const count = new Uint32Array(width * height);
  /** Some pictures are shown twice. */
  let drawn: Drawing | undefined;
  const drawing = (mean: Float64Array): Drawing => ({...coloured(mean, width, height), width, height, factor});
  const along = frame.orientation === "rows" ? {each: 1, line: width} : {each: width, line: 1};
  return {
    take(index, values) {
      let cell = Math.floor(index / factor) * along.line;
      for (let from = 0; from < values.length; from += factor, cell += along.each) {
        const to = Math.min(from + factor, values.length);
        for (let i = from; i < to; ++i) {
          const value = values[i]!;
          if (!Number.isFinite(value)) continue;
          sum[cell]! += value;
          ++count[cell]!;
        }
      }
    },
    figure(title, delivered) {
      drawn ??= drawing(sum.map((total, cell) => (count[cell]! > 0 ? delivered(total / count[cell]!) : Number.NaN)));
      return picture(frame, drawn, title);
    },
  };
}

/** Red, green and blue of `rgb(r, g, b)`. */
const channels = (colour: string): readonly number[] => colour.match(/\d+/g)!.map(Number);

interface Drawing {
  readonly ramp: Ramp;
  /** PNG, base64. */
  readonly data: string;
  readonly width: number;
  readonly height: number;
  /** Pixels of the grid to one of the picture. */
  readonly factor: number;
}

function coloured(mean: Float64Array, width: number, height: number): Pick<Drawing, "ramp" | "data"> {
  const ramp = rampOver(mean);
  const shades = Array.from({length: SHADES}, (_, k) => channels(interpolateCividis((k + 0.5) / SHADES)));
  const pixels = new Uint8Array(4 * width * height);
  for (let cell = 0; cell < mean.length; ++cell) {
    if (Number.isNaN(mean[cell]!)) continue;
    const share = (mean[cell]! - ramp.low) / (ramp.high - ramp.low);
    const shade = shades[Math.max(0, Math.min(SHADES - 1, Math.floor(SHADES * share)))]!;
    pixels[4 * cell] = shade[0]!;
    pixels[4 * cell + 1] = shade[1]!;
    pixels[4 * cell + 2] = shade[2]!;
    pixels[4 * cell + 3] = 255;
  }
  return {ramp, data: Buffer.from(encodePng(width, height, pixels, 4)).toString("base64")};
}

function picture(frame: GridFrame, {ramp, data, width, height, factor}: Drawing, title: string): string {
  const [dx, dy] = frame.orientation === "rows" ? [frame.step, frame.spacing] : [frame.spacing, frame.step];
  // The picture may reach a little beyond the grid, where its last squares are cut.
  const metres = {x: width * factor * dx, y: height * factor * dy};
  const scale = Math.min(SHOWN.width / metres.x, SHOWN.height / metres.y);
  const shown = {x: Math.max(1, metres.x * scale), y: Math.max(1, metres.y * scale)};
  const bottom = SHOWN.top + shown.y;
  return figureSvg(
    SHOWN.width,
    bottom + 62,
    title,
    [
      textMark("title", 0, SHOWN.top - 9, title),
      boxMark("flank", 0, SHOWN.top, shown.x, shown.y),
      `<image x="0" y="${SHOWN.top}" width="${px(shown.x)}" height="${px(shown.y)}" preserveAspectRatio="none" href="data:image/png;base64,${data}"/>`,
      scaleBar(0, bottom + 34, 1 / scale),
      rampLegend(ramp, SHOWN.width - 242, bottom + 6, ""),
    ].join(""),
  );
}
