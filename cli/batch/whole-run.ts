/** A run over many lines in one command: what is missing is computed, then every file is written from the parcels. */

import type {LineOutcome} from "../../lib/study/outcome.ts";
import {studySurvey} from "../../lib/study/survey-study.ts";
import type {Run} from "../run.ts";
import type {Work} from "../work.ts";
import {lineWork} from "../work.ts";
import {type Batch, type BatchPlan, openBatch} from "./batch.ts";
import {refuseShards} from "./lock.ts";

export type Finish = (work: Work<LineOutcome>) => Promise<number>;

/**
 * @param run with its folder claimed
 * @param finish writes the files, puts them in place and concludes
 * @returns the exit status
 */
export async function wholeRun(plan: BatchPlan, run: Run, finish: Finish): Promise<number> {
  await refuseShards(plan.host, plan.out);
  const batch = await openBatch(plan);
  const all = Array.from({length: run.survey.lineCount}, (_, place) => place);
  return orKept(plan, batch, async () => {
    if (await batch.compute(all)) return writeFiles(plan, batch, run, finish);
    plan.host.err.write(`interrupted: ${batch.kept()}\n`);
    return 130;
  });
}

/** Every line is finished: the files, then the end of the parcels. */
export async function writeFiles({host}: BatchPlan, batch: Batch, run: Run, finish: Finish): Promise<number> {
  const {survey, settings} = run;
  const release = host.interruptible({farewell: batch.kept});
  try {
    const status = await finish(await lineWork(run, studySurvey(survey, settings, batch.answer)));
    await batch.parts.dispose();
    return status;
  } finally {
    release();
  }
}

/** Where the work fails, parcels stay only if they hold an answer, and the user is told of them. */
export async function orKept({messages}: BatchPlan, batch: Batch, work: () => Promise<number>): Promise<number> {
  try {
    return await work();
  } catch (error) {
    const answered = [...batch.notes.values()].some(({status}) => status === "done" || status === "doubtful");
    if (answered) messages.note(`${batch.kept()}.`);
    else await batch.parts.dispose().catch(() => undefined);
    throw error;
  }
}
