/** Waits for the lines of a run, tells how far they are, and what keeps them. */
import {InputError} from "../../lib/errors.ts";
import type {BatchPlan} from "../batch/batch.ts";
import {openParts} from "../batch/parts.ts";
import {progressOf} from "../progress.ts";
import type {LineQueue, QueuedRun} from "./line-queue.ts";

const LOOK_MS = 500;
/** Looking costs no more than this part of the time, however many lines the journals hold. */
const SHARE = 10;
/** Without a finished line for so long, the user is told how things stand; then after twice as long, and so on. */
const SILENCE_MS = 10_000;
/** Lines that the queue lost are put into it again so many times without any line finished in between. */
const AGAIN = 3;

/**
 * @param missing places of the lines
 * @returns once all have a note, or another command took the run over, or an interruption came
 * @throws {InputError} `queue/lines-lost`, and those of the queue
 */
export async function follow(
  {host, messages, form, out}: BatchPlan,
  queue: LineQueue,
  run: QueuedRun,
  missing: readonly number[],
): Promise<"done" | "interrupted"> {
  const parts = openParts(host, out);
  const left = new Set(missing);
  const progress = progressOf(host, missing.length, "lines", form.json || form.quiet);
  const told = new Set<string>();
  const goOn = (): string =>
    `${missing.length - left.size} of ${missing.length} lines are finished and the queue goes on with the others. The same command joins it again; when every line is done, groundward gather --out ${out} writes the files as well`;
  let stopped = false;
  let release = (): void => undefined;
  // A server that is away must not keep an interruption waiting.
  const halt = new Promise<undefined>((resolve) => {
    release = host.interruptible({
      stop: () => {
        stopped = true;
        resolve(undefined);
      },
      farewell: goOn,
    });
  });
  const interrupted = (): "interrupted" => {
    host.err.write(`\ninterrupted: ${goOn()}\n`);
    return "interrupted";
  };
  let silence = SILENCE_MS;
  let moved = host.now();
  let submissions = 0;
  try {
    for (;;) {
      // The queue first: what it has let go of is in the journals by then.
      const asked = queue.state(run);
      asked.catch(() => undefined);
      const state = await Promise.race([asked, halt]);
      if (state === undefined) return interrupted();
      const {waiting, active, lost} = state;
      // A server that was away took its time, but not by work.
      const began = host.now();
      for (const {index, line} of (await parts.notes(run.run)).values()) {
        if (!left.delete(index)) continue;
        progress.step(line);
        moved = host.now();
        silence = SILENCE_MS;
        submissions = 0;
      }
      const reading = host.now() - began;
      if (left.size === 0 || (await parts.head())?.run !== run.run) return "done";
      if (stopped) return interrupted();
      if (waiting + active === 0) {
        if (lost.length > 0 || submissions === AGAIN) throw lostLines(left.size, lost[0]?.reason);
        ++submissions;
        if (submissions > 1) messages.note(`${left.size} lines are gone from the queue and are put into it again.`);
        await queue.submit(run, [...left]);
      }
      for (const [worker, reason] of await queue.refusals(run)) {
        if (!told.has(worker)) messages.doubt(`Worker ${worker} does not take part: ${reason} [queue/refused]`);
        told.add(worker);
      }
      if (host.now() - moved > silence) {
        silence *= 2;
        messages.note(await standstill(queue, waiting, active, told.size));
      }
      await host.pause(Math.max(LOOK_MS, SHARE * reading));
    }
  } finally {
    progress.end();
    release();
  }
}

async function standstill(queue: LineQueue, waiting: number, active: number, refusing: number): Promise<string> {
  const workers = await queue.workers();
  const command = `groundward worker --queue ${queue.address}`;
  if (workers === 0) return `${waiting + active} lines wait, and no worker is there. Start one: ${command}`;
  if (workers <= refusing)
    return `${waiting + active} lines wait, and every worker refused them. Start another: ${command}`;
  return `None was finished for a while: lines that wait: ${waiting}; lines that are being computed: ${active}; workers that are there: ${workers}.`;
}

const lostLines = (left: number, reason: string | undefined): InputError =>
  new InputError(
    "queue/lines-lost",
    reason === undefined
      ? `${left} lines were put into the queue ${AGAIN} times and vanished without a result. See that every worker writes to the same folder as --out, and that the server keeps what it is given; then give the same command again.`
      : `${left} lines were given up without a result: ${reason} Cure that and give the same command again; finished lines are taken over.`,
  );
