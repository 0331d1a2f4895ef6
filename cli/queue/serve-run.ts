/** A worker's part in one run: its lines are computed in threads, so that this process always answers the queue. */
import {InputError, ReportableError} from "../../lib/errors.ts";
import {type Bench, benchFor} from "../batch/bench.ts";
import {type OpenedRun, withOpenedRun} from "../batch/opened-run.ts";
import {unpackedError} from "../batch/packed-error.ts";
import {type LineNote, openParts, type Parts, type PartsHead} from "../batch/parts.ts";
import type {ThreadAnswer, ThreadData} from "../batch/pool.ts";
import {askedIn} from "../batch/stored-request.ts";
import type {Messages} from "../messages.ts";
import type {Host, Threads} from "../nouns.ts";
import type {Served} from "../options/batch.ts";
import {runDifference} from "../run-difference.ts";
import {mappedHost} from "./folder-map.ts";
import {type Gate, openGate} from "./gate.ts";
import {type LineQueue, type QueuedRun, type TakenLine, TRIES} from "./line-queue.ts";

/** Between two looks at what is left. */
const LOOK_MS = 500;

export interface Shift {
  readonly host: Host;
  readonly messages: Messages;
  readonly quiet: boolean;
  /** Of the worker, among all. */
  readonly name: string;
  readonly queue: LineQueue;
  readonly served: Served;
  stopping(): boolean;
}

/** @returns why the run is refused; undefined once nothing of it is left to take */
export async function serveRun(shift: Shift, run: QueuedRun): Promise<string | undefined> {
  const host = mappedHost(shift.host, shift.served.folders);
  try {
    const head = await openParts(host, run.folder).head();
    if (head === undefined)
      return `This worker finds no run in "${run.folder}", or one of another version of Groundward. Let it see the folder, with --folder FROM=TO where it has another name there.`;
    return await withOpenedRun(
      host,
      head.request,
      (from) => from(askedIn(head.request)),
      async (opened) => {
        if (opened.digest !== run.run) return differenceText(head, opened);
        return serveLines(shift, run, opened, head, openParts(host, run.folder));
      },
    );
  } catch (error) {
    // Of the server: it ends the worker. Everything else is about this run.
    if (error instanceof ReportableError && !error.code.startsWith("queue/")) return error.message;
    throw error;
  }
}

interface Program {
  readonly version?: unknown;
  readonly node?: unknown;
  readonly architecture?: unknown;
}

function differenceText({identity}: PartsHead, opened: OpenedRun): string {
  const [there, here] = [identity.program, opened.identity.program] as [Program, Program];
  if (JSON.stringify(there) !== JSON.stringify(here))
    return `This worker is ${programText(here)}, and the run was begun by ${programText(there)}. Equal bytes need equal programs: install the same on every machine.`;
  return `The run is not the same here: ${runDifference(identity, opened.identity) ?? "its request was replaced"}. Put the files back, or begin the run again with --replace.`;
}

const programText = (program: Program): string =>
  Object.entries(program)
    .map(([name, value]) => `${name} ${value}`)
    .join(", ");

async function serveLines(
  shift: Shift,
  run: QueuedRun,
  opened: OpenedRun,
  {request}: PartsHead,
  parts: Parts,
): Promise<undefined> {
  const {host, messages, queue, served} = shift;
  const count = served.workers ?? host.cores;
  const data: ThreadData = {request, out: run.folder, run: run.run, folders: served.folders};
  const threads = await host.startThreads(count, data);
  const desk: Desk = {shift, opened, parts, threads, bench: benchFor(opened, parts), gate: openGate()};
  let troubled = false;
  const serving = queue.serve(
    run,
    count,
    (line) => answerLine(desk, line),
    (reason) => {
      if (!troubled) messages.note(`The queue is in trouble (${reason}); finished lines are kept.`);
      troubled = true;
    },
  );
  let whole = false;
  try {
    while (!shift.stopping()) {
      await host.pause(LOOK_MS);
      await queue.present(shift.name);
      const {waiting, active} = await queue.state(run);
      troubled = false;
      // What others compute may come back; meanwhile another run may have lines to take.
      if (waiting + active === 0 || (waiting === 0 && (await anotherWaits(queue, run)))) break;
    }
    whole = true;
  } finally {
    await serving.end(!whole);
    await threads.end();
  }
  return undefined;
}

async function anotherWaits(queue: LineQueue, {id}: QueuedRun): Promise<boolean> {
  for (const other of await queue.runs()) if (other.id !== id && (await queue.state(other)).waiting > 0) return true;
  return false;
}

interface Desk {
  readonly shift: Shift;
  readonly opened: OpenedRun;
  readonly parts: Parts;
  readonly threads: Threads;
  readonly bench: Bench;
  readonly gate: Gate;
}

/** @throws what the queue is to try again */
async function answerLine(desk: Desk, line: TakenLine): Promise<void> {
  const {opened, parts, gate} = desk;
  const {index, tries} = line;
  if (tries === 0) return gate.together(() => compute(desk, line));
  const before = (await parts.notes(opened.digest)).get(index);
  if (before !== undefined && (await parts.parcel(before)) !== undefined) return;
  // One that ended its process may end this one too: then no other is in it.
  return gate.alone(() =>
    tries < TRIES ? compute(desk, line) : giveUp(desk, index, "the process that computed it ended each time"),
  );
}

async function compute(desk: Desk, line: TakenLine): Promise<void> {
  await line.begin();
  let answer: ThreadAnswer;
  try {
    answer = (await desk.threads.run(line.index)) as ThreadAnswer;
  } catch (error) {
    if (line.tries + 1 < TRIES) throw error;
    return giveUp(desk, line.index, error instanceof Error ? error.message : String(error));
  }
  // Of what is wrong with every line, such as a full disk: none is to be blamed.
  if ("failure" in answer) throw unpackedError(answer.failure);
  await noted(desk, answer.note);
}

async function giveUp(desk: Desk, index: number, reason: string): Promise<void> {
  const failure = new InputError(
    "queue/line-given-up",
    `The line was given up after ${TRIES} tries: ${reason}. Look at its readings with groundward inspect, give the worker more memory, or leave the line out.`,
  );
  await noted(desk, await desk.bench.giveUp(index, failure));
}

async function noted({shift, parts}: Desk, note: LineNote): Promise<void> {
  await parts.note(note);
  if (!shift.quiet) shift.host.out.write(`${note.line}: ${note.status}\n`);
}
