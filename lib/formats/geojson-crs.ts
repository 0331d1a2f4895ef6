/** The member `crs` that GeoJSON had before RFC 7946, section 4, did away with it: WGS 84 is passed, all else refused. */
import {InputError} from "../errors.ts";

/** Names under which WGS 84 goes; axis order is longitude, latitude in GeoJSON whatever the name says. */
const WGS84 = /^(urn:(x-)?ogc:def:crs:)?(OGC:[\d.]*:?CRS84h?|EPSG:[\d.]*:?(4326|4979))$/i;

/**
 * @param holder a collection, a feature or a geometry
 * @param words the holder in the message
 * @throws {InputError} `geojson/foreign-crs`
 */
export function refuseForeignCrs(holder: Readonly<Record<string, unknown>>, words: string, file: string): void {
  const crs = Object.hasOwn(holder, "crs") ? holder["crs"] : undefined;
  if (crs === undefined || crs === null) return;
  const name = (crs as {readonly properties?: {readonly name?: unknown} | null}).properties?.name;
  if (typeof name === "string" && WGS84.test(name.trim())) return;
  const found = (typeof name === "string" ? name : (JSON.stringify(crs) ?? "")).slice(0, 80);
  throw new InputError(
    "geojson/foreign-crs",
    `${words} says that its coordinates are in ${found}; GeoJSON holds longitude and latitude on WGS 84. Convert it, for example with ogr2ogr -t_srs EPSG:4326 -lco RFC7946=YES new.geojson old.geojson.`,
    {place: {file}},
  );
}
