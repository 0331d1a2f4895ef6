/** `inspect` on files: opened as far as a look needs, walked once, and told. */

import {effectiveDirectionOf} from "../lib/study/direction-of-line.ts";
import {inspectSurvey} from "../lib/survey/inspection.ts";
import {NOT_CORRECTED} from "../lib/survey/not-corrected.ts";
import {doubtCollector, doubtText} from "./doubts.ts";
import {withInputs} from "./inputs.ts";
import {inspectionJson} from "./inspection-json.ts";
import {inspectionText} from "./inspection-text.ts";
import {messagesTo} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {openForInspection} from "./open-for-inspection.ts";
import {fieldDirectionFrom} from "./options/channels.ts";
import {acquisitionFrom} from "./options/measured.ts";
import {readMaps} from "./read-maps.ts";
import {type Request, settled, surveyOf} from "./request.ts";
import {surveyNotes} from "./survey-notes.ts";

/** @returns the exit status: 0, 5 when some lines could not be read, 2 when none could */
export async function inspectRun(request: Request, host: Host): Promise<number> {
  const {form} = request;
  const messages = messagesTo(host, form);
  const {maps} = await readMaps(host, request.asked);
  const settings = settled(request, (options) => acquisitionFrom(options, maps));
  const fieldDirection = settled(request, fieldDirectionFrom);
  return withInputs(host, surveyOf(request, "inspect"), async (files) => {
    const {survey, filledIn, known} = await openForInspection(files, settings);
    const inspected = await inspectSurvey(survey, (line) => effectiveDirectionOf(line, {fieldDirection}));
    const inspection = known.observable ? inspected : {...inspected, notCorrected: NOT_CORRECTED};
    const {lines, failures, notices} = inspection;
    const doubts = doubtCollector();
    doubts.add(notices);
    for (const line of lines) doubts.add(line.notices, line.id);
    if (form.json)
      host.out.write(`${JSON.stringify({filledIn, ...inspectionJson(inspection, known)}, undefined, 2)}\n`);
    else {
      for (const note of [...surveyNotes(survey), ...filledIn]) messages.note(note);
      host.out.write(inspectionText(inspection, known));
      for (const {id, code, message} of failures) messages.doubt(`line ${id} cannot be used · ${message} [${code}]`);
      for (const kind of doubts.summary())
        if (kind.weight === "doubt") messages.doubt(doubtText(kind));
        else messages.note(doubtText(kind));
    }
    return failures.length === 0 ? 0 : lines.length > 0 ? 5 : 2;
  });
}
