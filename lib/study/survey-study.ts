/** A survey as a stream of line studies: one line in memory at a time. */
import {InputError, ReportableError} from "../errors.ts";
import {isDoubtful} from "../notice.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import {studyLine} from "./line-study.ts";
import type {LineOutcome} from "./outcome.ts";
import type {ChainageZone, Settings} from "./settings.ts";
import {sharedGeometry} from "./shared-geometry.ts";
import {allSkipped, statusWithout} from "./skipped.ts";
import {zonesFor} from "./zones.ts";

/** What becomes of one line, as the survey hands it out; the index counts from zero. */
export type LineAnswer = (record: LineRecord, index: number) => LineOutcome | Promise<LineOutcome>;

/**
 * Computes the answer of each line; what the lines share is prepared once.
 * @throws {InputError} from the function returned: `zone/…`, since what is wrong with polygons is wrong for every line
 */
export function lineAnswers(settings: Settings): (record: LineRecord) => LineOutcome {
  const zonesOf = zonesFor(settings);
  const shared = sharedGeometry();
  const without = (id: string, failure: ReportableError): LineOutcome => ({
    status: statusWithout(failure),
    id,
    failure,
  });
  return (record) => {
    if ("failure" in record) return without(record.id, record.failure);
    const {id} = record.line;
    const zones = zonesOf(record.line);
    try {
      const study = studyLine(record.line, settings, zones, shared);
      return {status: isDoubtful(study.notices) ? "doubtful" : "done", id, study};
    } catch (error) {
      if (!(error instanceof ReportableError)) throw error;
      return without(id, error);
    }
  };
}

/**
 * What must hold before the first line is computed.
 * @throws {InputError} `support/needs-group`, `support/unknown-group`, `tie/no-line`
 */
export async function checkSurvey(survey: Survey, settings: Settings): Promise<void> {
  checkGroups(survey, settings);
  await checkTies(survey, settings);
}

/**
 * Outcomes in the order of the files; a line that cannot be answered is an outcome too.
 * @param answer where the outcome of a line comes from: computed here, or elsewhere before
 * @throws {InputError} those of `checkSurvey`, before the first line; `zone/…`; `survey/all-skipped`, after the last
 */
export async function* studySurvey(
  survey: Survey,
  settings: Settings,
  answer: LineAnswer = lineAnswers(settings),
): AsyncGenerator<LineOutcome> {
  await checkSurvey(survey, settings);
  let skipped: ReportableError | undefined;
  let kept = 0;
  let index = 0;
  for await (const record of survey.lines()) {
    const outcome = await answer(record, index++);
    if (outcome.status === "skipped") skipped ??= outcome.failure;
    else ++kept;
    yield outcome;
  }
  if (kept === 0 && skipped !== undefined) throw allSkipped(skipped);
}

/** A tie of no line would be lost in silence. */
export async function checkTies(survey: Survey, {model}: Settings): Promise<void> {
  if (model.ties === undefined || model.ties.length === 0) return;
  const lines = new Set<string>();
  for await (const record of survey.lines()) lines.add("failure" in record ? record.id : record.line.id);
  const lost = model.ties.find(({line}) => !lines.has(line));
  if (lost !== undefined)
    throw new InputError(
      "tie/no-line",
      `The tie names line "${lost.line.slice(0, 60)}", which the survey does not have. Correct its line; groundward inspect lists them.`,
      {place: lost.place},
    );
}

const isChainage = <Z extends object>(zone: Z): zone is Extract<Z, ChainageZone> => !("area" in zone);

/** Chainage A:B means something on one axis only. */
export function checkGroups(survey: Survey, settings: Settings): void {
  const groups = survey.axes.map(({group}) => group);
  const named = [
    ...settings.model.support.filter(isChainage).map(({group, from, to}) => ({
      group,
      words: `--support ${from}:${to}`,
      example: `--support ${groups[0]}/${from}:${to}`,
    })),
    ...settings.wanted.strips.filter(isChainage).map(({group, name, from, to}) => ({
      group,
      words: `--strip ${name}=${from}:${to}`,
      example: `--strip ${name}=${groups[0]}/${from}:${to}`,
    })),
  ];
  for (const {group, words, example} of named) {
    if (group === undefined && groups.length > 1)
      throw new InputError(
        "support/needs-group",
        `The lines run in ${groups.length} directions (${groups.join(", ")}), each with an axis of its own, so ${words} is ambiguous. Say which group it belongs to, for example ${example}; groundward inspect lists the groups.`,
      );
    if (group !== undefined && !groups.includes(group))
      throw new InputError(
        "support/unknown-group",
        `${words} names group ${group}, but the lines form ${groups.length > 1 ? "the groups" : "the group"} ${groups.join(", ")}. Correct the group; groundward inspect lists them.`,
      );
  }
}
