/** Threads for the rows of a large grid: this one reads, works out half-widths and writes meanwhile. */
import type {RowFigures} from "../../lib/study/row-geometry.ts";
import type {RowThreads} from "../../lib/study/row-work.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import type {Host, Threads} from "../nouns.ts";
import {type PackedError, unpackedError} from "./packed-error.ts";

export type RowThreadAnswer = {readonly figures: readonly RowFigures[]} | {readonly failure: PackedError};

/** Pixels from which on threads are worth their start, if none were asked for: rows of a second or so. A heuristic. */
const MANY_PIXELS = 2 ** 21;

/** @param workers threads at most; undefined: as many as there are cores, once they are worth their start */
export async function withRowThreads<Result>(
  host: Host,
  {grid}: Survey,
  workers: number | undefined,
  work: (threads: RowThreads | undefined) => Promise<Result>,
): Promise<Result> {
  const pixels = grid === undefined ? 0 : grid.width * grid.height;
  const count = workers ?? (pixels < MANY_PIXELS ? 1 : host.cores);
  if (!(count > 1)) return work(undefined);
  // Only rows that are level need them.
  let started: Promise<Threads> | undefined;
  const threads: RowThreads = {
    count,
    async solve(rows) {
      started ??= host.startThreads(count, {}, "row-thread.js");
      const answer = (await (await started).run(rows)) as RowThreadAnswer;
      if ("failure" in answer) throw unpackedError(answer.failure);
      return answer.figures;
    },
  };
  try {
    return await work(threads);
  } finally {
    await (await started)?.end();
  }
}
