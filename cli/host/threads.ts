/** Threads that compute lines or rows. Loaded only when there are some. */
import {fileURLToPath} from "node:url";
import {Piscina} from "piscina";
import {InputError} from "../../lib/errors.ts";
import type {Threads} from "../nouns.ts";

export function startThreads(count: number, data: unknown, script = "worker-thread.js"): Threads {
  const pool = new Piscina({
    filename: fileURLToPath(new URL(`../batch/${script}`, import.meta.url)),
    minThreads: count,
    maxThreads: count,
    idleTimeout: Number.POSITIVE_INFINITY,
    workerData: data,
  });
  return {
    async run(task) {
      try {
        return await pool.run(task);
      } catch (error) {
        if ((error as NodeJS.ErrnoException).code !== "ERR_WORKER_OUT_OF_MEMORY") throw error;
        throw new InputError(
          "host/out-of-memory",
          `A line needs more memory than a thread may take while ${count} work at once. Give fewer with --workers, or wider panels with --panel.`,
          {cause: error},
        );
      }
    },
    end: () => pool.destroy(),
  };
}
