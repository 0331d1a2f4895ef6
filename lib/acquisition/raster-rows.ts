/**
 * A grid as a survey: each row, or each column, is a line. Two walks: the first checks every
 * pixel, each further one hands out the lines. Memory: one block of rows.
 */
import {InputError} from "../errors.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import type {Raster} from "../formats/geotiff-read.ts";
import type {Track} from "../geometry/track.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import {heightsOf} from "./heights.ts";
import {centre, type OpenedGrid, openGrid} from "./opened-grid.ts";
import type {AcquisitionSettings} from "./settings.ts";
import {transectSurvey} from "./transects.ts";

/** A line of a grid without two pixels to it; the study leaves it out. */
export const EMPTY_ROW = "grid/empty-row";

/**
 * With `--every N` the rows are lines of their own, each with its own answers, and there is no grid of answers.
 * @throws {InputError} those of the grid and, with transects, of these
 */
export async function openRasterSurvey(file: ByteSource, settings: AcquisitionSettings): Promise<Survey> {
  const opened = await openGrid(file, settings);
  const {profiles, every} = settings;
  if (typeof profiles !== "string") return transectSurvey(opened, profiles, settings);
  const {raster, title, delivered, notices, unit} = opened;
  const frame = lineFrame(raster, profiles, unit);
  const lineCount = Math.ceil(frame.lines / (every ?? 1));
  return {
    kind: every === undefined ? "grid" : "lines",
    files: [file.name],
    axes: [{group: "G1", azimuth: profiles === "rows" ? 90 : 0, origin: frame.origin, system: title, lines: lineCount}],
    choices: [],
    delivered,
    notices,
    lineCount,
    grid:
      every === undefined
        ? {
            width: raster.width,
            height: raster.height,
            orientation: profiles,
            step: frame.step,
            spacing: frame.spacing,
          }
        : undefined,
    fromGrid: true,
    lines: () => gridLines(opened, frame, settings),
  };
}

interface LineFrame {
  readonly orientation: "rows" | "columns";
  readonly lines: number;
  readonly pixels: number;
  /** m. */
  readonly step: number;
  readonly spacing: number;
  /** Centre of the pixel of least easting and northing along the lines, in the first line; m. */
  readonly origin: readonly [number, number];
  /** Pixel of chainage zero: the first of a line or the last. */
  readonly first: number;
  /** Chainage of a pixel of a line, and offset of a line, m. */
  chainage(pixel: number): number;
  offset(line: number): number;
}

/** Chainage runs east along rows and north along columns, whichever way the pixels run. */
function lineFrame(raster: Raster, orientation: "rows" | "columns", unit: number): LineFrame {
  const {width, height, affine} = raster;
  const [dx, dy] = [affine.dxCol * unit, affine.dyRow * unit];
  const rows = orientation === "rows";
  const pixels = rows ? width : height;
  const along = rows ? dx : dy;
  const across = rows ? dy : dx;
  const first = along > 0 ? 0 : pixels - 1;
  const [x, y] = centre(raster, rows ? first : 0, rows ? 0 : first);
  return {
    orientation,
    lines: rows ? height : width,
    pixels,
    first,
    step: Math.abs(along),
    spacing: Math.abs(across),
    origin: [x * unit, y * unit],
    chainage: (pixel) => Math.abs(pixel - first) * Math.abs(along),
    // To the left of east is north; to the left of north is west.
    offset: (line) => (rows ? line * across : -line * across) + 0,
  };
}

