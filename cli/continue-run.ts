/** The main job on files: from what was asked to a folder of results. */
import {openSurvey} from "../lib/acquisition/catalogue.ts";
import {InputError} from "../lib/errors.ts";
import {type FileDigest, recordJson} from "../lib/products/record.ts";
import type {LineOutcome, RowOutcome} from "../lib/study/outcome.ts";
import {carryOut} from "./carry-out.ts";
import {conclude} from "./conclusion.ts";
import {digestOf, withInputs} from "./inputs.ts";
import {messagesTo} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {isOn, oneOf} from "./options/entry.ts";
import {settingsFrom} from "./options/settings.ts";
import {readMaps} from "./read-maps.ts";
import {readTieFiles} from "./read-tie-files.ts";
import {type Request, settled, surveyOf} from "./request.ts";
import {type Counts, noOutcome, type Run} from "./run.ts";
import {openRunFolder} from "./run-folder.ts";
import {surveyNotes} from "./survey-notes.ts";
import {gridWork, lineWork, type Work, writesOf} from "./work.ts";

/**
 * @returns the exit status
 * @throws {ReportableError} when the run as a whole could not be done; the folder is left as it was
 */
export async function continueRun(request: Request, host: Host): Promise<number> {
  const {asked, job, form} = request;
  const messages = messagesTo(host, form);
  const paths = surveyOf(request, "continue");
  const {maps, digests} = await readMaps(host, asked);
  const known = await readTieFiles(host, asked);
  const settings = settled(request, (options) => settingsFrom(options, maps, known.ties));
  const out = oneOf(asked, "out");
  if (out === undefined)
    throw new InputError(
      "option/missing",
      "--out is missing: there is no folder for the files. Give one, for example --out out/.",
    );
  const started = host.now();
  return withInputs(host, paths, async (files) => {
    const survey = await openSurvey(files, settings.acquisition);
    const inputs: FileDigest[] = [];
    for (const file of files) inputs.push(await digestOf(file));
    inputs.push(...digests, ...known.digests);
    if (job !== undefined) inputs.push(job.digest);
    for (const note of surveyNotes(survey)) messages.note(note);
    const read = host.now();
    const record = (outputs: readonly FileDigest[], outcomes: Counts): string =>
      recordJson({version: host.version, ...host.runtime, settings, survey, outcomes, inputs, outputs});
    const folder = await openRunFolder(host, out, {
      identity: JSON.parse(record([], noOutcome())),
      replace: isOn(asked, "replace"),
      writes: writesOf(survey, settings),
    });
    const run: Run = {host, settings, survey, folder, messages, form};
    const finish = async <Outcome extends LineOutcome | RowOutcome>(work: Work<Outcome>): Promise<number> => {
      const summary = await carryOut(run, work);
      if (!summary.keep) return summary.status;
      const times = {started, read, studied: host.now()};
      const outputs = await folder.finish(
        (digests) => record(digests, summary.counts),
        () => timingJson(host, {...times, finished: host.now()}),
      );
      conclude(run, summary, work.result, outputs, out);
      return summary.status;
    };
    try {
      return survey.kind === "grid" ? await finish(await gridWork(run, files[0]!)) : await finish(await lineWork(run));
    } finally {
      await folder.abandon();
    }
  });
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
