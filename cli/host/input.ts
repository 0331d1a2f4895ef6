/** Files that are read. */
import {open} from "node:fs/promises";
import {InputError} from "../../lib/errors.ts";
import type {InputFile} from "../nouns.ts";
import {asking} from "../refusals.ts";
import {readAt} from "./bytes.ts";

export async function openInput(path: string): Promise<InputFile> {
  const handle = await asking(path, () => open(path, "r"));
  try {
    const stat = await asking(path, () => handle.stat());
    if (stat.isDirectory())
      throw new InputError("host/is-a-folder", `"${path}" is a folder. Name a file inside it.`, {place: {file: path}});
    if (!stat.isFile())
      throw new InputError(
        "host/not-a-file",
        `"${path}" is not a file that can be read at any place. Save it to a file first.`,
        {place: {file: path}},
      );
    return {
      name: path,
      size: stat.size,
      read: (offset, length, into) => readAt(handle, path, stat.size, offset, length, into),
      close: () => handle.close(),
    };
  } catch (error) {
    await handle.close();
    throw error;
  }
}
