import {hostname} from "node:os";
import type {Owner} from "../nouns.ts";

/** Whether another process is at work, as far as can be told: one of another machine is. */
export function isAlive({pid, machine}: Owner): boolean {
  if (machine !== hostname()) return true;
  // Numbers are used again: whoever had ours before is gone.
  if (pid === process.pid) return false;
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === "EPERM";
  }
}
