/** A grid ready to give lines: its settings, its system and every pixel of it checked. */
import {InputError} from "../errors.ts";
import {pixelCentreX, pixelCentreY} from "../formats/affine.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import {openRaster, type Raster} from "../formats/geotiff-read.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import type {CoordinateSystem} from "../geometry/crs-definition.ts";
import {crsFromGeoKeys} from "../geometry/geo-keys.ts";
import {type Position, transformation} from "../geometry/transformation.ts";
import {doubt, type Notice} from "../notice.ts";
import {anomalyCheck} from "./anomaly-check.ts";
import {type ChannelPlan, channelPlans} from "./channel-plan.ts";
import {fieldUnit} from "./header-names.ts";
import {checkHeightSettings} from "./heights.ts";
import {scaleDoubts} from "./scale-doubts.ts";
import type {AcquisitionSettings} from "./settings.ts";

export interface OpenedGrid {
  readonly raster: Raster;
  readonly channel: ChannelPlan;
  /** The system of its map coordinates; undefined where it is not known. */
  readonly system: CoordinateSystem | undefined;
  /** Metres in one unit of the map. */
  readonly unit: number;
  /** The system in words, for axes. */
  readonly title: string;
  /** Name of the system of the delivered coordinates. */
  readonly delivered: string;
  /** Map coordinates to delivered ones. */
  deliver(x: number, y: number): Position;
  readonly notices: Notice[];
}

/**
 * @throws {InputError} `grid/columns-asked`, `grid/one-channel`, `grid/geographic`, `grid/empty`, `noise/grid-needs-number`,
 *   `height/none`, `value/not-an-anomaly`, and those of the raster and the coordinate system
 */
export async function openGrid(file: ByteSource, settings: AcquisitionSettings): Promise<OpenedGrid> {
  const place = {file: file.name};
  const channels = channelPlans(settings.channels, settings.noiseLength);
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
  const heightNotices = checkHeightSettings(undefined, settings, place);
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
  const words = system === undefined ? `map units of ${unit} m` : `${system.name} (${system.title})`;
  return {
    raster,
    channel,
    system,
    unit,
    title: unit === 1 ? words : `${words}, in metres`,
    delivered: out?.name ?? system?.name ?? "map units of the grid",
    deliver,
    notices,
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
    let count = 0;
    for (let i = 0; i < values.length; ++i) {
      const value = values[i]!;
      if (!Number.isNaN(value)) values[count++] = value;
    }
    filled += count;
    check.add(values.subarray(0, count));
  }
  if (filled === 0)
    throw new InputError(
      "grid/empty",
      `${raster.name} has no pixel with a value: all ${raster.width} × ${raster.height} are nodata. Check the nodata value with gdalinfo.`,
      {place: {file: raster.name}},
    );
  check.finish({file: raster.name});
}

/** Map coordinates of the centre of a pixel. */
export const centre = (raster: Raster, column: number, row: number): readonly [number, number] => [
  pixelCentreX(raster.affine, column),
  pixelCentreY(raster.affine, row),
];
