/** Files that are read together although one was named: lines.dfn with lines.dat, lines.des and lines.prj. */
import {InputError} from "../lib/errors.ts";
import type {Host, InputFile} from "./nouns.ts";

/** Told apart by the end of the name; the first of them defines what the second holds. */
const ENDS = ["dfn", "dat", "des", "prj"] as const;

/**
 * Opens `path`, and with a definition or its data the files that stand beside it, and adds them to `opened`.
 * A data file without a definition stays alone; a companion that was named as well is not opened twice.
 * @throws {InputError} `host/…`
 */
export async function openWithCompanions(host: Host, path: string, opened: InputFile[]): Promise<void> {
  const found = /^(.*\.)(dfn|dat|des|prj)$/is.exec(path);
  const open = async (name: string): Promise<boolean> => {
    if (!opened.some((file) => file.name === name)) opened.push(await host.openInput(name));
    return true;
  };
  if (found === null) {
    opened.push(await host.openInput(path));
    return;
  }
  await open(path);
  const [, base, end] = found as unknown as [string, string, string];
  if (!["dfn", "dat"].includes(end.toLowerCase())) return;
  const upper = end === end.toUpperCase();
  for (const other of ENDS) {
    if (other === end.toLowerCase()) continue;
    const spellings = upper ? [other.toUpperCase(), other] : [other, other.toUpperCase()];
    let there = false;
    for (const spelling of spellings) there ||= await open(`${base}${spelling}`).catch(isMissing);
    if (!there && other === "dfn") return;
  }
}

/** False for a file that is not there; any other refusal stands. */
function isMissing(error: unknown): false {
  if (error instanceof InputError && error.code === "host/not-found") return false;
  throw error;
}
