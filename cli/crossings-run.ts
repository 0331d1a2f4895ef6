/** `crossings` on files: tracks crossed, readings carried, tables written and printed. */
import {openSurvey} from "../lib/acquisition/catalogue.ts";
import {deliveredSystem} from "../lib/acquisition/delivered-system.ts";
import {InputError} from "../lib/errors.ts";
import {coordinateSystem} from "../lib/geometry/coordinate-system.ts";
import type {CoordinateSystem} from "../lib/geometry/crs-definition.ts";
import {type Transformation, transformation} from "../lib/geometry/transformation.ts";
import {writeCrossingLinesCsv, writeCrossingsCsv} from "../lib/products/crossing-tables.ts";
import {writeCrossingsGeojson} from "../lib/products/crossings-geojson.ts";
import {type FileDigest, recordJson} from "../lib/products/record.ts";
import {carryCrossings, uncarried} from "../lib/study/carry-crossings.ts";
import {type CrossingResult, crossingResult} from "../lib/study/crossing-result.ts";
import type {Settings} from "../lib/study/settings.ts";
import {type CrossedSurvey, findCrossings} from "../lib/survey/crossings.ts";
import type {Survey} from "../lib/survey/survey.ts";
import {crossingsJson, crossingsText} from "./crossings-text.ts";
import {type Doubts, doubtCollector, doubtText} from "./doubts.ts";
import {failureCollector} from "./failures.ts";
import {digestOf, withInputs} from "./inputs.ts";
import {type Messages, messagesTo} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {type Comparison, comparisonFrom, sharedOptions} from "./options/crossings-options.ts";
import {isOn, oneOf} from "./options/entry.ts";
import {settingsFrom} from "./options/settings.ts";
import {progressOf} from "./progress.ts";
import {readMaps} from "./read-maps.ts";
import {readTieFiles} from "./read-tie-files.ts";
import {type Request, settled, surveyOf} from "./request.ts";
import {type Counts, noOutcome} from "./run.ts";
import {openRunFolder} from "./run-folder.ts";
import {surveyNotes} from "./survey-notes.ts";

const TABLES = ["crossings.csv", "crossing_lines.csv", "crossings.geojson"] as const;

interface Work {
  readonly host: Host;
  readonly messages: Messages;
  readonly survey: Survey;
  readonly settings: Settings;
  readonly comparison: Comparison;
  readonly silent: boolean;
}

interface Studied {
  readonly result: CrossingResult;
  readonly counts: Counts;
  readonly doubts: Doubts;
  /** Exit status; the files are worth keeping unless all lines failed alike. */
  readonly status: number;
  readonly keep: boolean;
}

/**
 * @returns the exit status
 * @throws {ReportableError} when the survey as a whole could not be compared; the folder is left as it was
 */
export async function crossingsRun(request: Request, host: Host): Promise<number> {
  const {typed, job, form} = request;
  const messages = messagesTo(host, form);
  const paths = surveyOf(request, "crossings");
  const shared = sharedOptions(request.asked);
  const {maps, digests} = await readMaps(host, shared);
  const known = await readTieFiles(host, shared);
  const all = settled(request, (options) => settingsFrom(sharedOptions(options), maps, known.ties));
  const settings: Settings = {...all, wanted: {...all.wanted, levels: [], strips: []}};
  const comparison = comparisonFrom(typed);
  const out = oneOf(typed, "out");
  const started = host.now();
  return withInputs(host, paths, async (files) => {
    const survey = await openSurvey(files, settings.acquisition);
    for (const note of surveyNotes(survey)) messages.note(note);
    const work: Work = {host, messages, survey, settings, comparison, silent: form.json || form.quiet};
    if (out === undefined) {
      const studied = await study(work);
      if (studied.keep) tell(work, studied, [], undefined, form.json);
      return studied.status;
    }
    const inputs: FileDigest[] = [];
    for (const file of files) inputs.push(await digestOf(file));
    inputs.push(...digests, ...known.digests, ...(job === undefined ? [] : [job.digest]));
    const record = (outputs: readonly FileDigest[], outcomes: Counts): string => {
      const run = {version: host.version, ...host.runtime, settings, survey, outcomes, inputs, outputs};
      return recordJson({...run, crossings: {...comparison}});
    };
    const folder = await openRunFolder(host, out, {
      identity: JSON.parse(record([], noOutcome())),
      replace: isOn(typed, "replace"),
      writes: (name) => (TABLES as readonly string[]).includes(name),
    });
    try {
      const studied = await study(work);
      if (!studied.keep) return studied.status;
      const {result, counts} = studied;
      await writeCrossingsCsv(await folder.openText("crossings.csv"), result);
      await writeCrossingLinesCsv(await folder.openText("crossing_lines.csv"), result);
      const way = wayToMap(survey, settings, messages);
      if (way !== undefined) await writeCrossingsGeojson(await folder.openText("crossings.geojson"), result, way);
      const outputs = await folder.finish(
        (written) => record(written, counts),
        () => timingJson(host, started),
      );
      tell(work, studied, [...outputs.map(({file}) => file), "record.json", "timing.json"], out, form.json);
      return studied.status;
    } finally {
      await folder.abandon();
    }
  });
}

