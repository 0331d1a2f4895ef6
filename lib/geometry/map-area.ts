/** An area of the map: polygons in longitude and latitude, and the same in a metric system. */
import {InputError} from "../errors.ts";
import type {GeoFeature} from "../formats/geojson.ts";
import {type Polygon, polygonOf} from "./polygon.ts";
import type {Transformation} from "./transformation.ts";

export interface MapArea {
  readonly file: string;
  /** Its feature, for messages. */
  readonly words: string;
  /** Longitude and latitude on WGS 84, degrees; at least one. Overlaps count once. */
  readonly polygons: readonly Polygon[];
}

/**
 * @throws {InputError} `polygon/none` for a feature of lines, and those of {@link polygonOf}
 */
export function areaOf({words, polygons, lines}: GeoFeature, file: string): MapArea {
  if (lines.length > 0)
    throw new InputError(
      "polygon/none",
      `${words} is a line; a polygon was needed. Draw it as an area, or remove it.`,
      {
        place: {file},
      },
    );
  return {file, words, polygons: polygons.map((rings) => polygonOf(rings, words, file))};
}

/** Edges are straight in longitude and latitude (RFC 7946, section 3.1.1); so near to that they are drawn, m. */
const TOLERANCE = 0.01;
/** Longest piece of an edge, degrees: with it one look at its middle tells how far it departs from straight. */
const LONGEST = 0.5;
/** Halvings of an edge at most: 360° in pieces of 40 m. */
const DEEPEST = 20;

/** @param way from longitude and latitude to a projected system; @returns polygons in the unit of that system */
export function projectedPolygons({polygons, file}: MapArea, way: Transformation): Polygon[] {
  const tolerance = TOLERANCE / (way.to.metresPerUnit ?? 1);
  const place = {file};
  const project = (ring: Float64Array): Float64Array => {
    const drawn: number[] = [];
    const drawTo = (
      [lonA, latA, xA, yA]: readonly number[],
      [lonB, latB, xB, yB]: readonly number[],
      depth: number,
    ): void => {
      const [lon, lat] = [0.5 * (lonA! + lonB!), 0.5 * (latA! + latB!)];
      const [x, y] = way.apply(lon, lat, place);
      const off = Math.hypot(x - 0.5 * (xA! + xB!), y - 0.5 * (yA! + yB!));
      const long = Math.max(Math.abs(lonB! - lonA!), Math.abs(latB! - latA!)) > LONGEST;
      if ((off > tolerance || long) && depth < DEEPEST) {
        drawTo([lonA!, latA!, xA!, yA!], [lon, lat, x, y], depth + 1);
        drawTo([lon, lat, x, y], [lonB!, latB!, xB!, yB!], depth + 1);
      } else drawn.push(xB!, yB!);
    };
    let from: readonly number[] = [ring[0]!, ring[1]!, ...way.apply(ring[0]!, ring[1]!, place)];
    drawn.push(from[2]!, from[3]!);
    for (let i = 2; i < ring.length; i += 2) {
      const to = [ring[i]!, ring[i + 1]!, ...way.apply(ring[i]!, ring[i + 1]!, place)];
      drawTo(from, to, 0);
      from = to;
    }
    return Float64Array.from(drawn);
  };
  return polygons.map(({outer, holes}) => ({outer: project(outer), holes: holes.map(project)}));
}
