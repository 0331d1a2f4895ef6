/** The lines of a run that can go on: those taken over from before, those computed now, and the answers of all. */
import {InputError} from "../../lib/errors.ts";
import {checkSurvey, type LineAnswer, lineAnswers} from "../../lib/study/survey-study.ts";
import type {Messages} from "../messages.ts";
import type {Host} from "../nouns.ts";
import {progressOf} from "../progress.ts";
import {runDifference} from "../run-difference.ts";
import type {OpenedRun} from "./opened-run.ts";
import {outcomeIn} from "./parcel.ts";
import {type LineNote, openParts, type Parts} from "./parts.ts";
import {computeLines} from "./pool.ts";
import type {StoredRequest} from "./stored-request.ts";

export interface BatchPlan {
  readonly host: Host;
  readonly messages: Messages;
  readonly form: {readonly json: boolean; readonly quiet: boolean};
  readonly opened: OpenedRun;
  readonly request: StoredRequest;
  readonly out: string;
  readonly replace: boolean;
  /** Lines at a time; undefined: as many as there are cores, once it is clear that threads are worth their start. */
  readonly workers: number | undefined;
}

export interface Batch {
  readonly parts: Parts;
  /** Finished lines by their place. */
  readonly notes: ReadonlyMap<number, LineNote>;
  /** Computes those of `places` that are not finished; @returns whether all are, or else an interruption came */
  compute(places: readonly number[]): Promise<boolean>;
  /** Outcomes from the parcels; a line whose parcel is spoilt is computed again. */
  readonly answer: LineAnswer;
  /** How to go on after an interruption. */
  kept(): string;
}

/** @throws {InputError} `out/other-begun`, and those of `checkSurvey` */
export async function openBatch(plan: BatchPlan): Promise<Batch> {
  const {host, messages, form, opened, request, out, workers} = plan;
  const {survey, settings, digest} = opened;
  await checkSurvey(survey, settings);
  const parts = openParts(host, out);
  await begin(plan, parts);
  const notes = new Map<number, LineNote>();
  for (const note of (await parts.notes(digest)).values())
    if ((await parts.parcel(note)) !== undefined) notes.set(note.index, note);
  if (notes.size > 0)
    messages.note(`${notes.size} of ${survey.lineCount} lines were finished before and are taken over.`);
  const kept = (): string =>
    `${notes.size} of ${survey.lineCount} lines are kept in ${parts.path}; the same command goes on from there`;
  const direct = lineAnswers(settings);
  return {
    parts,
    notes,
    kept,
    async compute(all) {
      const places = all.filter((place) => !notes.has(place));
      const progress = progressOf(host, places.length, "lines", form.json || form.quiet);
      let stopped = false;
      const release = host.interruptible({
        stop: () => {
          stopped = true;
          host.err.write("\nstopping after the lines that are being computed; once more stops at once\n");
        },
        farewell: kept,
      });
      try {
        await computeLines({
          host,
          run: opened,
          request,
          out,
          parts,
          places,
          workers,
          finished: (note) => {
            notes.set(note.index, note);
            progress.step(note.line);
          },
          stopped: () => stopped,
        });
      } finally {
        progress.end();
        release();
      }
      return all.every((place) => notes.has(place));
    },
    async answer(record, index) {
      const note = notes.get(index);
      const parcel = note && (await parts.parcel(note));
      return parcel === undefined ? direct(record) : outcomeIn(parcel, record);
    },
  };
}

/** Takes the folder for this run, unless another was begun there. */
async function begin({opened, request, out, replace}: BatchPlan, parts: Parts): Promise<void> {
  const {digest, identity, survey} = opened;
  const before = await parts.head();
  if (before?.run === digest) return;
  if (before !== undefined) {
    if (!replace) throw otherBegun(out, runDifference(before.identity, identity));
    await parts.dispose();
  }
  await parts.begin({request, identity, run: digest, lines: survey.lineCount});
  // Of two shards with other settings that begin together one is the last.
  const now = await parts.head();
  if (now?.run !== digest) throw otherBegun(out, now && runDifference(now.identity, identity));
}

const otherBegun = (out: string, difference: string | undefined): InputError =>
  new InputError(
    "out/other-begun",
    `The folder holds finished lines of another run (${difference ?? "by another version of Groundward or of Node"}). Give --replace to begin afresh, or choose another folder with --out.`,
    {place: {file: out}},
  );
