/** GeoJSON files that options name: zones and transects drawn on the map. */
import {InputError} from "../../lib/errors.ts";
import type {GeoFile} from "../../lib/formats/geojson.ts";
import {areaOf} from "../../lib/geometry/map-area.ts";
import type {MapZone, StripSetting} from "../../lib/study/settings.ts";
import {shown} from "../printable.ts";
import {type Asked, allOf} from "./entry.ts";

/** By path as it was asked. */
export type MapFiles = ReadonlyMap<string, GeoFile>;

/** Source of a regular expression for their paths; by the ending a path is told from an interval. */
export const MAP_PATH_PATTERN = ".*\\.([gG][eE][oO])?[jJ][sS][oO][nN]";
const MAP_PATH = new RegExp(`^${MAP_PATH_PATTERN}$`, "s");

export const isMapPath = (text: string): boolean => MAP_PATH.test(text);

/** Every map file that was asked, once, in the order of the options. */
export const mapPathsOf = (asked: Asked): readonly string[] => [
  ...new Set([
    ...allOf(asked, "support").filter(isMapPath),
    ...allOf(asked, "strips").filter(isMapPath),
    ...allOf(asked, "profiles").filter(isMapPath),
  ]),
];

/** The polygons of a support file. */
export const zonesFrom = ({features, file}: GeoFile): readonly MapZone[] =>
  features.map((feature) => ({area: areaOf(feature, file)}));

/**
 * The strips of a file, each a feature with a name of its own.
 * @throws {InputError} `strip/no-name`, and those of the polygons
 */
export const stripsFrom = ({features, file}: GeoFile): readonly StripSetting[] =>
  features.map((feature) => {
    if (feature.name === undefined)
      throw new InputError(
        "strip/no-name",
        `${feature.words} has no property "name", by which its strip is told apart in strips.csv. Give it one.`,
        {place: {file}},
      );
    return {name: feature.name, area: areaOf(feature, file)};
  });

/** The file behind a path; undefined where files are not looked at. */
export function mapFileAt(option: string, path: string, maps: MapFiles | undefined): GeoFile | undefined {
  if (!isMapPath(path))
    throw new InputError(
      "option/not-a-map-file",
      `${option} ${shown(path)} does not name a GeoJSON file. Give one whose name ends in .geojson or .json.`,
    );
  return maps?.get(path);
}
