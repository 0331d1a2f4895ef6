/** Temporary space on the disk. */
import {rmSync} from "node:fs";
import {mkdtemp, open, rm} from "node:fs/promises";
import {tmpdir} from "node:os";
import {join} from "node:path";
import type {Scratch} from "../nouns.ts";
import {asking} from "../refusals.ts";
import {readAt, writeAt} from "./bytes.ts";
import type {Interruption} from "./interruption.ts";

export async function openScratch(interruption: Interruption): Promise<Scratch> {
  const folder = await asking(tmpdir(), () => mkdtemp(join(tmpdir(), "groundward-")));
  const undo = () => rmSync(folder, {recursive: true, force: true});
  interruption.undo.add(undo);
  const path = join(folder, "scratch");
  const handle = await asking(path, () => open(path, "w+"));
  let size = 0;
  return {
    async append(bytes) {
      const at = size;
      size += bytes.length;
      await writeAt(handle, path, bytes, at);
    },
    read: (offset, length) => readAt(handle, path, size, offset, length),
    async dispose() {
      await handle.close();
      await rm(folder, {recursive: true, force: true});
      interruption.undo.delete(undo);
    },
  };
}
