/**
 * From the coordinates of the file to metres, and to the coordinates that are delivered.
 *
 * Projected coordinates are worked in as they are. Longitude and latitude go to one transverse
 * Mercator of the survey as long as its scale is within 1e-5 of true on every line, which keeps
 * neighbouring lines matched. Where the survey is wider (28 km from the meridian), each group of
 * lines gets an oblique Mercator along its own axis, whose scale is one along the lines: on a line of
 * 1,300 km along a parallel the transverse one would be 0.6 % off at the ends, the oblique one 1e-5.
 */
import {InputError} from "../errors.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import type {CoordinateSystem} from "../geometry/crs-definition.ts";
import {type OwnProjection, ownMercator, ownObliqueMercator} from "../geometry/own-mercator.ts";
import {largestScaleError} from "../geometry/projection-scale.ts";
import {type Position, transformation} from "../geometry/transformation.ts";
import {type Notice, remark} from "../notice.ts";
import type {Layout} from "./choose-columns.ts";
import {scaleDoubts} from "./scale-doubts.ts";
import type {AcquisitionSettings} from "./settings.ts";
import type {Coordinates} from "./survey-scan.ts";

/** Metres of one system, and back. */
export interface Frame {
  readonly title: string;
  /** The system of the metres; undefined where the data's is not known. */
  readonly system: CoordinateSystem | undefined;
  /** Metres in one unit of that system. */
  readonly unit: number;
  /** Coordinates of the file to metres. */
  metric(a: number, b: number): Position;
  /** Metres to delivered coordinates. */
  delivered(x: number, y: number): Position;
}

export interface Frames {
  /** Coordinates of the file to delivered ones. */
  deliver(a: number, b: number): Position;
  /** Name of the delivered system. */
  readonly deliveredName: string;
  readonly notices: readonly Notice[];
  /** The one frame of a survey, or undefined when each direction needs its own. */
  readonly common: Frame | undefined;
  /** A first frame to tell directions in. */
  readonly first: Frame;
  /** A frame for lines of one direction, from the ends of its lines; `azimuth` in a frame of `around`. */
  around(ends: readonly Coordinates[]): Frame;
  along(ends: readonly Coordinates[], azimuth: number): {frame: Frame; scaleError: number};
}

/** Scale error up to which one transverse Mercator serves a survey. */
const COMMON_SCALE = 1e-5;
/**
 * @param layout not `chainage`
 * @param ends coordinates of the ends of all lines
 * @throws {InputError} `crs/not-projected`, `crs/not-geographic`, `crs/needed`, and those of the coordinate systems
 */
export function framesFor(layout: Layout, settings: AcquisitionSettings, ends: readonly Coordinates[]): Frames {
  return layout === "geographic" ? geographicFrames(settings, ends) : planarFrames(settings, ends);
}

const same = (a: number, b: number): Position => [a, b];

function planarFrames(settings: AcquisitionSettings, ends: readonly Coordinates[]): Frames {
  const notices: Notice[] = [];
  const system = settings.crs === undefined ? undefined : coordinateSystem(settings.crs);
  if (system?.kind === "geographic")
    throw new InputError(
      "crs/not-projected",
      `The columns are x, y, but --crs ${system.name} (${system.title}) is a system of longitude and latitude. Name the columns with --column longitude=NAME and --column latitude=NAME, or give the projected system of x, y.`,
    );
  if (system === undefined) {
    if (settings.outCrs !== undefined)
      throw new InputError(
        "crs/needed",
        `Coordinates were to be delivered in ${settings.outCrs}, but the system of x, y is not known. Give it with --crs EPSG:n.`,
      );
    notices.push(
      remark(
        "crs/metres-assumed",
        "x, y are taken as metres of a flat map, since no --crs was given. Give it to be sure.",
      ),
    );
  } else notices.push(...system.notices);
  const unit = system?.metresPerUnit ?? 1;
  const out = outgoing(system, settings.outCrs, notices);
  if (system !== undefined) notices.push(...scaleDoubts(system, ends));
  const title = system === undefined ? "x, y of the data, taken as metres" : `${system.name} (${system.title})`;
  const frame: Frame = {
    title: unit === 1 ? title : `${title}, in metres`,
    system,
    unit,
    metric: (x, y) => [x * unit, y * unit],
    delivered: (x, y) => out.apply(x / unit, y / unit),
  };
  return {
    deliver: out.apply,
    deliveredName: out.name ?? system?.name ?? "x, y of the data",
    notices,
    common: frame,
    first: frame,
    around: () => frame,
    along: () => ({frame, scaleError: 0}),
  };
}

function geographicFrames(settings: AcquisitionSettings, ends: readonly Coordinates[]): Frames {
  const notices: Notice[] = [];
  const system = coordinateSystem(settings.crs ?? "EPSG:4326");
  if (system.kind !== "geographic")
    throw new InputError(
      "crs/not-geographic",
      `The columns are longitude and latitude, but --crs ${system.name} (${system.title}) is projected. Give the system of longitude and latitude, such as EPSG:4326; for the delivered coordinates there is --out-crs.`,
    );
  if (settings.crs === undefined)
    notices.push(
      remark("crs/wgs84-assumed", "Longitude and latitude are taken as WGS 84 (EPSG:4326), since no --crs was given."),
    );
  notices.push(...system.notices);
  const out = outgoing(system, settings.outCrs, notices);
  const frameOf = (own: OwnProjection): Frame => ({
    title: own.system.title,
    system: own.system,
    unit: 1,
    metric: (longitude, latitude) => own.project(longitude, latitude),
    delivered: (x, y) => out.apply(...own.unproject(x, y)),
  });
  const split = (places: readonly Coordinates[]) =>
    [places.map(([longitude]) => longitude), places.map(([, latitude]) => latitude)] as const;
  const [longitudes, latitudes] = split(ends);
  const own = ends.length > 0 ? ownMercator(longitudes, latitudes, system) : ownMercator([0], [0], system);
  const first = frameOf(own);
  const suffices = largestScaleError(own.system, longitudes, latitudes) <= COMMON_SCALE;
  return {
    deliver: out.apply,
    deliveredName: out.name ?? system.name,
    notices,
    common: suffices ? first : undefined,
    first,
    around: (places) => frameOf(ownMercator(...split(places), system)),
    along: (places, azimuth) => {
      const oblique = ownObliqueMercator(...split(places), system, azimuth);
      return {frame: frameOf(oblique), scaleError: largestScaleError(oblique.system, ...split(places))};
    },
  };
}

function outgoing(system: CoordinateSystem | undefined, outCrs: string | undefined, notices: Notice[]) {
  if (system === undefined || outCrs === undefined) return {apply: same, name: undefined};
  const wanted = coordinateSystem(outCrs);
  const way = transformation(system, wanted);
  notices.push(...wanted.notices, ...way.notices);
  return {apply: (a: number, b: number): Position => way.apply(a, b), name: wanted.name};
}
