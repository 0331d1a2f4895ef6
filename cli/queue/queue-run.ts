/** A run whose lines go into a queue: submitted, followed until every line has its parcel, then written as one run would be. */
import {createHash} from "node:crypto";
import {InputError} from "../../lib/errors.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import {type Batch, type BatchPlan, openBatch} from "../batch/batch.ts";
import {refuseShards} from "../batch/lock.ts";
import {openParts} from "../batch/parts.ts";
import {orKept, writeFiles} from "../batch/whole-run.ts";
import {finishRun, runIn} from "../finish-run.ts";
import {LOST_AFTER_S} from "../options/batch.ts";
import type {Work} from "../work.ts";
import {follow} from "./follow.ts";
import type {LineQueue, QueuedRun} from "./line-queue.ts";
import {dropsText} from "./worker-run.ts";

export interface QueueWork {
  readonly queue: string;
  /** Whether the command ends once the lines are in the queue. */
  readonly detach: boolean;
  readonly started: number;
  readonly read: number;
}

/** @returns the exit status */
export async function queueRun(plan: BatchPlan, work: QueueWork): Promise<number> {
  const {host, messages, opened, out, replace} = plan;
  if (opened.survey.kind === "grid")
    throw new InputError(
      "option/lines-only",
      "--queue shares out the lines of a survey, but the survey is a grid, whose rows share one operator. Leave it out.",
    );
  const queue = await host.openQueue(work.queue, LOST_AFTER_S, messages.note);
  try {
    if (queue.drops !== undefined) messages.doubt(dropsText(queue));
    await refuseShards(host, out);
    // What stands in the way of the files is told now and not after the work; the folder stays free for others that follow.
    await (await runIn(plan, replace)).folder.abandon();
    const batch = await openBatch(plan);
    const run = queuedRun(plan);
    const missing = missingIn(batch, opened.survey.lineCount);
    const release = host.interruptible({
      farewell: () => "lines that reached the queue stay there, and the same command adds the others",
    });
    try {
      if (missing.length > 0) await queue.submit(run, missing);
    } finally {
      release();
    }
    if (work.detach) return detached(plan, queue, missing.length);
    return await joined(plan, queue, run, batch, work);
  } finally {
    await queue.close();
  }
}

/** The same run into the same folder is the same to the queue, whoever submits it. */
function queuedRun({host, opened, out}: BatchPlan): QueuedRun {
  const folder = host.beside(`${host.folder}/-`, out).replace(/(?<=.)[\\/]+$/, "");
  const id = createHash("sha256").update(`${opened.digest}\n${folder}`).digest("hex").slice(0, 32);
  return {id, run: opened.digest, folder};
}

const missingIn = ({notes}: Batch, lines: number): readonly number[] =>
  Array.from({length: lines}, (_, place) => place).filter((place) => !notes.has(place));

function detached({host, form, opened, out}: BatchPlan, queue: LineQueue, submitted: number): number {
  const lines = opened.survey.lineCount;
  host.out.write(
    form.json
      ? `${JSON.stringify({queue: queue.address, lines, submitted, taken_over: lines - submitted}, undefined, 2)}\n`
      : `${submitted} of ${lines} lines are in the queue at ${queue.address}, ${lines - submitted} finished before\nWorkers: groundward worker --queue ${queue.address}\nWhen every line is done: groundward gather --out ${out}\n`,
  );
  return 0;
}

async function joined(plan: BatchPlan, queue: LineQueue, run: QueuedRun, begun: Batch, work: QueueWork) {
  const {host, messages, opened, out, replace} = plan;
  const lines = opened.survey.lineCount;
  const quietly: BatchPlan = {...plan, messages: {...messages, note: () => undefined}};
  let batch = begun;
  for (let missing = missingIn(batch, lines); missing.length > 0; missing = missingIn(batch, lines)) {
    const end = await follow(plan, queue, run, missing);
    if (end === "interrupted") return 130;
    // Where two commands follow one run, one of them writes the files.
    if ((await openParts(host, out).head())?.run !== run.run) {
      messages.note(
        `The run in ${out} is no longer there to be finished: another command wrote its files or replaced it.`,
      );
      return 0;
    }
    batch = await openBatch(quietly);
    const spoilt = missingIn(batch, lines);
    if (spoilt.length > 0) await queue.submit(run, spoilt);
  }
  const whole = await runIn(plan, replace);
  try {
    const finish = (done: Work<LineOutcome>): Promise<number> => finishRun(whole, done, {opened, out, ...work});
    return await orKept(plan, batch, async () => {
      const status = await writeFiles(plan, batch, whole, finish);
      await queue.withdraw(run);
      return status;
    });
  } finally {
    await whole.folder.abandon();
  }
}
