/** The end that every run has: outcomes go to the files, the files are put in place, and the result is printed. */
import type {LineOutcome, RowOutcome} from "../lib/study/outcome.ts";
import type {BatchPlan} from "./batch/batch.ts";
import type {OpenedRun} from "./batch/opened-run.ts";
import {carryOut} from "./carry-out.ts";
import {conclude} from "./conclusion.ts";
import type {Host} from "./nouns.ts";
import type {Run} from "./run.ts";
import {openRunFolder} from "./run-folder.ts";
import {type Work, writesOf} from "./work.ts";

/** A run with its folder claimed; whoever calls abandons the folder in the end. */
export async function runIn(
  {host, messages, form, opened, out}: Pick<BatchPlan, "host" | "messages" | "form" | "opened" | "out">,
  replace: boolean,
): Promise<Run> {
  const {settings, survey, identity} = opened;
  const folder = await openRunFolder(host, out, {identity, replace, writes: writesOf(survey, settings)});
  return {host, settings, survey, folder, messages, form};
}

export interface RunEnd {
  readonly opened: OpenedRun;
  /** As the user named it. */
  readonly out: string;
  readonly started: number;
  /** When the survey had been read. */
  readonly read: number;
}

/** @returns the exit status */
export async function finishRun<Outcome extends LineOutcome | RowOutcome>(
  run: Run,
  work: Work<Outcome>,
  {opened, out, started, read}: RunEnd,
): Promise<number> {
  const {host, folder} = run;
  const summary = await carryOut(run, work);
  if (!summary.keep) return summary.status;
  const times = {started, read, studied: host.now()};
  const outputs = await folder.finish(
    (digests) => opened.record(digests, summary.counts),
    () => timingJson(host, {...times, finished: host.now()}),
  );
  conclude(run, summary, work.result, outputs, out);
  return summary.status;
}

/** The only file of a run that differs from one run to the next; milliseconds in, seconds out. */
function timingJson(host: Host, t: {started: number; read: number; studied: number; finished: number}): string {
  const timing = {
    started: host.dateText(t.started),
    finished: host.dateText(t.finished),
    seconds: {
      reading: (t.read - t.started) / 1000,
      studying: (t.studied - t.read) / 1000,
      writing: (t.finished - t.studied) / 1000,
      total: (t.finished - t.started) / 1000,
    },
  };
  return `${JSON.stringify(timing, undefined, 2)}\n`;
}
