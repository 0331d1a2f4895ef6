/**
 * Where polylines cross each other. Runs of segments stand in a packed tree of boxes (flatbush: Agafonkin; packed
 * Hilbert R-tree, Kamel & Faloutsos, VLDB 1994, from memory); pairs of runs whose boxes meet are looked at closer:
 * first whether one lies wholly to one side of the other, which disposes of parallel neighbours, then segment by
 * segment.
 *
 * A polyline is not compared with itself. Parallel segments do not cross, also where they lie on each other.
 * Touching counts, and a place that several segments share, at a vertex of either polyline, counts once.
 */
import Flatbush from "flatbush";

export interface Polyline {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/** One entry a crossing, by first polyline, then second, then along the first. */
export interface PolylineCrossings {
  readonly count: number;
  /** Numbers of the polylines; first < second. */
  readonly first: Uint32Array;
  readonly second: Uint32Array;
  /** Where along each: number of a vertex and share of the segment after it, 3.25. */
  readonly firstAt: Float64Array;
  readonly secondAt: Float64Array;
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/** Segments in a run: 16 to 64 took the same time within a tenth on ten million segments (heuristic). */
const RUN = 32;
/** Share of a segment by which it may fall short of another and still touch it: rounding, no more. */
const TOUCH = 1e-9;
/** Sine of the angle below which segments are parallel: their place of crossing would be rounding. */
const PARALLEL = 1e-9;
/** Crossings of two polylines nearer than this times the largest coordinate are one: rounding, no more. */
const SAME_PLACE = 1e-9;

/** Runs of all polylines, in their order: which polyline, from which segment on. */
interface Runs {
  readonly count: number;
  readonly of: Uint32Array;
  readonly from: Uint32Array;
  /** Least and greatest distance of its vertices to the left of its chord, and along it, times the length of the chord. */
  readonly right: Float64Array;
  readonly left: Float64Array;
  readonly behind: Float64Array;
  readonly ahead: Float64Array;
  readonly index: Flatbush;
  /** Distance within which two places are one. */
  readonly near: number;
}

interface Found {
  readonly second: number;
  readonly firstAt: number;
  readonly secondAt: number;
  readonly x: number;
  readonly y: number;
}

export function polylineCrossings(polylines: readonly Polyline[]): PolylineCrossings {
  const first: number[] = [];
  const second: number[] = [];
  const firstAt: number[] = [];
  const secondAt: number[] = [];
  const x: number[] = [];
  const y: number[] = [];
  const runs = runsOf(polylines);
  for (let run = 0; runs !== undefined && run < runs.count; ) {
    const own = runs.of[run]!;
    const found: Found[] = [];
    for (; run < runs.count && runs.of[run] === own; ++run) crossingsOfRun(polylines, runs, run, found);
    found.sort((a, b) => a.second - b.second || a.firstAt - b.firstAt || a.secondAt - b.secondAt);
    found.forEach((one, i) => {
      if (i > 0 && samePlace(found[i - 1]!, one, runs.near)) return;
      first.push(own);
      second.push(one.second);
      firstAt.push(one.firstAt);
      secondAt.push(one.secondAt);
      x.push(one.x);
      y.push(one.y);
    });
  }
  return {
    count: first.length,
    first: Uint32Array.from(first),
    second: Uint32Array.from(second),
    firstAt: Float64Array.from(firstAt),
    secondAt: Float64Array.from(secondAt),
    x: Float64Array.from(x),
    y: Float64Array.from(y),
  };
}

const samePlace = (a: Found, b: Found, near: number): boolean =>
  a.second === b.second && Math.abs(a.x - b.x) <= near && Math.abs(a.y - b.y) <= near;

/** Segments of a polyline, none where it is a point. */
const segmentsOf = ({x}: Polyline): number => Math.max(0, x.length - 1);

/** Undefined where there is no segment at all, which the tree cannot hold. */
function runsOf(polylines: readonly Polyline[]): Runs | undefined {
  const count = polylines.reduce((sum, polyline) => sum + Math.ceil(segmentsOf(polyline) / RUN), 0);
  if (count === 0) return undefined;
  const of = new Uint32Array(count);
  const from = new Uint32Array(count);
  const right = new Float64Array(count);
  const left = new Float64Array(count);
  const behind = new Float64Array(count);
  const ahead = new Float64Array(count);
  const index = new Flatbush(count);
  let run = 0;
  polylines.forEach((polyline, p) => {
    const {x, y} = polyline;
    const segments = segmentsOf(polyline);
    for (let start = 0; start < segments; start += RUN, ++run) {
      const end = Math.min(start + RUN, segments);
      of[run] = p;
      from[run] = start;
      const [x0, y0] = [x[start]!, y[start]!];
      const [cx, cy] = [x[end]! - x0, y[end]! - y0];
      let [west, east, south, north] = [x0, x0, y0, y0];
      for (let k = start + 1; k <= end; ++k) {
        west = Math.min(west, x[k]!);
        east = Math.max(east, x[k]!);
        south = Math.min(south, y[k]!);
        north = Math.max(north, y[k]!);
        const side = cx * (y[k]! - y0) - cy * (x[k]! - x0);
        right[run] = Math.min(right[run]!, side);
        left[run] = Math.max(left[run]!, side);
        const along = cx * (x[k]! - x0) + cy * (y[k]! - y0);
        behind[run] = Math.min(behind[run]!, along);
        ahead[run] = Math.max(ahead[run]!, along);
      }
      const margin = TOUCH * (east - west + north - south);
      index.add(west - margin, south - margin, east + margin, north + margin);
    }
  });
  index.finish();
  const near = SAME_PLACE * Math.max(-index.minX, index.maxX, -index.minY, index.maxY);
  return {near, count, of, from, right, left, behind, ahead, index};
}

/** Adds the crossings of one run with all polylines after its own. */
function crossingsOfRun(polylines: readonly Polyline[], runs: Runs, run: number, found: Found[]): void {
  const own = runs.of[run]!;
  const a = polylines[own]!;
  const a0 = runs.from[run]!;
  const a1 = Math.min(a0 + RUN, segmentsOf(a));
  let [west, east, south, north] = [Infinity, -Infinity, Infinity, -Infinity];
  for (let k = a0; k <= a1; ++k) {
    west = Math.min(west, a.x[k]!);
    east = Math.max(east, a.x[k]!);
    south = Math.min(south, a.y[k]!);
    north = Math.max(north, a.y[k]!);
  }
  const margin = TOUCH * (east - west + north - south);
  const near = runs.index.search(
    west - margin,
    south - margin,
    east + margin,
    north + margin,
    (other) => runs.of[other]! > own,
  );
  for (const other of near) {
    const b = polylines[runs.of[other]!]!;
    const b0 = runs.from[other]!;
    const b1 = Math.min(b0 + RUN, segmentsOf(b));
    if (apart(a, a0, a1, b, b0, b1, runs, run, other)) continue;
    if (!reaches(a, a0, a1, runs.right[run]!, runs.left[run]!, b, b0, b1)) continue;
    // Only segments that reach into the strip of the other run are tried against each of its segments.
    for (let i = a0; i < a1; ++i)
      if (reaches(b, b0, b1, runs.right[other]!, runs.left[other]!, a, i, i + 1))
        for (let j = b0; j < b1; ++j) addCrossing(a, i, b, j, runs.of[other]!, found);
  }
}

/**
 * Whether the rectangle that a run of `b` fills along its chord lies beyond one edge of the strip of a run of `a`:
 * what parallel lines beside each other are known by at once, whatever their azimuth.
 */
function apart(
  a: Polyline,
  a0: number,
  a1: number,
  b: Polyline,
  b0: number,
  b1: number,
  {right, left, behind, ahead}: Runs,
  run: number,
  other: number,
): boolean {
  const cx = a.x[a1]! - a.x[a0]!;
  const cy = a.y[a1]! - a.y[a0]!;
  const dx = b.x[b1]! - b.x[b0]!;
  const dy = b.y[b1]! - b.y[b0]!;
  const square = dx * dx + dy * dy;
  if (!(square > 0)) return false;
  const at = cx * (b.y[b0]! - a.y[a0]!) - cy * (b.x[b0]! - a.x[a0]!);
  const across = (cx * dy - cy * dx) / square;
  const along = (cx * dx + cy * dy) / square;
  const p = behind[other]! * across;
  const q = ahead[other]! * across;
  const r = right[other]! * along;
  const s = left[other]! * along;
  const least = at + Math.min(p, q) + Math.min(r, s);
  const most = at + Math.max(p, q) + Math.max(r, s);
  const margin = TOUCH * (left[run]! - right[run]! + most - least);
  return least > left[run]! + margin || most < right[run]! - margin;
}

/** Whether vertices b0 … b1 of `b` do not all lie beyond one edge of the strip that a run of `a` fills along its chord. */
function reaches(
  a: Polyline,
  a0: number,
  a1: number,
  right: number,
  left: number,
  b: Polyline,
  b0: number,
  b1: number,
): boolean {
  const x0 = a.x[a0]!;
  const y0 = a.y[a0]!;
  const cx = a.x[a1]! - x0;
  const cy = a.y[a1]! - y0;
  let least = Infinity;
  let most = -Infinity;
  for (let k = b0; k <= b1; ++k) {
    const side = cx * (b.y[k]! - y0) - cy * (b.x[k]! - x0);
    if (side < least) least = side;
    if (side > most) most = side;
  }
  const margin = TOUCH * (left - right + most - least);
  return least <= left + margin && most >= right - margin;
}

function addCrossing(a: Polyline, i: number, b: Polyline, j: number, second: number, found: Found[]): void {
  const ax = a.x[i]!;
  const ay = a.y[i]!;
  const bx = b.x[j]!;
  const by = b.y[j]!;
  const ux = a.x[i + 1]! - ax;
  const uy = a.y[i + 1]! - ay;
  const vx = b.x[j + 1]! - bx;
  const vy = b.y[j + 1]! - by;
  const turn = ux * vy - uy * vx;
  if (!(turn * turn > PARALLEL * PARALLEL * (ux * ux + uy * uy) * (vx * vx + vy * vy))) return;
  const wx = bx - ax;
  const wy = by - ay;
  const t = (wx * vy - wy * vx) / turn;
  if (!(t >= -TOUCH && t <= 1 + TOUCH)) return;
  const s = (wx * uy - wy * ux) / turn;
  if (!(s >= -TOUCH && s <= 1 + TOUCH)) return;
  const within = Math.min(1, Math.max(0, t));
  found.push({
    second,
    firstAt: i + within,
    secondAt: j + Math.min(1, Math.max(0, s)),
    x: ax + within * ux,
    y: ay + within * uy,
  });
}
