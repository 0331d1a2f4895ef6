/** The course of a line on the map, and the parts of it inside polygons. */
import type {CoordinateSystem} from "./crs-definition.ts";
import type {Interval} from "./interval.ts";
import {insidePolygon, type Polygon} from "./polygon.ts";

/** Straight from knot to knot, and straight on beyond the first and the last. */
export interface Track {
  /** The system of x and y; undefined where it is not known. */
  readonly system: CoordinateSystem | undefined;
  /** Of the knots, increasing, m; at least two. */
  readonly chainage: Float64Array;
  /** Of the knots, in the unit of the system. */
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Change of x and y per metre of chainage beyond the ends. */
  readonly beyond: readonly [number, number];
}

/** Ends of the parts are rounded to so many parts of a metre: no map is that true, and equal rows of a grid stay equal. */
const PER_METRE = 1000;

/**
 * The parts of a track inside any of the polygons, disjoint and in order; m of chainage, to the millimetre.
 * @param polygons in the system of the track
 */
export function partsInside(track: Track, polygons: readonly Polygon[]): Interval[] {
  return unionOf(polygons.flatMap((polygon) => partsInPolygon(drawnThrough(track, polygon), polygon)));
}

/** Intervals in order, those that overlap or touch joined. */
export function unionOf(intervals: readonly Interval[]): Interval[] {
  const joined: Interval[] = [];
  for (const next of [...intervals].sort((a, b) => a.from - b.from || a.to - b.to)) {
    const last = joined.at(-1);
    if (last === undefined || next.from > last.to) joined.push(next);
    else if (next.to > last.to) joined[joined.length - 1] = {from: last.from, to: next.to};
  }
  return joined;
}

type Drawn = Pick<Track, "chainage" | "x" | "y">;

/** The track with its ends drawn out past every corner of a polygon. */
function drawnThrough({chainage, x, y, beyond}: Track, {outer}: Polygon): Drawn {
  const speed = Math.hypot(...beyond);
  if (!(speed > 0)) return {chainage, x, y};
  const last = chainage.length - 1;
  const reach = (k: number): number => {
    let farthest = 0;
    for (let i = 0; i < outer.length; i += 2)
      farthest = Math.max(farthest, Math.hypot(outer[i]! - x[k]!, outer[i + 1]! - y[k]!));
    return (1.01 * farthest) / speed + 1;
  };
  const [before, after] = [reach(0), reach(last)];
  return {
    chainage: Float64Array.of(chainage[0]! - before, ...chainage, chainage[last]! + after),
    x: Float64Array.of(x[0]! - before * beyond[0], ...x, x[last]! + after * beyond[0]),
    y: Float64Array.of(y[0]! - before * beyond[1], ...y, y[last]! + after * beyond[1]),
  };
}

function partsInPolygon({chainage, x, y}: Drawn, polygon: Polygon): Interval[] {
  const last = chainage.length - 1;
  const cuts = [chainage[0]!, chainage[last]!];
  for (const ring of [polygon.outer, ...polygon.holes])
    for (let k = 0; k < last; ++k) addCrossings(cuts, ring, x, y, chainage, k);
  cuts.sort((a, b) => a - b);
  const parts: Interval[] = [];
  let segment = 0;
  for (let c = 1; c < cuts.length; ++c) {
    const [from, to] = [round(cuts[c - 1]!), round(cuts[c]!)];
    if (!(from < to)) continue;
    // Between two crossings all of the track lies on one side: the middle stands for it.
    const middle = 0.5 * (cuts[c - 1]! + cuts[c]!);
    while (segment < last - 1 && chainage[segment + 1]! < middle) ++segment;
    const t = (middle - chainage[segment]!) / (chainage[segment + 1]! - chainage[segment]!);
    const at = (values: Float64Array): number => values[segment]! + t * (values[segment + 1]! - values[segment]!);
    if (insidePolygon(polygon, at(x), at(y))) parts.push({from, to});
  }
  return unionOf(parts);
}

const round = (metres: number): number => Math.round(metres * PER_METRE) / PER_METRE;

/** Chainages at which the track's segment from knot k crosses a ring. */
function addCrossings(
  cuts: number[],
  ring: Float64Array,
  x: Float64Array,
  y: Float64Array,
  chainage: Float64Array,
  k: number,
): void {
  const [ax, ay] = [x[k]!, y[k]!];
  const [ux, uy] = [x[k + 1]! - ax, y[k + 1]! - ay];
  let before = ux * (ring[1]! - ay) - uy * (ring[0]! - ax);
  for (let i = 2; i < ring.length; i += 2) {
    const side = ux * (ring[i + 1]! - ay) - uy * (ring[i]! - ax);
    if (side > 0 !== before > 0) {
      const [cx, cy] = [ring[i - 2]! - ax, ring[i - 1]! - ay];
      const [vx, vy] = [ring[i]! - ring[i - 2]!, ring[i + 1]! - ring[i - 1]!];
      const t = (cx * vy - cy * vx) / (ux * vy - uy * vx);
      // A crossing at a knot belongs to both segments; twice the same cut does no harm.
      if (t > -1e-9 && t < 1 + 1e-9) cuts.push(chainage[k]! + t * (chainage[k + 1]! - chainage[k]!));
    }
    before = side;
  }
}
