/** Whose a folder is while a run writes to it. */
import {existsSync} from "node:fs";
import {mkdir, readFile, rm, writeFile} from "node:fs/promises";
import {hostname} from "node:os";
import {join} from "node:path";
import {InputError} from "../../lib/errors.ts";
import {UNFINISHED} from "../own-names.ts";
import {asking} from "../refusals.ts";
import {isAlive} from "./is-alive.ts";

/** Whether the run that left `unfinished` behind still works. */
async function ownerAlive(unfinished: string): Promise<boolean> {
  let owner: {pid?: unknown; machine?: unknown};
  try {
    owner = JSON.parse(await readFile(join(unfinished, "owner.json"), "utf8"));
  } catch {
    return false;
  }
  const {pid, machine} = owner;
  if (typeof pid !== "number" || typeof machine !== "string") return true;
  return isAlive({pid, machine});
}

const inProgress = (path: string, unfinished: string): InputError =>
  new InputError(
    "host/run-in-progress",
    `Another run is writing to "${path}". Wait for it, choose another folder with --out, or delete "${unfinished}" if no run is on.`,
    {place: {file: path}},
  );

/** The folder's private workplace, which is also the mark that a run is on. */
export async function claim(path: string): Promise<string> {
  const unfinished = join(path, UNFINISHED);
  if (existsSync(unfinished)) {
    if (await ownerAlive(unfinished)) throw inProgress(path, unfinished);
    await asking(path, () => rm(unfinished, {recursive: true, force: true}));
  }
  await asking(path, async () => {
    try {
      await mkdir(unfinished);
    } catch (error) {
      // Another run was quicker.
      throw (error as NodeJS.ErrnoException).code === "EEXIST" ? inProgress(path, unfinished) : error;
    }
  });
  await asking(path, () =>
    writeFile(join(unfinished, "owner.json"), JSON.stringify({pid: process.pid, machine: hostname()})),
  );
  return unfinished;
}
