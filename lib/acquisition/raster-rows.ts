/**
 * A grid as a survey: each row, or each column, is a line. Two walks: the first checks every
 * pixel, each further one hands out the lines. Memory: one block of rows.
 */
import {InputError} from "../errors.ts";
import {pixelCentreX, pixelCentreY} from "../formats/affine.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import {openRaster, type Raster} from "../formats/geotiff-read.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import type {CoordinateSystem} from "../geometry/crs-definition.ts";
import {crsFromGeoKeys} from "../geometry/geo-keys.ts";
import {type Position, transformation} from "../geometry/transformation.ts";
import {doubt, type Notice} from "../notice.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import {anomalyCheck} from "./anomaly-check.ts";
import {type ChannelPlan, channelPlans} from "./channel-plan.ts";
import {fieldUnit} from "./header-names.ts";
import {checkHeightSettings, heightsOf} from "./heights.ts";
import {scaleDoubts} from "./scale-doubts.ts";
import type {AcquisitionSettings} from "./settings.ts";

/** A line of a grid without two pixels to it; the study leaves it out. */
export const EMPTY_ROW = "grid/empty-row";

/**
 * @throws {InputError} `grid/columns-asked`, `grid/one-channel`, `grid/geographic`, `grid/empty`, `noise/grid-needs-number`,
 *   `height/none`, `value/not-an-anomaly`, and those of the raster and the coordinate system
 */
export async function openRasterSurvey(file: ByteSource, settings: AcquisitionSettings): Promise<Survey> {
  const place = {file: file.name};
  const channels = channelPlans(settings.channels);
  const channel = channels[0]!;
  if (settings.columns.size > 0)
    throw new InputError("grid/columns-asked", `${file.name} is a grid and has no columns; leave --column out.`, {
      place,
    });
  if (channels.length > 1)
    throw new InputError(
      "grid/one-channel",
      `${file.name} is a grid of one kind of reading, but ${channels.length} channels were asked for. Give --observable once.`,
      {place},
    );
  if (channel.noise === "record" && settings.inspecting !== true)
    throw new InputError(
      "noise/grid-needs-number",
      `The noise of a grid cannot be taken from its record: ${file.name} was interpolated, which leaves it smooth. Give the standard deviation with --noise S.`,
      {place},
    );
  const heightNotices = checkHeightSettings(new Set(), settings, place);
  const raster = await openRaster(file);
  const {system, unit, notices} = systemOf(raster, settings);
  notices.unshift(...raster.notices, ...heightNotices);
  const written = fieldUnit(raster.unit?.trim().toLowerCase());
  if (written !== undefined && written !== channel.unit.symbol)
    notices.push(
      doubt(
        "grid/unit",
        `${file.name} says that it is in ${written}, but it is read in ${channel.unit.symbol}. Give --unit ${written} if the file is right.`,
        place,
      ),
    );
  await checkPixels(raster, channel);
  const out = settings.outCrs === undefined ? undefined : coordinateSystem(settings.outCrs);
  if (out !== undefined && system === undefined)
    throw new InputError(
      "crs/needed",
      `Coordinates were to be delivered in ${settings.outCrs}, but the system of ${file.name} is not known. Give it with --crs EPSG:n.`,
      {place},
    );
  const way = out === undefined || system === undefined ? undefined : transformation(system, out);
  if (out !== undefined) notices.push(...out.notices);
  if (way !== undefined) notices.push(...way.notices);
  if (system !== undefined) {
    const [right, bottom] = [raster.width - 1, raster.height - 1];
    const corners = [0, right].flatMap((c) => [0, bottom].map((r) => centre(raster, c, r)));
    notices.push(...scaleDoubts(system, corners));
  }
  const deliver = (x: number, y: number): Position => (way === undefined ? [x, y] : way.apply(x, y));
  const frame = lineFrame(raster, settings.profiles, unit);
  const title = system === undefined ? `map units of ${unit} m` : `${system.name} (${system.title})`;
  return {
    kind: "grid",
    files: [file.name],
    axes: [
      {
        group: "G1",
        azimuth: settings.profiles === "rows" ? 90 : 0,
        origin: frame.origin,
        system: unit === 1 ? title : `${title}, in metres`,
        lines: frame.lines,
      },
    ],
    choices: [],
    delivered: out?.name ?? system?.name ?? "map units of the grid",
    notices,
    lineCount: frame.lines,
    grid: {
      width: raster.width,
      height: raster.height,
      orientation: settings.profiles,
      step: frame.step,
      spacing: frame.spacing,
    },
    lines: () => gridLines(raster, frame, channel, settings, deliver),
  };
}

