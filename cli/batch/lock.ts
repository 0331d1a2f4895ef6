/** Which shards are at work in a folder: each holds a lock, and a whole run or a gathering waits for all of them. */
import {InputError} from "../../lib/errors.ts";
import type {Host, Owner, Store} from "../nouns.ts";
import {PARTS, UNFINISHED} from "../own-names.ts";

const LOCK = /^shard-.*\.lock$/;

async function ownerIn(store: Store, name: string): Promise<Owner | undefined> {
  const bytes = await store.read(name);
  if (bytes === undefined) return undefined;
  try {
    const {pid, machine} = JSON.parse(new TextDecoder().decode(bytes));
    if (typeof pid === "number" && typeof machine === "string") return {pid, machine};
  } catch {
    // Cut by a crash: whoever wrote it is gone.
  }
  return undefined;
}

const busy = (out: string, what: string, file: string): InputError =>
  new InputError(
    "host/run-in-progress",
    `${what} is at work in "${out}". Wait for it, choose another folder with --out, or delete "${file}" if it is not.`,
    {place: {file: out}},
  );

const words = ({pid, machine}: Owner): string => `process ${pid} on ${machine}`;

/** @throws {InputError} `host/run-in-progress` while a shard is at work; locks of processes that ended are removed */
export async function refuseShards(host: Host, out: string): Promise<void> {
  const store = host.openStore(`${out}/${PARTS}`);
  for (const name of await store.list()) {
    if (!LOCK.test(name)) continue;
    const owner = await ownerIn(store, name);
    if (owner !== undefined && host.isAlive(owner))
      throw busy(out, `A shard (${words(owner)})`, `${out}/${PARTS}/${name}`);
    await store.remove(name);
  }
}

/**
 * @returns a function that gives the lock back
 * @throws {InputError} `host/run-in-progress` while the same shard, or a whole run, is at work there
 */
export async function lockShard(host: Host, out: string, shard: string): Promise<() => Promise<void>> {
  const store = host.openStore(`${out}/${PARTS}`);
  const name = `shard-${shard}.lock`;
  const mine = new TextEncoder().encode(JSON.stringify(host.self));
  while (!(await store.claim(name, mine))) {
    const owner = await ownerIn(store, name);
    if (owner !== undefined && host.isAlive(owner))
      throw busy(out, `The same shard (${words(owner)})`, `${out}/${PARTS}/${name}`);
    await store.remove(name);
  }
  // Looked at once the lock is held: of two that begin together at least one sees the other.
  const whole = await ownerIn(host.openStore(`${out}/${UNFINISHED}`), "owner.json");
  if (whole !== undefined && host.isAlive(whole)) {
    await store.remove(name);
    throw busy(out, `A run (${words(whole)})`, `${out}/${UNFINISHED}`);
  }
  return () => store.remove(name);
}
