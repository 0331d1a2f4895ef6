/**
 * Do neighbouring lines agree on the strips? Over two-dimensional ground every line of a group answers for the same
 * mean, so that the intervals of neighbours overlap. Kept of each line: an offset, and two numbers a strip.
 */
import {clip, type Support, totalLength} from "../geometry/interval.ts";
import {partsOf, type Strip, type StripEstimate} from "../inverse/nouns.ts";
import {doubt, type Notice} from "../notice.ts";
import {normalQuantile} from "../numeric/normal.ts";
import type {LineOutcome} from "./outcome.ts";

export interface AcrossLines {
  add(outcome: LineOutcome): void;
  /** Doubts about the survey as a whole, from the lines so far. */
  notices(): readonly Notice[];
}

interface Answer {
  readonly id: string;
  readonly group: string;
  readonly offset: number;
  readonly strip: Strip;
  readonly mean: number;
  readonly halfWidth: number;
}

/** Pairs named before "and more". */
const NAMED = 4;
/** Polygons give each line its own part; parts whose ends differ by more than this share of their length are other strips (heuristic). */
const SAME = 0.1;

/** Lines are neighbours by their mean offsets from the axis; where only chainage is known, in the order of the files. */
export function neighbouringStrips(confidence: number): AcrossLines {
  const answers: Answer[] = [];
  return {
    add: (outcome) => {
      if (!("study" in outcome)) return;
      const {line, panels, strips} = outcome.study;
      const support = panels.components.map(({interval}) => interval);
      const offset = line.stations.offset.reduce((sum, value) => sum + value, 0) / line.stations.count;
      // A stretch of chainage lies over other ground from line to line where sources cross the lines obliquely.
      for (const estimate of strips)
        if (estimate.across === undefined && isInside(estimate.strip, support))
          answers.push(answerOf(estimate, line.id, line.group, offset));
    },
    notices: () => noticesOf(answers, confidence),
  };
}

const answerOf = ({strip, mean, upper}: StripEstimate, id: string, group: string, offset: number): Answer => ({
  id,
  group,
  offset,
  strip,
  mean,
  halfWidth: upper - mean,
});

/** Off the support the source is zero by assumption: a mean taken there says nothing of the ground. */
const isInside = (strip: Strip, support: Support): boolean =>
  partsOf(strip).every((part) => totalLength(clip(part, support)) >= (1 - 1e-9) * (part.to - part.from));

function noticesOf(answers: readonly Answer[], confidence: number): Notice[] {
  const byStrip = new Map<string, Answer[]>();
  for (const answer of answers) {
    const key = JSON.stringify([answer.group, answer.strip.name]);
    const found = byStrip.get(key);
    if (found === undefined) byStrip.set(key, [answer]);
    else found.push(answer);
  }
  const strips = [...byStrip.values()].map(pairsOf);
  const count = strips.reduce((sum, pairs) => sum + pairs.length, 0);
  return strips.flatMap((pairs) => {
    const apart = pairs.filter((pair) => differ(pair, confidence, count));
    if (apart.length === 0) return [];
    const [{strip, group}] = apart[0];
    const names = apart.slice(0, NAMED).map(([one, other]) => `${one.id} and ${other.id}`);
    const more = apart.length > NAMED ? `, and ${apart.length - NAMED} more pairs` : "";
    const several = new Set(answers.map((answer) => answer.group)).size > 1 ? ` of group ${group}` : "";
    const lines = [...new Set(apart.flatMap(([one, other]) => [one.id, other.id]))];
    return [
      {
        ...doubt(
          "strip/neighbours-differ",
          `Strip ${strip.name}${several}: lines ${names.join(", ")}${more} differ by more than their intervals allow (${apart.length} of ${pairs.length} ${pairs.length === 1 ? "pair" : "pairs"} of neighbours): the ground changes between them and is not two-dimensional there, or a line is off in level, height or place. Compare their rows in strips.csv before you trust either interval.`,
        ),
        lines,
      },
    ];
  });
}

type Pair = readonly [Answer, Answer];

/** Neighbours among the lines that answer for one strip. */
function pairsOf(answers: readonly Answer[]): readonly Pair[] {
  // Sorting is stable: where offsets are equal the order of the files stays.
  const ordered = [...answers].sort((a, b) => a.offset - b.offset);
  return ordered.flatMap((answer, i): Pair[] => {
    const next = ordered[i + 1];
    return next !== undefined && isSame(answer.strip, next.strip) ? [[answer, next]] : [];
  });
}

function isSame(one: Strip, other: Strip): boolean {
  const most = SAME * Math.min(one.to - one.from, other.to - other.from);
  return Math.abs(one.from - other.from) <= most && Math.abs(one.to - other.to) <= most;
}

/**
 * Whether two intervals lie apart; with many pairs, so far apart that chance alone parts any of them no more often than
 * the confidence allows (Bonferroni).
 */
function differ([one, other]: Pair, confidence: number, pairs: number): boolean {
  const quantile = (share: number): number => normalQuantile(1 - 0.5 * share);
  const joint = quantile((1 - confidence) / pairs) / quantile(1 - confidence);
  const allowed = Math.max(one.halfWidth + other.halfWidth, joint * Math.hypot(one.halfWidth, other.halfWidth));
  return Math.abs(one.mean - other.mean) > allowed;
}