function systemOf(raster: Raster, settings: AcquisitionSettings) {
  const place = {file: raster.name};
  const {kind, epsg, linearUnit, citation} = raster.crs;
  const refuse = (what: string) =>
    new InputError(
      "grid/geographic",
      `${raster.name} is ${what}, and lines of a grid are measured in metres. Reproject it first, for example with gdalwarp -t_srs EPSG:n, to a projected system of the area.`,
      {place},
    );
  if (settings.crs === undefined && kind === "geographic") throw refuse("a grid in degrees");
  const notices: Notice[] = [];
  let system: CoordinateSystem | undefined;
  let unit: number | undefined;
  if (settings.crs !== undefined) {
    system = coordinateSystem(settings.crs);
    unit = system.metresPerUnit;
  } else {
    const found = crsFromGeoKeys({
      ...(kind === "projected" ? {GTModelTypeGeoKey: 1} : {}),
      ...(epsg === undefined ? {} : {ProjectedCSTypeGeoKey: epsg}),
      ...(linearUnit === undefined ? {} : {ProjLinearUnitsGeoKey: linearUnit}),
      ...(citation === undefined ? {} : {GTCitationGeoKey: citation}),
    });
    system = found.system;
    unit = found.metresPerUnit;
    notices.push(...found.notices);
  }
  if (system?.kind === "geographic") throw refuse(`said to be in degrees (${system.name})`);
  if (system !== undefined) notices.push(...system.notices);
  return {system, unit: unit ?? 1, notices};
}

/** Every pixel decoded once: damage, infinities and readings that are no anomalies stop the work here. */
async function checkPixels(raster: Raster, channel: ChannelPlan): Promise<void> {
  const check = anomalyCheck(channel);
  let filled = 0;
  for await (const {values} of raster.rowBlocks()) {
    const readings = values.filter((value) => !Number.isNaN(value));
    filled += readings.length;
    check.add(readings);
  }
  if (filled === 0)
    throw new InputError(
      "grid/empty",
      `${raster.name} has no pixel with a value: all ${raster.width} × ${raster.height} are nodata. Check the nodata value with gdalinfo.`,
      {place: {file: raster.name}},
    );
  check.finish({file: raster.name});
}

const centre = (raster: Raster, column: number, row: number): readonly [number, number] => [
  pixelCentreX(raster.affine, column),
  pixelCentreY(raster.affine, row),
];

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
  raster: Raster,
  frame: LineFrame,
  channel: ChannelPlan,
  settings: AcquisitionSettings,
  deliver: (x: number, y: number) => Position,
): AsyncGenerator<LineRecord> {
  const {pixels, lines} = frame;
  const digits = String(lines).length;
  const rows = frame.orientation === "rows";
  const id = (line: number) => `${rows ? "row" : "column"}-${String(line + 1).padStart(digits, "0")}`;
  if (rows)
    for await (const {row0, rows: count, values} of raster.rowBlocks())
      for (let r = 0; r < count; ++r)
        yield gridLine(id(row0 + r), row0 + r, values.subarray(r * pixels, (r + 1) * pixels));
  else
    for await (const {column0, columns, values} of raster.columnBlocks())
      for (let c = 0; c < columns; ++c)
        yield gridLine(id(column0 + c), column0 + c, values.subarray(c * pixels, (c + 1) * pixels));

  function gridLine(name: string, line: number, readings: Float64Array): LineRecord {
    let count = 0;
    for (const value of readings) if (!Number.isNaN(value)) ++count;
    if (count < 2)
      return {
        id: name,
        failure: new InputError(
          EMPTY_ROW,
          `${name} of ${raster.name} has ${count === 0 ? "no pixel" : "one pixel"} with a value; two were needed. It is left out.`,
          {place: {file: raster.name, row: line + 1}},
        ),
      };
    const row = new Float64Array(count);
    const chainage = new Float64Array(count);
    const x = new Float64Array(count);
    const y = new Float64Array(count);
    const values = new Float64Array(count);
    let k = 0;
    for (let pixel = 0; pixel < pixels; ++pixel) {
      const value = readings[pixel]!;
      if (Number.isNaN(value)) continue;
      row[k] = pixel + 1;
      chainage[k] = frame.chainage(pixel);
      [x[k], y[k]] = deliver(...(rows ? centre(raster, pixel, line) : centre(raster, line, pixel)));
      values[k++] = value * channel.unit.factor;
    }
    const {notices, ...heights} = heightsOf(new Map(), count, settings, {file: raster.name});
    const built: SurveyLine = {
      id: name,
      group: "G1",
      stations: {count, row, chainage, offset: new Float64Array(count).fill(frame.offset(line)), x, y, ...heights},
      channels: [{role: channel.role, observable: channel.observable, values, noise: channel.noise}],
      direction: chainage[count - 1]! < chainage[0]! ? -1 : 1,
      file: raster.name,
      omitted: pixels - count,
      locate: (at) => {
        const pixel = frame.first === 0 ? at / frame.step : frame.first - at / frame.step;
        return deliver(...(rows ? centre(raster, pixel, line) : centre(raster, line, pixel)));
      },
      notices,
    };
    return {line: built};
  }
}
