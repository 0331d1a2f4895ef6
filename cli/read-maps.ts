/** Reads the GeoJSON files that options name, before options become settings. */
import {type GeoFile, readGeoJson} from "../lib/formats/geojson.ts";
import type {FileDigest} from "../lib/products/record.ts";
import {digestOf, withInputs} from "./inputs.ts";
import type {Host} from "./nouns.ts";
import type {Asked} from "./options/entry.ts";
import {type MapFiles, mapPathsOf} from "./options/map-file.ts";

/** @throws {InputError} `host/…`, `geojson/…` */
export async function readMaps(host: Host, asked: Asked): Promise<{maps: MapFiles; digests: readonly FileDigest[]}> {
  const paths = mapPathsOf(asked);
  return withInputs(host, paths, async (files) => {
    const maps = new Map<string, GeoFile>();
    const digests: FileDigest[] = [];
    for (const [i, file] of files.entries()) {
      maps.set(paths[i]!, await readGeoJson(file));
      digests.push(await digestOf(file));
    }
    return {maps, digests};
  });
}
