/**
 * GeoJSON as features with checked positions. Source: RFC 7946; positions are longitude, latitude in degrees
 * on WGS 84. Polygons and lines are taken, alone, in features or in a collection of features.
 */
import {InputError} from "../errors.ts";
import type {ByteSource} from "./byte-source.ts";
import {refuseForeignCrs} from "./geojson-crs.ts";
import {type PositionReader, positionReader} from "./geojson-positions.ts";

export interface GeoFeature {
  /** Place in the file, from 1. */
  readonly number: number;
  /** The feature in messages: `zones.geojson, feature 2 ("dyke")`. */
  readonly words: string;
  /** Its property `name`, trimmed; undefined where it has none. */
  readonly name: string | undefined;
  /** Each polygon: its outer ring, then its holes; longitude, latitude, longitude, latitude … */
  readonly polygons: readonly (readonly Float64Array[])[];
  /** Each line: longitude, latitude, longitude, latitude … */
  readonly lines: readonly Float64Array[];
}

export interface GeoFile {
  readonly file: string;
  readonly features: readonly GeoFeature[];
}

/** Bytes of a file that is still read: zones and transects of a survey take thousands at most. A heuristic. */
const MOST_BYTES = 2 ** 26;

const KINDS = ["Polygon", "MultiPolygon", "LineString", "MultiLineString"] as const;
type Json = Readonly<Record<string, unknown>>;

const isObject = (value: unknown): value is Json =>
  typeof value === "object" && value !== null && !Array.isArray(value);
const shown = (value: unknown): string => {
  const text = JSON.stringify(value) ?? "nothing";
  return text.length > 60 ? `${text.slice(0, 60)}…` : text;
};

/**
 * @throws {InputError} `geojson/too-large`, `geojson/encoding` and those of {@link parseGeoJson}
 */
export async function readGeoJson(source: ByteSource): Promise<GeoFile> {
  const place = {file: source.name};
  if (!(source.size <= MOST_BYTES))
    throw new InputError(
      "geojson/too-large",
      `${source.name} has ${source.size} bytes; at most ${MOST_BYTES} are read. Keep only the features of this survey, for example with ogr2ogr -spat.`,
      {place},
    );
  const bytes = await source.read(0, source.size);
  let text: string;
  try {
    text = new TextDecoder("utf-8", {fatal: true}).decode(bytes);
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    throw new InputError(
      "geojson/encoding",
      `${source.name} is not text in UTF-8, which GeoJSON must be. Save it again as UTF-8.`,
      {place},
    );
  }
  return parseGeoJson(text, source.name);
}

/**
 * @param file its name, for messages
 * @throws {InputError} `geojson/not-json`, `geojson/not-geojson`, `geojson/foreign-crs`, `geojson/no-feature`,
 *   `geojson/no-geometry`, `geojson/geometry-kind`, `geojson/position`, `geojson/latitude-range`,
 *   `geojson/longitude-range`, `geojson/too-many-positions`
 */
export function parseGeoJson(text: string, file: string): GeoFile {
  const root = parsed(text, file);
  const read = positionReader(file);
  const list = isObject(root) && root["type"] === "FeatureCollection" ? root["features"] : [root];
  if (isObject(root)) refuseForeignCrs(root, file, file);
  if (!Array.isArray(list))
    throw notGeoJson(file, `its "features" are ${shown(list)}`, "a list of features was needed");
  if (list.length === 0)
    throw new InputError("geojson/no-feature", `${file} holds no feature; one or more were needed.`, {place: {file}});
  return {file, features: list.map((entry, i) => featureFrom(entry, i + 1, file, read))};
}

const notGeoJson = (file: string, found: string, needed: string): InputError =>
  new InputError("geojson/not-geojson", `${file} is no GeoJSON: ${found}; ${needed}. Export it again as GeoJSON.`, {
    place: {file},
  });

function parsed(text: string, file: string): unknown {
  try {
    return JSON.parse(text.replace(/^\uFEFF/, ""));
  } catch (error) {
    if (!(error instanceof SyntaxError)) throw error;
    const at = /position (\d+)/.exec(error.message)?.[1];
    const row = at === undefined ? undefined : text.slice(0, Number(at)).split("\n").length;
    throw new InputError(
      "geojson/not-json",
      `${file} is not valid JSON${row === undefined ? "" : ` (in row ${row})`}. Export it again as GeoJSON, or mend it there.`,
      {place: row === undefined ? {file} : {file, row}},
    );
  }
}

function featureFrom(entry: unknown, number: number, file: string, read: PositionReader): GeoFeature {
  if (!isObject(entry))
    throw notGeoJson(file, `feature ${number} is ${shown(entry)}`, "a Feature or a geometry was needed");
  const isFeature = entry["type"] === "Feature";
  const name = isFeature ? nameOf(entry["properties"]) : undefined;
  const words = `${file}, feature ${number}${name === undefined ? "" : ` (${shown(name)})`}`;
  const geometry = isFeature ? entry["geometry"] : entry;
  refuseForeignCrs(entry, words, file);
  if (isFeature && !isObject(geometry))
    throw new InputError(
      "geojson/no-geometry",
      `${words} has no geometry; a polygon or a line was needed. Draw it, or remove the feature.`,
      {place: {file}},
    );
  const {type, coordinates} = geometry as {readonly type?: unknown; readonly coordinates?: unknown};
  if (typeof type !== "string") throw notGeoJson(file, `feature ${number} has no "type"`, "a Feature was needed");
  refuseForeignCrs(geometry as Json, words, file);
  const kind = KINDS.find((known) => known === type);
  if (kind === undefined)
    throw new InputError(
      "geojson/geometry-kind",
      `${words} is a ${shown(type)}; ${KINDS.join(", ")} are taken. Remove it, or convert it.`,
      {place: {file}},
    );
  const polygons =
    kind === "Polygon"
      ? [read.lines(coordinates, words)]
      : kind === "MultiPolygon"
        ? read.list(coordinates, words).map((rings) => read.lines(rings, words))
        : [];
  const lines =
    kind === "LineString"
      ? [read.line(coordinates, words)]
      : kind === "MultiLineString"
        ? read.lines(coordinates, words)
        : [];
  if (polygons.length + lines.length === 0 || polygons.some((rings) => rings.length === 0))
    throw new InputError("geojson/no-geometry", `${words} is empty: it has no coordinates. Draw it, or remove it.`, {
      place: {file},
    });
  return {number, words, name, polygons, lines};
}

/** A number counts as a name; white space alone does not. */
function nameOf(properties: unknown): string | undefined {
  if (!isObject(properties) || !Object.hasOwn(properties, "name")) return undefined;
  const {name} = properties as {readonly name: unknown};
  const text = typeof name === "string" ? name.trim() : typeof name === "number" ? String(name) : "";
  return text === "" ? undefined : text;
}
