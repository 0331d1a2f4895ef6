/** The files of a run whose lines were computed elsewhere: checked for completeness, then written as one run would. */
import {InputError} from "../../lib/errors.ts";
import type {LineOutcome} from "../../lib/study/outcome.ts";
import {finishRun, runIn} from "../finish-run.ts";
import {messagesTo} from "../messages.ts";
import type {Host} from "../nouns.ts";
import {type Asked, isOn, oneOf} from "../options/entry.ts";
import {requiredOut} from "../options/out.ts";
import {surveyNotes} from "../survey-notes.ts";
import type {Work} from "../work.ts";
import {type BatchPlan, openBatch} from "./batch.ts";
import {refuseShards} from "./lock.ts";
import {withOpenedRun} from "./opened-run.ts";
import {openParts, type PartsHead} from "./parts.ts";
import {askedIn, type StoredRequest} from "./stored-request.ts";
import {orKept, writeFiles} from "./whole-run.ts";

/** Lines named in a message before "and more". */
const NAMED = 10;

/**
 * @param paths where the survey lies now; empty: where it lay
 * @returns the exit status
 * @throws {InputError} `gather/nothing`, `gather/changed`, `gather/incomplete`
 */
export async function gatherRun(host: Host, paths: readonly string[], asked: Asked): Promise<number> {
  const form = {json: isOn(asked, "json"), quiet: isOn(asked, "quiet")};
  const messages = messagesTo(host, form);
  const out = requiredOut(oneOf(asked, "out"));
  const started = host.now();
  const head = await openParts(host, out).head();
  if (head === undefined)
    throw new InputError(
      "gather/nothing",
      `There are no finished lines in "${out}"${await alreadyComplete(host, out)}. Compute them first: groundward continue … --shard i/n --out ${out}, or with --queue.`,
      {place: {file: out}},
    );
  const request =
    paths.length === 0
      ? head.request
      : movedTo(
          head.request,
          paths.map((path) => host.beside(`${host.folder}/-`, path)),
        );
  return withOpenedRun(
    host,
    request,
    (from) => from(askedIn(request)),
    async (opened) => {
      if (opened.digest !== head.run)
        throw new InputError(
          "gather/changed",
          "The survey, a file that its options name, or the program is no longer the one that the lines were computed with. Put it back, or compute the lines again.",
          {place: {file: out}},
        );
      const read = host.now();
      await refuseShards(host, out);
      for (const note of surveyNotes(opened.survey)) messages.note(note);
      const plan: BatchPlan = {host, messages, form, opened, request, out, replace: false, workers: 1};
      const batch = await openBatch(plan);
      const missing = Array.from({length: head.lines}, (_, place) => place).filter((place) => !batch.notes.has(place));
      if (missing.length > 0) throw incomplete(out, head, missing);
      const run = await runIn(plan, isOn(asked, "replace"));
      try {
        const finish = (work: Work<LineOutcome>): Promise<number> => finishRun(run, work, {opened, out, started, read});
        return await orKept(plan, batch, () => writeFiles(plan, batch, run, finish));
      } finally {
        await run.folder.abandon();
      }
    },
  );
}

/** A second `gather` finds the lines gone, since the first made the files of them. */
async function alreadyComplete(host: Host, out: string): Promise<string> {
  const recorded = await host.openStore(out).read("record.json");
  return recorded === undefined
    ? ""
    : " that wait for gather: a record.json there says that the files of a run are complete";
}

const movedTo = (request: StoredRequest, paths: readonly string[]): StoredRequest => ({
  ...request,
  asked: [...request.asked.filter(([name]) => name !== "survey"), ["survey", paths]],
});

function incomplete(out: string, {lines}: PartsHead, missing: readonly number[]): InputError {
  const named = missing.slice(0, NAMED).map((place) => `${place + 1}`);
  const more = missing.length > NAMED ? ` and ${missing.length - NAMED} more` : "";
  return new InputError(
    "gather/incomplete",
    `${missing.length} of ${lines} lines are not finished: by their place in the survey ${named.join(", ")}${more}. Where shards or workers are at work still, gather when they are done. Else give the command of the run, of its queue or of those shards again, which takes over what is finished; of n shards, line k belongs to shard 1 + (k − 1) mod n.`,
    {place: {file: out}},
  );
}
