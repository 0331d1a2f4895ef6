/** Polygons of longitude and latitude: rings that close and do not cross themselves, and what lies inside. */
import {InputError} from "../errors.ts";

/** Rings as x, y, x, y …, the last position equal to the first. A point is inside the outer ring and in no hole. */
export interface Polygon {
  readonly outer: Float64Array;
  readonly holes: readonly Float64Array[];
}

/**
 * A polygon of rings that were checked one by one.
 * @param rings the outer one, then the holes; longitude, latitude, longitude, latitude …
 * @param words the feature, for messages
 * @throws {InputError} `polygon/too-short`, `polygon/unclosed`, `polygon/antimeridian`, `polygon/crosses-itself`
 */
export function polygonOf(rings: readonly Float64Array[], words: string, file: string): Polygon {
  rings.forEach((ring, k) => {
    checkRing(ring, k === 0 ? words : `${words}, hole ${k}`, file);
  });
  return {outer: rings[0]!, holes: rings.slice(1)};
}

function checkRing(ring: Float64Array, words: string, file: string): void {
  const place = {file};
  const count = ring.length / 2;
  if (count < 4)
    throw new InputError(
      "polygon/too-short",
      `${words} is a polygon of ${count} positions; at least four were needed, the last equal to the first. Draw it again.`,
      {place},
    );
  const last = 2 * (count - 1);
  if (ring[0] !== ring[last] || ring[1] !== ring[last + 1])
    throw new InputError(
      "polygon/unclosed",
      `${words} is not closed: it begins at (${ring[0]}, ${ring[1]}) and ends at (${ring[last]}, ${ring[last + 1]}). Repeat the first position at its end.`,
      {place},
    );
  for (let i = 2; i < ring.length; i += 2)
    if (!(Math.abs(ring[i]! - ring[i - 2]!) <= 180))
      throw new InputError(
        "polygon/antimeridian",
        `${words} goes from longitude ${ring[i - 2]} to ${ring[i]} in one edge. Cut it at the 180° meridian into a MultiPolygon (RFC 7946, section 3.1.9).`,
        {place},
      );
  const crossing = selfCrossing(ring);
  if (crossing !== undefined) {
    const [i, j, x, y] = crossing;
    throw new InputError(
      "polygon/crosses-itself",
      `${words} crosses itself near (${x.toFixed(7)}, ${y.toFixed(7)}), where the edge from position ${i + 1} meets the one from position ${j + 1}. Put its positions in order around the area, or split it in two polygons.`,
      {place},
    );
  }
}

/**
 * Two edges of a ring that cross inside both, as [edge, edge, x, y], the first met from west to east; touching at a
 * position is none. Edges in order of their west end, against those that are not yet passed.
 */
export function selfCrossing(ring: Float64Array): readonly [number, number, number, number] | undefined {
  const edges = ring.length / 2 - 1;
  const west = (i: number): number => Math.min(ring[2 * i]!, ring[2 * i + 2]!);
  const east = (i: number): number => Math.max(ring[2 * i]!, ring[2 * i + 2]!);
  const order = Uint32Array.from({length: edges}, (_, i) => i).sort((i, j) => west(i) - west(j) || i - j);
  let active: number[] = [];
  for (const i of order) {
    const from = west(i);
    active = active.filter((j) => east(j) >= from);
    for (const j of active) {
      const at = crossingOf(ring, Math.min(i, j), Math.max(i, j));
      if (at !== undefined) return [Math.min(i, j), Math.max(i, j), ...at];
    }
    active.push(i);
  }
  return undefined;
}

function crossingOf(ring: Float64Array, i: number, j: number): readonly [number, number] | undefined {
  const [ax, ay, bx, by] = [ring[2 * i]!, ring[2 * i + 1]!, ring[2 * i + 2]!, ring[2 * i + 3]!];
  const [cx, cy, dx, dy] = [ring[2 * j]!, ring[2 * j + 1]!, ring[2 * j + 2]!, ring[2 * j + 3]!];
  const c = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
  const d = (bx - ax) * (dy - ay) - (by - ay) * (dx - ax);
  if (!((c > 0 && d < 0) || (c < 0 && d > 0))) return undefined;
  const a = (dx - cx) * (ay - cy) - (dy - cy) * (ax - cx);
  const b = (dx - cx) * (by - cy) - (dy - cy) * (bx - cx);
  if (!((a > 0 && b < 0) || (a < 0 && b > 0))) return undefined;
  const t = c / (c - d);
  return [cx + t * (dx - cx), cy + t * (dy - cy)];
}

/** Even–odd rule; a point on an edge may fall either way, always the same. */
function insideRing(ring: Float64Array, x: number, y: number): boolean {
  let inside = false;
  for (let i = 2; i < ring.length; i += 2) {
    const [ax, ay, bx, by] = [ring[i - 2]!, ring[i - 1]!, ring[i]!, ring[i + 1]!];
    if (ay > y === by > y) continue;
    const side = (bx - ax) * (y - ay) - (by - ay) * (x - ax);
    if (side > 0 === by > ay) inside = !inside;
  }
  return inside;
}

export const insidePolygon = ({outer, holes}: Polygon, x: number, y: number): boolean =>
  insideRing(outer, x, y) && !holes.some((hole) => insideRing(hole, x, y));
