/** What a command was asked: its command line over its job file. */
import {InputError} from "../lib/errors.ts";
import {type Job, readJob} from "./job-file.ts";
import {messagesTo, report} from "./messages.ts";
import type {Host} from "./nouns.ts";
import {type Asked, allOf, isOn, oneOf} from "./options/entry.ts";

export interface Request {
  /** Options and, as `survey`, the files; an option of the command line takes the place of the whole key. */
  readonly asked: Asked;
  /** The part of it that the command line gave. */
  readonly typed: Asked;
  readonly job: Job | undefined;
  readonly form: {readonly json: boolean; readonly quiet: boolean};
}

/**
 * Reads the job file, if one was named, and hands on what was asked; errors of the work are told in the form
 * that the job file asks for.
 * @returns the exit status
 * @throws {ReportableError} of the job file
 */
export async function withRequest(
  host: Host,
  paths: readonly string[],
  options: Asked,
  work: (request: Request) => Promise<number>,
): Promise<number> {
  const typed = new Map(paths.length === 0 ? options : [...options, ["survey", paths] as const]);
  const path = oneOf(options, "job");
  const job = path === undefined ? undefined : await readJob(host, path);
  const asked = new Map([...(job?.asked ?? []), ...typed]);
  const form = {json: isOn(asked, "json"), quiet: isOn(asked, "quiet")};
  try {
    return await work({asked, typed, job, form});
  } catch (error) {
    return report(messagesTo(host, form), error);
  }
}

/**
 * The files to read.
 * @throws {InputError} `survey/missing`
 */
export function surveyOf({asked}: Request, command: string): readonly string[] {
  const paths = allOf(asked, "survey");
  if (paths.length > 0) return paths;
  throw new InputError(
    "survey/missing",
    `No survey is named. Give its files, for example groundward ${command} lines.csv, or the key survey in a job file. See groundward ${command} --help.`,
  );
}

/**
 * Settings from what was asked; where a key of the job file is at fault, the error names its place.
 * @param from turns options into settings
 * @throws {InputError} of `from`
 */
export function settled<T>({asked, typed, job}: Request, from: (asked: Asked) => T): T {
  try {
    return from(asked);
  } catch (error) {
    if (!(error instanceof InputError) || error.place !== undefined || job === undefined) throw error;
    const key = culprit(asked, error.message, from);
    if (key === undefined || typed.has(key) || !job.keys.has(key)) throw error;
    throw new InputError(error.code, error.message, {place: job.placeOf(key), cause: error});
  }
}

/** Gives other options their meaning, so that none can be judged without it. */
const MEANING = "observable";

/** The option that brings the same complaint when it is asked alone. */
function culprit(asked: Asked, message: string, from: (asked: Asked) => unknown): string | undefined {
  const complains = (names: readonly string[]): boolean => {
    try {
      from(new Map([...asked].filter(([name]) => names.includes(name))));
      return false;
    } catch (error) {
      return error instanceof InputError && error.message === message;
    }
  };
  if (complains([MEANING])) return MEANING;
  return [...asked.keys()].find((name) => complains([MEANING, name]));
}
