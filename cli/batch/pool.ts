/** Many lines, on as many threads as are wanted, or in this one. Each is noted as soon as it is done. */
import type {Host} from "../nouns.ts";
import type {FolderMap} from "../queue/folder-map.ts";
import {type Bench, benchFor} from "./bench.ts";
import type {OpenedRun} from "./opened-run.ts";
import {type PackedError, unpackedError} from "./packed-error.ts";
import type {LineNote, Parts} from "./parts.ts";
import type {StoredRequest} from "./stored-request.ts";

/** Of the input; some 5,000 stations. */
const SMALL_BYTES = 1 << 18;
const PATIENCE_MS = 1000;

/** What a thread is told once. */
export interface ThreadData {
  readonly request: StoredRequest;
  readonly out: string;
  /** Digest that the run must still have. */
  readonly run: string;
  /** Where folders are that the request names otherwise. */
  readonly folders?: readonly FolderMap[];
}

export type ThreadAnswer = {readonly note: LineNote} | {readonly failure: PackedError};

export interface PoolWork {
  readonly host: Host;
  readonly run: OpenedRun;
  readonly request: StoredRequest;
  readonly out: string;
  readonly parts: Parts;
  /** Places of the lines to compute, increasing. */
  readonly places: readonly number[];
  /** Undefined: as many as there are cores, once it is clear that threads are worth their start. */
  readonly workers: number | undefined;
  finished(note: LineNote): void;
  /** Whether no further line is to be begun. */
  stopped(): boolean;
}

/** @throws {ReportableError} for what is wrong with every line; lines finished before are kept */
export async function computeLines(work: PoolWork): Promise<void> {
  const {host, run, request, out, parts, places} = work;
  if (!(threadsFor(work, places) > 1)) return inTurn(work, benchFor(run, parts), 1);
  const rest = await withoutThreads(work);
  const count = threadsFor(work, rest);
  if (!(count > 0) || work.stopped()) return;
  const data: ThreadData = {request, out, run: run.digest};
  const threads = await host.startThreads(count, data);
  const compute = async (index: number): Promise<LineNote> => {
    const answer = (await threads.run(index)) as ThreadAnswer;
    if ("failure" in answer) throw unpackedError(answer.failure);
    return answer.note;
  };
  try {
    await inTurn({...work, places: rest}, {compute}, count);
  } finally {
    await threads.end();
  }
}

const threadsFor = ({host, workers}: PoolWork, places: readonly number[]): number =>
  Math.min(workers ?? host.cores, places.length);

/**
 * A small survey may be done before a thread has loaded what it needs: unless threads were asked for, its first lines
 * are computed here. A heuristic; a thread took 1 s or so to start where it was tried.
 * @returns the places that are left
 */
async function withoutThreads(work: PoolWork): Promise<readonly number[]> {
  const {host, run, parts, places, workers} = work;
  const bytes = run.files.reduce((sum, {size}) => sum + size, 0);
  if (workers !== undefined || bytes > SMALL_BYTES) return places;
  const started = host.now();
  let done = 0;
  await inTurn(
    {
      ...work,
      finished: (note) => {
        ++done;
        work.finished(note);
      },
      stopped: () => work.stopped() || host.now() - started > PATIENCE_MS,
    },
    benchFor(run, parts),
    1,
  );
  return places.slice(done);
}

/** As many lines at a time as `abreast`, the next one as soon as one is done: no more are ever in flight. */
async function inTurn(
  {host, parts, places, finished, stopped}: PoolWork,
  bench: Pick<Bench, "compute">,
  abreast: number,
) {
  let next = 0;
  let failed = false;
  const lane = async (): Promise<void> => {
    while (next < places.length && !stopped() && !failed) {
      try {
        const note = await bench.compute(places[next++]!);
        await parts.note(note);
        finished(note);
      } catch (error) {
        failed = true;
        throw error;
      }
      await host.breathe();
    }
  };
  const ends = await Promise.allSettled(Array.from({length: abreast}, lane));
  for (const end of ends) if (end.status === "rejected") throw end.reason;
}
