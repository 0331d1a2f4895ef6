/**
 * Lines beside each other at matched chainage: do they read the same (the two-dimensional
 * assumption), and do lines flown one way read higher than those flown the other?
 */
import {correlation, median} from "./order-statistics.ts";
import {MOST_POINTS, type ThinnedLine, thinnedValue} from "./thinned-line.ts";

interface NeighbourPair {
  readonly group: string;
  /** In the order of the lines. */
  readonly lines: readonly [string, string];
  /** Between their mean offsets, m. */
  readonly distance: number;
  /** Chainage that both have, m. */
  readonly from: number;
  readonly to: number;
  /** Of the readings at matched chainage; NaN when one line is constant. */
  readonly correlation: number;
  /** Median of second less first, SI. */
  readonly difference: number;
  readonly sameWay: boolean;
}

interface HeadingFigures {
  /** Pairs of neighbours flown in opposite directions, and the median over them of (along the axis − against), SI. */
  readonly oppositePairs: number;
  readonly opposite: number;
  /** Nearest pairs flown the same way, and the median size of their difference, SI: what lines differ by anyway. */
  readonly sameWayPairs: number;
  readonly sameWay: number;
}

export interface Neighbours {
  readonly pairs: readonly NeighbourPair[];
  readonly heading: HeadingFigures;
  /** Median correlation over the pairs; NaN without pairs. */
  readonly correlation: number;
  /** What the figures say of the two-dimensional assumption. */
  readonly words: string;
}

/** Matched points below which two lines are not compared (heuristic). */
const LEAST_POINTS = 20;
/** Lines looked past for a neighbour that shares some chainage. */
const REACH = 4;

/** @param lines in the order of the files, in which the pairs are given, too */
export function neighbours(lines: readonly ThinnedLine[]): Neighbours {
  const groups = [...new Set(lines.map(({group}) => group))];
  const pairs: NeighbourPair[] = [];
  const opposite: number[] = [];
  const sameWay: number[] = [];
  for (const group of groups) {
    const ordered = lines
      .filter((line) => line.group === group)
      .sort((a, b) => a.meanOffset - b.meanOffset || (a.id < b.id ? -1 : 1));
    ordered.forEach((first, i) => {
      const beyond = ordered.slice(i + 1, i + 1 + REACH);
      const next = firstPair(first, beyond);
      if (next !== undefined) {
        pairs.push(next.pair);
        if (!next.pair.sameWay) opposite.push(first.direction > 0 ? -next.pair.difference : next.pair.difference);
      }
      const alike = firstPair(
        first,
        beyond.filter(({direction}) => direction === first.direction),
      );
      if (alike !== undefined) sameWay.push(Math.abs(alike.pair.difference));
    });
  }
  const correlations = pairs.map((pair) => pair.correlation).filter((value) => !Number.isNaN(value));
  return {
    pairs: inOrder(pairs, lines),
    heading: {
      oppositePairs: opposite.length,
      opposite: median(opposite),
      sameWayPairs: sameWay.length,
      sameWay: median(sameWay),
    },
    correlation: median(correlations),
    words: inWords(correlations),
  };
}

/** By their earlier line, which stands first; the lines are told apart by group and name. */
function inOrder(pairs: readonly NeighbourPair[], lines: readonly ThinnedLine[]): NeighbourPair[] {
  const key = (group: string, id: string): string => `${group}/${id}`;
  const places = new Map(lines.map(({group, id}, i) => [key(group, id), i]));
  const place = ({group, lines: [first, second]}: NeighbourPair): readonly [number, number] => [
    places.get(key(group, first))!,
    places.get(key(group, second))!,
  ];
  return pairs
    .map((pair) => {
      const [first, second] = place(pair);
      return first < second ? pair : turned(pair);
    })
    .sort((a, b) => {
      const [one, other] = [place(a), place(b)];
      return one[0] - other[0] || one[1] - other[1];
    });
}

const turned = (pair: NeighbourPair): NeighbourPair => ({
  ...pair,
  lines: [pair.lines[1], pair.lines[0]],
  // No negative zero.
  difference: 0 - pair.difference,
});

function firstPair(first: ThinnedLine, others: readonly ThinnedLine[]): {pair: NeighbourPair} | undefined {
  for (const second of others) {
    const pair = compare(first, second);
    if (pair !== undefined) return {pair};
  }
  return undefined;
}

/** Undefined when they share too little chainage. */
function compare(first: ThinnedLine, second: ThinnedLine): NeighbourPair | undefined {
  const from = Math.max(first.chainage[0]!, second.chainage[0]!);
  const to = Math.min(first.chainage.at(-1)!, second.chainage.at(-1)!);
  if (!(to > from)) return undefined;
  const points = Math.min(MOST_POINTS, 1 + Math.floor((to - from) / Math.max(first.spacing, second.spacing)));
  const a: number[] = [];
  const b: number[] = [];
  for (let i = 0; i < points; ++i) {
    const at = from + ((to - from) * i) / (points - 1);
    const [one, other] = [thinnedValue(first, at), thinnedValue(second, at)];
    if (Number.isNaN(one) || Number.isNaN(other)) continue;
    a.push(one);
    b.push(other);
  }
  if (a.length < LEAST_POINTS) return undefined;
  return {
    group: first.group,
    lines: [first.id, second.id],
    distance: second.meanOffset - first.meanOffset,
    from,
    to,
    correlation: correlation(a, b),
    difference: median(b.map((value, i) => value - a[i]!)),
    sameWay: first.direction === second.direction,
  };
}

/** The limits 0.9 and 0.6 are a reader's rule of thumb (heuristic). */
function inWords(correlations: readonly number[]): string {
  const middle = median(correlations);
  if (Number.isNaN(middle))
    return "No two lines lie beside each other, so nothing here shows whether the sources run on across the line. Groundward takes it that they do, unchanged and without end.";
  const least = correlations.reduce((low, value) => Math.min(low, value), 1);
  const figures = `${correlations.length} pairs of neighbours: correlation ${middle.toFixed(2)} in the middle, ${least.toFixed(2)} at the least`;
  if (middle >= 0.9 && least >= 0.6)
    return `Neighbouring lines read alike (${figures}). That is what sources that run on across the lines would give, as Groundward takes it.`;
  if (middle >= 0.6)
    return `Neighbouring lines read alike in part (${figures}). Where they differ the sources end or turn between the lines, and the answer there is not to be trusted at the size of the difference.`;
  return `Neighbouring lines do not read alike (${figures}). Groundward takes it that sources run on unchanged across the line; here they do not, or the lines are too far apart to tell.`;
}
