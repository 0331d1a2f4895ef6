/** What `cli/` asks of a queue that machines share. `cli/host/queue.ts` answers; tests give answers of their own. */

/** A run whose lines wait in the queue. */
export interface QueuedRun {
  /** Of run and folder: equal for the same run into the same folder. */
  readonly id: string;
  /** Digest that whoever computes must come to as well. */
  readonly run: string;
  /** `--out`, from the root, as the machine that submitted it sees it. */
  readonly folder: string;
}

/** Lines by where they are; finished ones are gone. */
interface QueueState {
  /** Waiting, or waiting for another try. */
  readonly waiting: number;
  readonly active: number;
  /** Given up, with their reasons. */
  readonly lost: readonly {readonly index: number; readonly reason: string}[];
}

/** A line that was taken from the queue. */
export interface TakenLine {
  readonly index: number;
  /** Times that its computation was begun before, whether it failed or its process ended. */
  readonly tries: number;
  /** To be called before the computation, so that one that ends the process is counted. */
  begin(): Promise<void>;
}

interface Serving {
  /** Takes no further line and waits for those at work, unless it is to end now. */
  end(now?: boolean): Promise<void>;
}

export interface LineQueue {
  /** Address without its password, for people. */
  readonly address: string;
  /** Whether the server may drop lines when its memory is short: the name of its rule. */
  readonly drops: string | undefined;
  /** Adds lines that are not in the queue, and calls for workers. */
  submit(run: QueuedRun, places: readonly number[]): Promise<void>;
  /** Those that call for workers, oldest first. */
  runs(): Promise<readonly QueuedRun[]>;
  state(run: QueuedRun): Promise<QueueState>;
  /** The run calls for workers no more, unless it was submitted again since `runs` told of it. */
  retire(run: QueuedRun): Promise<void>;
  /** Takes everything of the run out of the queue. */
  withdraw(run: QueuedRun): Promise<void>;
  /** A worker tells why it does not take part. */
  refuse(run: QueuedRun, worker: string, reason: string): Promise<void>;
  /** Reasons by worker. */
  refusals(run: QueuedRun): Promise<ReadonlyMap<string, string>>;
  /** A worker is there, for some seconds. */
  present(worker: string): Promise<void>;
  /** Workers that were there during the last seconds. */
  workers(): Promise<number>;
  /**
   * Takes lines, `abreast` at a time. One whose `compute` fails is tried again, and given up after `TRIES`.
   * @param trouble told while the server cannot be reached
   */
  serve(
    run: QueuedRun,
    abreast: number,
    compute: (line: TakenLine) => Promise<void>,
    trouble: (reason: string) => void,
  ): Serving;
  close(): Promise<void>;
}

/** A line that failed so often for another reason than itself is given up. */
export const TRIES = 3;