async function* gridLines(
  {raster, channel, deliver, system, unit}: OpenedGrid,
  frame: LineFrame,
  settings: AcquisitionSettings,
): AsyncGenerator<LineRecord> {
  const {pixels, lines} = frame;
  const every = settings.every ?? 1;
  const digits = String(lines).length;
  const rows = frame.orientation === "rows";
  /** Of a line without gaps; shared by all of them, and never written to. */
  const whole = placesOf(new Float64Array(pixels), pixels);
  const heightsFor = (count: number) => heightsOf(new Map(), count, settings, {file: raster.name});
  const wholeHeights = heightsFor(pixels);
  const id = (line: number) => `${rows ? "row" : "column"}-${String(line + 1).padStart(digits, "0")}`;
  if (rows) {
    for await (const {row0, rows: count, values} of raster.rowBlocks())
      for (let r = 0; r < count; ++r)
        if ((row0 + r) % every === 0)
          yield gridLine(id(row0 + r), row0 + r, values.subarray(r * pixels, (r + 1) * pixels));
  } else {
    for await (const {column0, columns, values} of raster.columnBlocks())
      for (let c = 0; c < columns; ++c)
        if ((column0 + c) % every === 0)
          yield gridLine(id(column0 + c), column0 + c, values.subarray(c * pixels, (c + 1) * pixels));
  }

  function gridLine(name: string, line: number, readings: Float64Array): LineRecord {
    let count = 0;
    for (let pixel = 0; pixel < pixels; ++pixel) if (!Number.isNaN(readings[pixel]!)) ++count;
    if (count < 2)
      return {
        id: name,
        failure: new InputError(
          EMPTY_ROW,
          `${name} of ${raster.name} has ${count === 0 ? "no pixel" : "one pixel"} with a value; two were needed. It is left out.`,
          {place: {file: raster.name, row: line + 1}},
        ),
      };
    const {row, chainage} = count === pixels ? whole : placesOf(readings, count);
    const values = new Float64Array(count);
    for (let k = 0; k < count; ++k) values[k] = readings[row[k]! - 1]! * channel.unit.factor;
    let delivered: {readonly x: Float64Array; readonly y: Float64Array} | undefined;
    let offset: Float64Array | undefined;
    /** Only tables of lines hold them. */
    const coordinates = () => {
      delivered ??= coordinatesOf(row, line);
      return delivered;
    };
    const {notices, ...heights} = count === pixels ? wholeHeights : heightsFor(count);
    const built: SurveyLine = {
      id: name,
      group: "G1",
      stations: {
        count,
        row,
        chainage,
        get offset() {
          offset ??= new Float64Array(count).fill(frame.offset(line));
          return offset;
        },
        get x() {
          return coordinates().x;
        },
        get y() {
          return coordinates().y;
        },
        ...heights,
      },
      channels: [
        {
          role: channel.role,
          observable: channel.observable,
          values,
          noise: channel.noise,
          noiseLength: channel.noiseLength,
          interpolated: true,
        },
      ],
      direction: chainage[count - 1]! < chainage[0]! ? -1 : 1,
      file: raster.name,
      omitted: pixels - count,
      locate: (at) => {
        const pixel = frame.first === 0 ? at / frame.step : frame.first - at / frame.step;
        return deliver(...(rows ? centre(raster, pixel, line) : centre(raster, line, pixel)));
      },
      track: trackOf(line),
      notices,
    };
    return {line: built};
  }

  function placesOf(readings: Float64Array, count: number) {
    const row = new Float64Array(count);
    const chainage = new Float64Array(count);
    let k = 0;
    for (let pixel = 0; pixel < pixels; ++pixel) {
      if (Number.isNaN(readings[pixel]!)) continue;
      row[k] = pixel + 1;
      chainage[k++] = frame.chainage(pixel);
    }
    return {row, chainage};
  }

  function coordinatesOf(row: Float64Array, line: number) {
    const x = new Float64Array(row.length);
    const y = new Float64Array(row.length);
    for (let k = 0; k < row.length; ++k) {
      const pixel = row[k]! - 1;
      [x[k], y[k]] = deliver(...(rows ? centre(raster, pixel, line) : centre(raster, line, pixel)));
    }
    return {x, y};
  }

  /** Between the outermost pixels, in map coordinates. */
  function trackOf(line: number): Track {
    const ends = frame.first === 0 ? [0, pixels - 1] : [pixels - 1, 0];
    const places = ends.map((pixel) => (rows ? centre(raster, pixel, line) : centre(raster, line, pixel)));
    return {
      system,
      chainage: Float64Array.from(ends, (pixel) => frame.chainage(pixel)),
      x: Float64Array.from(places, ([x]) => x),
      y: Float64Array.from(places, ([, y]) => y),
      beyond: rows ? [1 / unit, 0] : [0, 1 / unit],
    };
  }
}
