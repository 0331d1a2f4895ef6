/**
 * Transects of a grid: readings taken at the pixel spacing along lines drawn on its map. Each is a line of its own,
 * chainage from its first position along the straight line to its last, offsets from that kept. It is
 * straight from position to position on the map of the grid. Memory: one window of the grid and one line.
 */
import {InputError, type Place} from "../errors.ts";
import type {GeoFile} from "../formats/geojson.ts";
import type {Raster} from "../formats/geotiff-read.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import {transformation} from "../geometry/transformation.ts";
import {doubt, type Notice} from "../notice.ts";
import {chainageAt, offsetAt, pointAt} from "../survey/line-axis.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import {trackKnots, valueAt} from "../survey/track-shape.ts";
import {axisTrack} from "./axis-track.ts";
import {bendDoubts} from "./bend-doubts.ts";
import {readingsAt} from "./grid-readings.ts";
import {heightsOf} from "./heights.ts";
import {identify} from "./line-identifiers.ts";
import type {OpenedGrid} from "./opened-grid.ts";
import {DEFAULT_SAMPLING, samplingNamed} from "./sampling.ts";
import type {AcquisitionSettings} from "./settings.ts";
import {type Path, pathOf, samplesOn} from "./transect-path.ts";

/** A transect without two readings to it; the study leaves it out. */
export const OFF_GRID = "transect/off-grid";

interface Transect {
  readonly id: string;
  readonly path: Path;
}

/**
 * @throws {InputError} `transect/every`, `transect/no-crs`, `transect/not-a-line`, `transect/one-place`, `transect/closed`,
 *   and those of the coordinate systems
 */
export function transectSurvey(grid: OpenedGrid, file: GeoFile, settings: AcquisitionSettings): Survey {
  const {raster, delivered, notices, title} = grid;
  if (settings.every !== undefined)
    throw new InputError(
      "transect/every",
      `--every ${settings.every} counts rows or columns, but ${file.file} gives transects. Leave one of the two out.`,
    );
  const transects = transectsOf(grid, file, notices);
  notices.push(
    doubt(
      "transect/between-pixels",
      `Readings of transects are taken between the pixels of ${raster.name}, which lowers their noise and makes neighbours alike: --noise counts for one pixel. Give the smaller noise if you know it; intervals that count on independent readings are approximate.`,
      {file: raster.name},
    ),
  );
  return {
    kind: "lines",
    files: [raster.name, file.file],
    axes: [
      {
        group: "G1",
        azimuth: undefined,
        origin: undefined,
        system: `from the first position of each transect, on ${title}`,
        lines: transects.length,
      },
    ],
    choices: [],
    delivered,
    notices,
    lineCount: transects.length,
    grid: undefined,
    fromGrid: true,
    async *lines(): AsyncGenerator<LineRecord> {
      for (const transect of transects) yield await sampled(transect, grid, settings, file.file);
    },
  };
}

function transectsOf({system, unit, raster}: OpenedGrid, {file, features}: GeoFile, notices: Notice[]): Transect[] {
  if (system === undefined)
    throw new InputError(
      "transect/no-crs",
      `${file} gives longitude and latitude, but the system of ${raster.name} is not known. Give it with --crs EPSG:n.`,
      {place: {file: raster.name}},
    );
  const way = transformation(coordinateSystem("EPSG:4326"), system);
  notices.push(...way.notices);
  const names: (string | undefined)[] = [];
  const paths: Path[] = [];
  for (const {name, words, lines, polygons} of features) {
    if (polygons.length > 0)
      throw new InputError(
        "transect/not-a-line",
        `${words} is a polygon; a transect is a line. Draw it as a LineString, or remove it.`,
        {place: {file}},
      );
    for (const line of lines) {
      names.push(name);
      paths.push(
        pathOf(
          line,
          (longitude, latitude) => {
            const [x, y] = way.apply(longitude, latitude, {file});
            return [x * unit, y * unit];
          },
          words,
          file,
        ),
      );
    }
  }
  const {ids, repeated} = identify(names);
  if (repeated.length > 0)
    notices.push(
      doubt(
        "line/repeated-identifier",
        `${file} gives ${repeated.length} names to several transects (${repeated
          .slice(0, 5)
          .map((name) => `"${name.slice(0, 60)}"`)
          .join(", ")}); they are called name.1, name.2 … in the order met. Rename them if that is not meant.`,
        {file},
      ),
    );
  return paths.map((path, i) => ({id: ids[i]!, path}));
}

/** Distance between samples, m: the smaller side of a pixel. */
const stepOf = ({affine}: Raster, unit: number): number =>
  unit * Math.min(Math.abs(affine.dxCol), Math.abs(affine.dyRow));

async function sampled(
  {id, path}: Transect,
  grid: OpenedGrid,
  settings: AcquisitionSettings,
  file: string,
): Promise<LineRecord> {
  const {raster, channel, unit, system, deliver} = grid;
  const place: Place = {file};
  const step = stepOf(raster, unit);
  const samples = samplesOn(path, step, raster, unit);
  const readings = await readingsAt(
    raster,
    samplingNamed(settings.sampling ?? DEFAULT_SAMPLING),
    samples.column,
    samples.row,
  );
  const kept = [...readings.keys()].filter((k) => !Number.isNaN(readings[k]!));
  const pick = (of: (k: number) => number): Float64Array => Float64Array.from(kept, of);
  const chainage = pick((k) => chainageAt(path.axis, samples.x[k]!, samples.y[k]!));
  let [least, greatest] = [Infinity, -Infinity];
  for (const at of chainage) [least, greatest] = [Math.min(least, at), Math.max(greatest, at)];
  // A micrometre of chainage is rounding, whatever the grid.
  if (!(greatest - least > 1e-6))
    return {
      id,
      failure: new InputError(
        OFF_GRID,
        `Transect ${id} of ${file} has ${kept.length === 0 ? "no reading" : "one reading"} on ${raster.name}: it lies off the grid or on nodata. It is left out; move it, or correct its coordinates.`,
        {place},
      ),
    };
  const offset = pick((k) => offsetAt(path.axis, samples.x[k]!, samples.y[k]!));
  const delivered = kept.map((k) => deliver(samples.x[k]! / unit, samples.y[k]! / unit));
  const course = trackKnots(chainage, offset);
  const {notices, ...heights} = heightsOf(new Map(), kept.length, settings, place);
  return {
    line: {
      id,
      group: "G1",
      stations: {
        count: kept.length,
        row: pick((k) => samples.number[k]!),
        chainage,
        offset,
        x: Float64Array.from(delivered, ([x]) => x),
        y: Float64Array.from(delivered, ([, y]) => y),
        ...heights,
      },
      channels: [
        {
          role: channel.role,
          observable: channel.observable,
          values: pick((k) => readings[k]! * channel.unit.factor),
          noise: channel.noise,
          noiseLength: channel.noiseLength,
          interpolated: true,
        },
      ],
      file,
      direction: 1,
      omitted: samples.total - kept.length,
      locate: (at) => deliver(...inUnits(pointAt(path.axis, at, valueAt(course, at)), unit)),
      track: axisTrack(path.axis, course, system, unit),
      notices: [...notices, ...bendDoubts(course, step, place)].map((notice) => ({...notice, line: id})),
    },
  };
}

const inUnits = ([x, y]: readonly [number, number], unit: number): [number, number] => [x / unit, y / unit];
