/** A folder of small files that survive a crash: each is whole or absent, and records are on the disk when told. */
import {type FileHandle, open, readdir, readFile, rename, rm} from "node:fs/promises";
import {hostname} from "node:os";
import {join} from "node:path";
import type {Store} from "../nouns.ts";
import {asking} from "../refusals.ts";
import {makeFolder} from "./folder.ts";

const codeOf = (error: unknown): unknown => (error as NodeJS.ErrnoException).code;

/** Undefined where there is no such file or folder. */
async function present<T>(path: string, request: () => Promise<T>): Promise<T | undefined> {
  try {
    return await request();
  } catch (error) {
    if (codeOf(error) === "ENOENT") return undefined;
    return asking(path, () => Promise.reject(error));
  }
}

/** Opens, hands on and closes. */
async function withFile(path: string, flags: string, use: (file: FileHandle) => Promise<unknown>): Promise<void> {
  const file = await open(path, flags);
  try {
    await use(file);
  } finally {
    await file.close();
  }
}

/** Names are on the disk only when their folder is. Systems without such a request keep names by themselves. */
async function syncFolder(path: string): Promise<void> {
  try {
    await withFile(path, "r", (folder) => folder.sync());
  } catch (error) {
    if (!["EISDIR", "EPERM", "EACCES", "EINVAL"].includes(String(codeOf(error)))) throw error;
  }
}

export function openStore(path: string): Store {
  const at = (name: string): string => join(path, name);
  let made: Promise<unknown> | undefined;
  const writing = (name: string, request: () => Promise<void>): Promise<void> =>
    asking(at(name), async () => {
      made ??= makeFolder(path);
      await made;
      await request();
    });
  return {
    list: async () => ((await present(path, () => readdir(path))) ?? []).sort(),
    read: (name) => present(at(name), () => readFile(at(name))),
    writeWhole: (name, bytes) =>
      writing(name, async () => {
        const {threadId} = await import("node:worker_threads");
        // Machines, processes and threads that share the folder never share a name.
        const own = at(`${name}.${hostname()}-${process.pid}-${threadId}.tmp`);
        await withFile(own, "w", async (file) => {
          await file.writeFile(bytes);
          await file.sync();
        });
        await rename(own, at(name));
        await syncFolder(path);
      }),
    async claim(name, bytes) {
      let ours = true;
      await writing(name, async () => {
        try {
          await withFile(at(name), "wx", (file) => file.writeFile(bytes));
        } catch (error) {
          if (codeOf(error) !== "EEXIST") throw error;
          ours = false;
        }
      });
      return ours;
    },
    append: (name, bytes) =>
      writing(name, () =>
        withFile(at(name), "a", async (file) => {
          await file.writeFile(bytes);
          await file.datasync();
        }),
      ),
    remove: (name) => asking(at(name), () => rm(at(name), {force: true})),
    async dispose() {
      await asking(path, () => rm(path, {recursive: true, force: true}));
      made = undefined;
    },
  };
}
