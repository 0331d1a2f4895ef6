/** The files of a survey: opened, digested, and closed again whatever happens. */
import {createHash} from "node:crypto";
import type {ByteSource} from "../lib/formats/byte-source.ts";
import type {FileDigest} from "../lib/products/record.ts";
import {openWithCompanions} from "./companions.ts";
import type {Host, InputFile} from "./nouns.ts";

const BLOCK = 1 << 20;

const withoutFolders = (path: string): string => path.split(/[\\/]/).at(-1)!;

/**
 * Opens `paths`, hands them to `use`, and closes them.
 *
 * A file goes by its name without folders, since that name gets into doubts, report and record, and these
 * must not depend on where the file stood; two files of one name keep the paths that tell them apart.
 * Files that belong to one that is named are opened with it.
 * @throws {InputError} `host/…`
 */
export async function withInputs<T>(
  host: Host,
  paths: readonly string[],
  use: (files: ByteSource[]) => Promise<T>,
): Promise<T> {
  const opened: InputFile[] = [];
  try {
    for (const path of paths) await openWithCompanions(host, path, opened);
    const names = opened.map(({name}) => withoutFolders(name));
    const unique = new Set(names).size === names.length;
    return await use(opened.map(({name, size, read}, i) => ({name: unique ? names[i]! : name, size, read})));
  } finally {
    for (const file of opened) await file.close();
  }
}

/** SHA-256 of a whole file. */
export async function digestOf(source: ByteSource): Promise<FileDigest> {
  const digest = createHash("sha256");
  for (let at = 0; at < source.size; at += BLOCK) digest.update(await source.read(at, BLOCK));
  return {file: source.name, bytes: source.size, sha256: digest.digest("hex")};
}
