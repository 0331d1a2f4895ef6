/** Reads the files that --tie names, before options become settings. */
import {readTies} from "../lib/acquisition/ties.ts";
import {observableNamed} from "../lib/potential/catalogue.ts";
import type {FileDigest} from "../lib/products/record.ts";
import type {Tie} from "../lib/survey/tie.ts";
import {digestOf, withInputs} from "./inputs.ts";
import type {Host} from "./nouns.ts";
import {observableAsked} from "./options/channels.ts";
import {type Asked, allOf} from "./options/entry.ts";

/** @throws {InputError} `host/…`, `tie/…`, `observable/unknown` */
export async function readTieFiles(
  host: Host,
  asked: Asked,
): Promise<{ties: readonly Tie[]; digests: readonly FileDigest[]}> {
  const paths = allOf(asked, "tie");
  const kind = observableAsked(asked);
  if (paths.length === 0 || kind === undefined) return {ties: [], digests: []};
  return withInputs(host, paths, async (files) => {
    const ties: Tie[] = [];
    const digests: FileDigest[] = [];
    for (const file of files) {
      ties.push(...(await readTies(file, observableNamed(kind))));
      digests.push(await digestOf(file));
    }
    return {ties, digests};
  });
}
