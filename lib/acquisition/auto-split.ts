/**
 * Where one line ends and the next begins, when no column says so: a turn, a jump aside,
 * a long pause, or standing still. Every constant here is a heuristic that cuts the flight
 * paths we have seen; a column of identifiers is always better.
 */

/** A position for telling headings, m, and seconds or NaN. */
export interface TrackPoint {
  readonly x: number;
  readonly y: number;
  readonly time: number;
}

/** Stations that a heading is told from. */
const LOOK_BACK = 5;
/** Degrees off the line's heading that make a turn. */
const TURN = 30;
/** Steps in units of the usual one: a jump aside, and one too far even straight on. */
const JUMP = 10;
const FAR_JUMP = 100;
/** Pauses in units of the usual one. */
const PAUSE = 20;
/** Progress over the look-back, as a part of the usual one, below which the instrument stands. */
const STANDSTILL = 0.1;
/** Steps that "the usual one" is the middle of. */
const MEMORY = 51;
/** Fewer stations make no line: pieces of turns. */
export const LEAST_STATIONS = 20;

const distance = (a: TrackPoint, b: TrackPoint) => Math.hypot(b.x - a.x, b.y - a.y);

/** The angle between two moves, degrees in [0, 180]; 0 when one is no move. */
function angleBetween(a: TrackPoint, b: TrackPoint, c: TrackPoint, d: TrackPoint): number {
  const [px, py, qx, qy] = [b.x - a.x, b.y - a.y, d.x - c.x, d.y - c.y];
  return Math.abs(Math.atan2(px * qy - py * qx, px * qx + py * qy)) * (180 / Math.PI);
}

const middle = (values: number[]): number => values.toSorted((a, b) => a - b)[values.length >> 1]!;

/**
 * Whether the run of points 0…last must be cut, and before which point.
 * To be asked after each point added; the points before the cut make a run of their own.
 *
 * @param at the points of the run
 * @returns the first point of the next run, or undefined
 */
export function cutBefore(at: (index: number) => TrackPoint, last: number): number | undefined {
  if (last < 2 * LOOK_BACK) return undefined;
  const steps: number[] = [];
  const pauses: number[] = [];
  for (let i = Math.max(1, last - MEMORY); i < last; ++i) {
    const step = distance(at(i - 1), at(i));
    if (step > 0) steps.push(step);
    const pause = at(i).time - at(i - 1).time;
    if (pause > 0) pauses.push(pause);
  }
  if (steps.length < LOOK_BACK) return undefined;
  const usual = middle(steps);
  const step = distance(at(last - 1), at(last));
  const start = at(0);
  if (step > FAR_JUMP * usual) return last;
  if (step > JUMP * usual && angleBetween(start, at(last - 1), at(last - 1), at(last)) > TURN) return last;
  if (pauses.length >= LOOK_BACK && at(last).time - at(last - 1).time > PAUSE * middle(pauses)) return last;
  const back = last - LOOK_BACK;
  if (distance(at(back), at(last)) < STANDSTILL * LOOK_BACK * usual) return back + 1;
  if (angleBetween(start, at(back), at(back), at(last)) > TURN) return back + 1;
  return undefined;
}
