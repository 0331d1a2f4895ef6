/** A worker: takes the runs that wait in a queue one by one, until it is ended. */

import {messagesTo} from "../messages.ts";
import type {Host} from "../nouns.ts";
import {LOST_AFTER_S, servedFrom} from "../options/batch.ts";
import {type Asked, isOn} from "../options/entry.ts";
import type {LineQueue, QueuedRun} from "./line-queue.ts";
import {type Shift, serveRun} from "./serve-run.ts";

/** Between two looks into the queue. */
const LOOK_MS = 500;

/** @returns the exit status */
export async function workerRun(host: Host, asked: Asked): Promise<number> {
  const served = servedFrom(asked);
  const quiet = isOn(asked, "quiet");
  const messages = messagesTo(host, {json: false, quiet});
  const name = `${host.self.machine}-${host.self.pid}`;
  const queue = await host.openQueue(served.queue, served.lostAfter, messages.note);
  let stopping = false;
  const release = host.interruptible({
    stop: () => {
      stopping = true;
      host.err.write("\nstopping after the lines that are being computed; once more stops at once\n");
    },
    farewell: () => "lines that were being computed go to other workers; finished ones are kept",
  });
  const shift: Shift = {host, messages, quiet, name, queue, served, stopping: () => stopping};
  try {
    if (queue.drops !== undefined) messages.doubt(dropsText(queue));
    messages.note(`worker ${name} waits for lines at ${queue.address}`);
    await work(shift);
    return stopping ? 130 : 0;
  } finally {
    release();
    await queue.close();
  }
}

/** The server may lose lines, in words. */
export const dropsText = ({address, drops}: LineQueue): string =>
  `The server at ${address} drops what it holds when its memory is short (maxmemory-policy ${drops ?? "unknown"}), lines of the queue as well. Set maxmemory-policy noeviction. [queue/may-drop]`;

interface Refusal {
  readonly since: number;
  readonly reason: string;
}

async function work(shift: Shift): Promise<void> {
  const {host, queue, name, served} = shift;
  const refused = new Map<string, Refusal>();
  let worked = host.now();
  while (!shift.stopping()) {
    await queue.present(name);
    const run = await nextRun(shift, refused);
    if (run !== undefined) {
      const reason = await serveRun(shift, run);
      if (reason !== undefined) {
        if (refused.get(run.id)?.reason !== reason)
          shift.messages.note(`The run in ${run.folder} is refused: ${reason}`);
        refused.set(run.id, {since: host.now(), reason});
        await queue.refuse(run, name, reason);
      } else worked = host.now();
    } else if (host.now() - worked > 1000 * served.idle) return;
    else await host.pause(LOOK_MS);
  }
}

/** The oldest run with lines to take, those that were refused a short while ago left out. */
async function nextRun({host, queue}: Shift, refused: ReadonlyMap<string, Refusal>): Promise<QueuedRun | undefined> {
  for (const run of await queue.runs()) {
    const since = refused.get(run.id)?.since;
    if (since !== undefined && host.now() - since < 1000 * LOST_AFTER_S) continue;
    const {waiting, active} = await queue.state(run);
    if (waiting + active > 0) return run;
    await queue.retire(run);
  }
  return undefined;
}
