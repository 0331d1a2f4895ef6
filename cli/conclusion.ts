/** The end of a run: the result on standard output; doubts, what the intervals rest on and the cautions beside it. */
import type {FileDigest} from "../lib/products/record.ts";
import {cautionSentence, cautionsFor} from "../lib/report/cautions.ts";
import {INTERVAL_BASIS} from "../lib/report/interval-basis.ts";
import {jointPromise} from "../lib/report/interval-words.ts";
import {percentText} from "../lib/report/number-text.ts";
import type {Summary} from "./carry-out.ts";
import {doubtText} from "./doubts.ts";
import type {Run} from "./run.ts";

/** The part of a result that this needs. */
interface Printable {
  text(): string;
  json(): Readonly<Record<string, unknown>>;
}

/** @param out the folder, as the user named it */
export function conclude(
  {host, survey, settings, messages, form}: Run,
  {doubts, bases, counts}: Summary,
  result: Printable,
  files: readonly FileDigest[],
  out: string,
): void {
  const cautions = cautionsFor(survey.kind).map(cautionSentence);
  const {intervals, confidence} = settings.wanted;
  const promise = jointPromise(intervals, percentText(confidence));
  const grounds = [...bases].map((basis) => ({
    basis,
    text: `${promise}${INTERVAL_BASIS[basis].lead} ${INTERVAL_BASIS[basis].text}`,
  }));
  const names = [...files.map(({file}) => file), "record.json", "timing.json"];
  if (form.json) {
    const object = {
      outcomes: counts,
      ...result.json(),
      doubts: doubts.summary(),
      intervals: grounds,
      cautions,
      out,
      files: names,
    };
    host.out.write(`${JSON.stringify(object, undefined, 2)}\n`);
    return;
  }
  const noun = survey.grid === undefined ? "line" : survey.grid.orientation.slice(0, -1);
  for (const kind of doubts.summary())
    if (kind.weight === "doubt") messages.doubt(doubtText(kind, noun, survey.lineCount));
    else messages.note(doubtText(kind, noun, survey.lineCount));
  host.out.write(result.text());
  messages.note(`${names.length} files in ${out}: ${names.join(", ")}.`);
  for (const {text} of grounds) messages.note(text);
  for (const caution of cautions) messages.note(caution);
}
