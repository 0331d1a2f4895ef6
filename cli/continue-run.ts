/** The main job on files: from what was asked to a folder of results. */
import type {LineOutcome, RowOutcome} from "../lib/study/outcome.ts";
import type {BatchPlan} from "./batch/batch.ts";
import {withOpenedRun} from "./batch/opened-run.ts";
import {storedRequest} from "./batch/stored-request.ts";
import {finishRun, runIn} from "./finish-run.ts";
import {messagesTo} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {batchFrom} from "./options/batch.ts";
import {isOn, oneOf} from "./options/entry.ts";
import {requiredOut} from "./options/out.ts";
import {type Request, settled, surveyOf} from "./request.ts";
import {surveyNotes} from "./survey-notes.ts";
import {gridWork, lineWork, type Work} from "./work.ts";

/**
 * @returns the exit status
 * @throws {ReportableError} when the run as a whole could not be done; the folder is left as it was, but for finished
 *   lines from which the same command goes on
 */
export async function continueRun(request: Request, host: Host): Promise<number> {
  const {asked, form} = request;
  const messages = messagesTo(host, form);
  surveyOf(request, "continue");
  const stored = storedRequest(request, host);
  const shared = settled(request, batchFrom);
  const started = host.now();
  return withOpenedRun(
    host,
    stored,
    (from) => {
      const settings = settled(request, from);
      requiredOut(oneOf(asked, "out"));
      return settings;
    },
    async (opened) => {
      const {survey, files} = opened;
      const out = requiredOut(oneOf(asked, "out"));
      for (const note of surveyNotes(survey)) messages.note(note);
      const read = host.now();
      const replace = isOn(asked, "replace");
      const plan: BatchPlan = {host, messages, form, opened, request: stored, out, replace, workers: shared.workers};
      if (shared.shard !== undefined) return (await import("./batch/shard-run.ts")).shardRun(plan, shared.shard);
      if (shared.queue !== undefined) {
        const work = {queue: shared.queue, detach: isOn(asked, "detach"), started, read};
        return (await import("./queue/queue-run.ts")).queueRun(plan, work);
      }
      const run = await runIn(plan, replace);
      const finish = <Outcome extends LineOutcome | RowOutcome>(work: Work<Outcome>): Promise<number> =>
        finishRun(run, work, {opened, out, started, read});
      try {
        if (survey.kind === "grid")
          return await (await import("./batch/row-threads.ts")).withRowThreads(
            host,
            survey,
            shared.workers,
            async (threads) => finish(await gridWork(run, files[0]!, threads)),
          );
        // One line alone has nothing to go on from.
        if (survey.lineCount === 1) return await finish(await lineWork(run));
        return await (await import("./batch/whole-run.ts")).wholeRun(plan, run, finish);
      } finally {
        await run.folder.abandon();
      }
    },
  );
}
