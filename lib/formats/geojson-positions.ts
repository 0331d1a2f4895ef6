/** Lists of positions of a GeoJSON file, each number checked. */
import {InputError} from "../errors.ts";

export interface PositionReader {
  list(value: unknown, words: string): readonly unknown[];
  /** One list of positions: longitude, latitude, longitude, latitude … in degrees. */
  line(value: unknown, words: string): Float64Array;
  lines(value: unknown, words: string): Float64Array[];
}

/** Positions of one file together; self-crossing rings are sought among all pairs at worst. A heuristic. */
const MOST_POSITIONS = 200_000;

/**
 * Counts the positions of one file.
 * @throws {InputError} from its functions: `geojson/position`, `geojson/latitude-range`, `geojson/longitude-range`,
 *   `geojson/too-many-positions`
 */
export function positionReader(file: string): PositionReader {
  let seen = 0;
  const place = {file};
  const list = (value: unknown, words: string): readonly unknown[] => {
    if (Array.isArray(value)) return value;
    throw new InputError(
      "geojson/position",
      `${words} has ${JSON.stringify(value)?.slice(0, 60) ?? "nothing"} where a list of coordinates was needed. Export it again as GeoJSON.`,
      {place},
    );
  };
  const line = (value: unknown, words: string): Float64Array => {
    const positions = list(value, words);
    seen += positions.length;
    if (!(seen <= MOST_POSITIONS))
      throw new InputError(
        "geojson/too-many-positions",
        `${file} has more than ${MOST_POSITIONS} positions, which is more than is read. Keep only the features of this survey, or simplify them, for example with ogr2ogr -simplify.`,
        {place},
      );
    const read = new Float64Array(2 * positions.length);
    positions.forEach((position, i) => {
      const [longitude, latitude] = list(position, words);
      if (!(Number.isFinite(longitude) && Number.isFinite(latitude)))
        throw new InputError(
          "geojson/position",
          `${words}, position ${i + 1} is ${JSON.stringify(position)?.slice(0, 60)}; longitude and latitude in degrees were needed. Correct it.`,
          {place},
        );
      read[2 * i] = longitude as number;
      read[2 * i + 1] = latitude as number;
      checkDegrees(read[2 * i]!, read[2 * i + 1]!, `${words}, position ${i + 1}`, file);
    });
    return read;
  };
  return {list, line, lines: (value, words) => list(value, words).map((each) => line(each, words))};
}

function checkDegrees(longitude: number, latitude: number, words: string, file: string): void {
  const place = {file};
  const found = `${words} is (${longitude}, ${latitude})`;
  if (Math.abs(longitude) > 360)
    throw new InputError(
      "geojson/longitude-range",
      `${found}, which is not longitude and latitude in degrees but looks like metres. Convert the file, for example with ogr2ogr -t_srs EPSG:4326 new.geojson old.geojson.`,
      {place},
    );
  if (Math.abs(latitude) > 90)
    throw new InputError(
      "geojson/latitude-range",
      `${found}: latitude ${latitude} lies beyond ±90°. GeoJSON gives longitude first; ${
        Math.abs(longitude) <= 90 ? "the two look swapped. Exchange them in the file." : "correct the position."
      }`,
      {place},
    );
}