async function study(work: Work): Promise<Studied> {
  const {survey, settings, comparison, messages} = work;
  const system = deliveredSystem(survey, settings.acquisition);
  const crossed = await findCrossings(survey, system?.kind === "geographic");
  const doubts = doubtCollector();
  doubts.add([...survey.notices, ...crossed.notices]);
  const failures = failureCollector(!work.silent);
  const codes = new Set<number>();
  const counts = noOutcome();
  for (const {id, failure} of crossed.failures) {
    failures.add(failure, id);
    counts.failed++;
  }
  const carried = comparison.asMeasured ? undefined : uncarried(crossed.crossings, comparison.level);
  const without = new Map<string, {status: "skipped" | "failed"; failure: CrossedFailure}>();
  let answered = 0;
  if (carried !== undefined) {
    const progress = progressOf(work.host, carried.tasks.size, "lines", work.silent);
    try {
      for await (const line of carryCrossings(survey, crossed, settings, carried)) {
        if ("notices" in line) {
          ++answered;
          doubts.add(line.notices, line.id);
          if (line.status === "doubtful") counts.doubtful++;
        } else {
          without.set(line.id, {status: line.status, failure: line.failure});
          counts[line.status]++;
          if (line.status === "failed") {
            codes.add(line.failure.exitStatus);
            failures.add(line.failure, line.id);
          }
        }
        progress.step(line.id);
        await work.host.breathe();
      }
    } finally {
      progress.end();
    }
  }
  counts.done = crossed.lines.length - counts.doubtful - counts.skipped - (counts.failed - crossed.failures.length);
  for (const {failure, count, firstLines} of failures.groups())
    messages.error(failure, survey.lineCount > 1 ? {count, firstLines} : undefined);
  const alike = answered === 0 && codes.size === 1;
  return {
    result: crossingResult(crossed, carried, without),
    counts,
    doubts,
    status: alike ? [...codes][0]! : counts.failed > 0 ? 5 : 0,
    keep: !alike,
  };
}

type CrossedFailure = CrossedSurvey["failures"][number]["failure"];

/** To longitude and latitude; undefined, with a note, where the map is not known. */
function wayToMap(survey: Survey, {acquisition}: Settings, messages: Messages): Transformation | undefined {
  const system: CoordinateSystem | undefined = deliveredSystem(survey, acquisition);
  if (system === undefined) {
    messages.note("crossings.geojson is left out: the system of x, y is not known. Give it with --crs EPSG:n.");
    return undefined;
  }
  try {
    return transformation(system, coordinateSystem("EPSG:4326"));
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    messages.note(`crossings.geojson is left out: ${error.message}`);
    return undefined;
  }
}

function tell(
  {host, messages, settings}: Work,
  {result, counts, doubts}: Studied,
  files: readonly string[],
  out: string | undefined,
  json: boolean,
): void {
  if (json) {
    const object = {outcomes: counts, ...crossingsJson(result), doubts: doubts.summary(), out, files};
    host.out.write(`${JSON.stringify(object, undefined, 2)}\n`);
    return;
  }
  for (const kind of doubts.summary())
    if (kind.weight === "doubt") messages.doubt(doubtText(kind));
    else messages.note(doubtText(kind));
  host.out.write(crossingsText(result));
  if (out !== undefined) messages.note(`${files.length} files in ${out}: ${files.join(", ")}.`);
  // What is said of readings that were carried and compared is of no use where none were.
  const carried = result.carried !== undefined && result.crossed.crossings.count > 0;
  if (carried)
    messages.note(
      "Each reading is carried by its own line's source, taken to run on square to that line. Two lines that cross cannot both be right in that: a line along the strike sees too little change with height. Look at crossings where it was the lower one with care.",
    );
  if (carried && settings.model.regional >= 0)
    messages.note(
      "The regional does not change with height and takes some of the anomaly with it, so that part of the change stays behind, more of it the longer the sources are beside the line. Give --regional none where the readings hold no regional.",
    );
  messages.note("A levelling aid, not a levelling: no reading was changed.");
}

function timingJson(host: Host, started: number): string {
  const finished = host.now();
  const timing = {
    started: host.dateText(started),
    finished: host.dateText(finished),
    seconds: {total: (finished - started) / 1000},
  };
  return `${JSON.stringify(timing, undefined, 2)}\n`;
}
