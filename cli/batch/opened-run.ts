/** A run with its inputs read and checked: the same in the process that was asked, in its threads and elsewhere. */
import {createHash} from "node:crypto";
import {openSurvey} from "../../lib/acquisition/catalogue.ts";
import {InputError} from "../../lib/errors.ts";
import type {ByteSource} from "../../lib/formats/byte-source.ts";
import {type FileDigest, recordJson} from "../../lib/products/record.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import {digestOf, withInputs} from "../inputs.ts";
import type {Host} from "../nouns.ts";
import type {Asked} from "../options/entry.ts";
import {allOf} from "../options/entry.ts";
import {settingsFrom} from "../options/settings.ts";
import {readMaps} from "../read-maps.ts";
import {readTieFiles} from "../read-tie-files.ts";
import {type Counts, noOutcome} from "../run.ts";
import type {RunIdentity} from "../run-difference.ts";
import {PARCEL_FORM} from "./parcel.ts";
import {askedIn, hostAt, type StoredRequest} from "./stored-request.ts";

/** What bytes are promised for: nothing else may change a line. */
export interface WholeIdentity extends RunIdentity {
  readonly program: unknown;
}

export interface OpenedRun {
  readonly settings: Settings;
  readonly survey: Survey;
  readonly files: readonly ByteSource[];
  readonly identity: WholeIdentity;
  /** SHA-256 of the identity. */
  readonly digest: string;
  /** `record.json`. */
  record(outputs: readonly FileDigest[], outcomes: Counts): string;
}

/** @param settle turns options into settings, and may tell where a wrong one stands */
export async function withOpenedRun<T>(
  anywhere: Host,
  request: StoredRequest,
  settle: (from: (asked: Asked) => Settings) => Settings,
  use: (run: OpenedRun) => Promise<T>,
): Promise<T> {
  const host = hostAt(anywhere, request.folder);
  const asked = askedIn(request);
  const {maps, digests} = await readMaps(host, asked);
  const known = await readTieFiles(host, asked);
  const settings = settle((options) => settingsFrom(options, maps, known.ties));
  return withInputs(host, allOf(asked, "survey"), async (files) => {
    const survey = await openSurvey(files, settings.acquisition);
    const inputs: FileDigest[] = [];
    for (const file of files) inputs.push(await digestOf(file));
    inputs.push(...digests, ...known.digests);
    if (request.job !== null) inputs.push(request.job);
    const record = (outputs: readonly FileDigest[], outcomes: Counts): string =>
      recordJson({version: host.version, ...host.runtime, settings, survey, outcomes, inputs, outputs});
    const {program, settings: told, inputs: read} = JSON.parse(record([], noOutcome()));
    const identity: WholeIdentity = {program, settings: told, inputs: read};
    const digest = createHash("sha256")
      .update(JSON.stringify([PARCEL_FORM, identity]))
      .digest("hex");
    return use({settings, survey, files, identity, digest, record});
  });
}

/** The same for a request that was settled before, where anything that changed since is refused. */
export const reopened = <T>(
  host: Host,
  request: StoredRequest,
  digest: string,
  use: (run: OpenedRun) => Promise<T>,
): Promise<T> =>
  withOpenedRun(
    host,
    request,
    (from) => from(askedIn(request)),
    (run) => {
      if (run.digest === digest) return use(run);
      throw new InputError(
        "run/changed",
        "The inputs or the program are no longer those that the run was begun with. Begin it again with --replace.",
      );
    },
  );
