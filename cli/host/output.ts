/** Files of a run: all of them under their names at its end, or none. */
import {createHash} from "node:crypto";
import {rmSync} from "node:fs";
import {type FileHandle, open, readdir, readFile, rename, rm, rmdir} from "node:fs/promises";
import {basename, dirname, join, resolve} from "node:path";
import type {OutputFile, OutputFolder} from "../nouns.ts";
import {PARTS, UNFINISHED} from "../own-names.ts";
import {asking} from "../refusals.ts";
import {writeAt} from "./bytes.ts";
import {claim} from "./claim.ts";
import {makeFolder} from "./folder.ts";
import type {Interruption} from "./interruption.ts";

const BUFFER_BYTES = 1 << 17;

/** A new file, written through a buffer and digested on the way; `shown` stands in messages. */
async function createFile(path: string, shown: string, opened: Set<FileHandle>): Promise<OutputFile> {
  const handle = await asking(shown, () => open(path, "wx"));
  opened.add(handle);
  const digest = createHash("sha256");
  const buffer = new Uint8Array(BUFFER_BYTES);
  let filled = 0;
  let written = 0;
  const flush = async () => {
    const bytes = buffer.subarray(0, filled);
    digest.update(bytes);
    await writeAt(handle, shown, bytes, written);
    written += filled;
    filled = 0;
  };
  return {
    async write(bytes) {
      for (let taken = 0; taken < bytes.length; ) {
        const step = Math.min(bytes.length - taken, BUFFER_BYTES - filled);
        buffer.set(bytes.subarray(taken, taken + step), filled);
        filled += step;
        taken += step;
        if (filled === BUFFER_BYTES) await flush();
      }
    },
    async close() {
      await flush();
      await asking(shown, () => handle.sync());
      await asking(shown, () => handle.close());
      opened.delete(handle);
      return {sha256: digest.digest("hex"), bytes: written};
    },
  };
}

export async function openOutput(path: string, interruption: Interruption): Promise<OutputFolder> {
  const firstMade = await asking(path, () => makeFolder(path));
  const opened = new Set<FileHandle>();
  const created: string[] = [];
  let workplace: string | undefined;
  const removeMade = async () => {
    // Folders made for this run go, from the inside out, as long as they are empty.
    if (firstMade === undefined) return;
    const top = resolve(firstMade);
    for (let at = resolve(path); at.length >= top.length; at = dirname(at)) {
      try {
        await rmdir(at);
      } catch {
        return;
      }
    }
  };
  const undo = () => {
    if (workplace !== undefined) rmSync(workplace, {recursive: true, force: true});
  };
  interruption.undo.add(undo);
  const abandon = async () => {
    interruption.undo.delete(undo);
    if (workplace === undefined) return;
    for (const handle of opened) await handle.close().catch(() => undefined);
    await rm(workplace, {recursive: true, force: true});
    workplace = undefined;
    await removeMade();
  };
  try {
    workplace = await claim(path);
    const before = (await asking(path, () => readdir(path)))
      .filter((name) => name !== UNFINISHED && name !== PARTS)
      .sort();
    const inside = workplace;
    return {
      before,
      readText: (name) => asking(join(path, name), () => readFile(join(path, name), "utf8")),
      async create(name) {
        if (name === "" || name !== basename(name) || name.startsWith("."))
          throw new Error(`"${name}" is no name for a file of a run`);
        const file = await createFile(join(inside, name), join(path, name), opened);
        created.push(name);
        return file;
      },
      async commit(stale) {
        interruption.held = true;
        try {
          for (const name of created)
            await asking(join(path, name), () => rename(join(inside, name), join(path, name)));
          for (const name of stale)
            if (name === basename(name) && !created.includes(name))
              await asking(join(path, name), () => rm(join(path, name), {force: true}));
          await rm(inside, {recursive: true, force: true});
          workplace = undefined;
          interruption.undo.delete(undo);
        } finally {
          interruption.held = false;
        }
      },
      abandon,
    };
  } catch (error) {
    interruption.undo.delete(undo);
    if (workplace !== undefined) await rm(workplace, {recursive: true, force: true});
    await removeMade();
    throw error;
  }
}
