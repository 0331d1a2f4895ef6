/**
 * record.json: all that repeats the run, in an order that never changes and without any clock time.
 * Settings stand as they are in force, lengths in metres and bounds as they were written.
 */
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import {cautionSentence, cautionsFor} from "../report/cautions.ts";
import {INTERVAL_BASIS} from "../report/interval-basis.ts";
import {jointPromise} from "../report/interval-words.ts";
import {percentText} from "../report/number-text.ts";
import type {Settings, StripSetting, SupportSetting} from "../study/settings.ts";
import type {Survey} from "../survey/survey.ts";

export interface FileDigest {
  readonly file: string;
  readonly bytes: number;
  /** Lower-case hexadecimal. */
  readonly sha256: string;
}

export interface RecordInput {
  readonly version: string;
  /** Bytes are promised for the same Node version and architecture only. */
  readonly node: string;
  readonly architecture: string;
  readonly settings: Settings;
  readonly survey: Survey;
  /** Of a comparison at crossings: the common level, null for the higher of two sensors, and whether readings were carried. */
  readonly crossings?: {readonly level: number | undefined; readonly asMeasured: boolean};
  /** Lines (or rows) by what became of them. */
  readonly outcomes: Readonly<Record<"done" | "doubtful" | "skipped" | "failed", number>>;
  readonly inputs: readonly FileDigest[];
  /** Every file of the run but the record itself and the timing. */
  readonly outputs: readonly FileDigest[];
}

type Plain = string | number | boolean | null | readonly Plain[] | {readonly [key: string]: Plain};

export function recordJson(run: RecordInput): string {
  const {survey, settings} = run;
  const promise = jointPromise(settings.wanted.intervals, percentText(settings.wanted.confidence));
  const record = {
    program: {name: "groundward", version: run.version, node: run.node, architecture: run.architecture},
    inputs: run.inputs.map(digest),
    settings: {
      acquisition: {...settings.acquisition, profiles: nameOf(settings.acquisition.profiles)},
      fieldDirection: settings.fieldDirection,
      model: {...settings.model, support: settings.model.support.map(zoneText)},
      bound: settings.bound.text,
      wanted: {
        ...settings.wanted,
        levelQuantity: (settings.wanted.levelQuantity ?? BOUNDARY_FIELD).name,
        strips: settings.wanted.strips.map(zoneText),
      },
      processing: settings.processing,
      ...(run.crossings === undefined ? {} : {crossings: run.crossings}),
    },
    survey: {
      kind: survey.kind,
      roles: survey.choices.map(({role, column, reason}) => ({role, column, reason})),
      axes: survey.axes.map(({group, azimuth, origin, system, lines}) => ({group, azimuth, origin, system, lines})),
      delivered: survey.delivered,
      grid: survey.grid,
      lines: survey.lineCount,
      notices: survey.notices.map(({code, weight, message}) => ({code, weight, message})),
    },
    outcomes: {
      done: run.outcomes.done,
      doubtful: run.outcomes.doubtful,
      skipped: run.outcomes.skipped,
      failed: run.outcomes.failed,
    },
    intervals: Object.fromEntries(
      Object.entries(INTERVAL_BASIS).map(([basis, {lead, text}]) => [basis, `${promise}${lead} ${text}`]),
    ),
    processing: settings.processing,
    cautions: cautionsFor(survey.kind).map(cautionSentence),
    outputs: run.outputs.map(digest),
  };
  return `${JSON.stringify(ordered(record, SECTIONS), undefined, 2)}\n`;
}

/** Polygons and transects stand by their file, whose digest is among the inputs. */
const nameOf = (profiles: Settings["acquisition"]["profiles"]): string =>
  typeof profiles === "string" ? profiles : profiles.file;
const zoneText = (zone: SupportSetting | StripSetting): unknown =>
  "area" in zone ? {...zone, area: zone.area.words} : zone;

const digest = ({file, bytes, sha256}: FileDigest): FileDigest => ({file, bytes, sha256});

/** Depth down to which keys keep the order written here; below it they are sorted. */
const SECTIONS = 1;

/**
 * A value as JSON knows it: maps become objects, absent and non-finite values null so that no
 * setting is silently missing, and keys are sorted, since the order in which an edge
 * assembles its settings must not reach the bytes.
 */
function ordered(value: unknown, keep: number): Plain {
  if (value === undefined || value === null) return null;
  if (typeof value === "number") return Number.isFinite(value) ? value : null;
  if (typeof value === "string" || typeof value === "boolean") return value;
  if (Array.isArray(value)) return value.map((entry) => ordered(entry, keep - 1));
  const entries = value instanceof Map ? [...value.entries()] : Object.entries(value);
  const named = entries.map(([key, entry]) => [String(key), ordered(entry, keep - 1)] as const);
  if (keep <= 0) named.sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
  return Object.fromEntries(named);
}
