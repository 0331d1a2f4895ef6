/** Doubts and remarks of many lines, told once each: memory and screen do not grow with the lines. */
import type {Notice} from "../lib/notice.ts";

/** How many lines are named before "and more". */
const NAMED = 4;

export interface DoubtSummary {
  readonly code: string;
  readonly weight: Notice["weight"];
  /** As the first line put it. */
  readonly message: string;
  /** Lines it was raised on; 0 for the survey as a whole. */
  readonly count: number;
  readonly firstLines: readonly string[];
}

export interface Doubts {
  /** @param line undefined: the survey as a whole */
  add(notices: readonly Notice[], line?: string): void;
  /** Doubts first, each kind in the order of its first appearance. */
  summary(): readonly DoubtSummary[];
}

export function doubtCollector(): Doubts {
  const kinds: {code: string; weight: Notice["weight"]; message: string; count: number; firstLines: string[]}[] = [];
  return {
    add: (notices, line) => {
      // A line that raises a doubt twice counts once; doubts about the survey as a whole stand alone.
      const seen = new Set<string>();
      for (const {code, weight, message, line: own} of notices) {
        const of = line ?? own;
        if (of === undefined) {
          kinds.push({code, weight, message, count: 0, firstLines: []});
          continue;
        }
        if (seen.has(`${code} ${of}`)) continue;
        seen.add(`${code} ${of}`);
        let kind = kinds.find((candidate) => candidate.code === code && candidate.count > 0);
        if (kind === undefined) {
          kind = {code, weight, message, count: 0, firstLines: []};
          kinds.push(kind);
        }
        kind.count++;
        if (kind.firstLines.length < NAMED) kind.firstLines.push(of);
      }
    },
    summary: () => {
      const of = (wanted: Notice["weight"]) => kinds.filter(({weight}) => weight === wanted);
      return [...of("doubt"), ...of("remark")];
    },
  };
}

/**
 * What stands before a message to say which lines it is about.
 * @param all how many there are: a few names say nothing where it is about all of them
 */
export function linesText(
  {count, firstLines}: Pick<DoubtSummary, "count" | "firstLines">,
  noun = "line",
  all?: number,
): string {
  if (count === 1) return `${noun} ${firstLines[0]} · `;
  if (count === all && count > firstLines.length) return `all ${count} ${noun}s · as on ${firstLines[0]}: `;
  const more = count > firstLines.length ? ` and ${count - firstLines.length} more` : "";
  return `${count} ${noun}s (${firstLines.join(", ")}${more}) · as on ${firstLines[0]}: `;
}

/**
 * One kind of doubt for people.
 * @param noun what it was raised on: `line`, `row`
 * @param all how many there are
 */
export function doubtText({code, message, count, firstLines}: DoubtSummary, noun = "line", all?: number): string {
  return `${count === 0 ? "" : linesText({count, firstLines}, noun, all)}${message} [${code}]`;
}
