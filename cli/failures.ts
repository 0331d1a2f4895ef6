/** Failures of many lines, told once for each kind: the screen does not grow with the lines. */
import type {ReportableError} from "../lib/errors.ts";

/** How many lines are named before "and more". */
const NAMED = 4;

export interface FailureGroup {
  /** That of the first line: others of the group differ in place and figures at most. */
  readonly failure: ReportableError;
  /** Lines that failed so. */
  readonly count: number;
  readonly firstLines: readonly string[];
}

export interface Failures {
  add(failure: ReportableError, line: string): void;
  /** In the order of their first appearance. */
  groups(): readonly FailureGroup[];
}

/** @param alike whether failures of one code are one group; else each stands alone, for scripts */
export function failureCollector(alike: boolean): Failures {
  const groups: {failure: ReportableError; count: number; firstLines: string[]}[] = [];
  return {
    add: (failure, line) => {
      const group = alike ? groups.find((candidate) => candidate.failure.code === failure.code) : undefined;
      if (group === undefined) {
        groups.push({failure, count: 1, firstLines: [line]});
        return;
      }
      group.count++;
      if (group.firstLines.length < NAMED) group.firstLines.push(line);
    },
    groups: () => groups,
  };
}
