/** What `cli/` asks of the machine. `host.ts` answers; tests give answers of their own. */

import type {ByteSink, ByteSource, ScratchStore} from "../lib/formats/byte-source.ts";
import type {LineQueue} from "./queue/line-queue.ts";

/** Where text for people or scripts goes. */
export interface Terminal {
  readonly isTerminal: boolean;
  /** Columns of a terminal; 100 elsewhere. */
  readonly columns: number;
  write(text: string): void;
}

export interface InputFile extends ByteSource {
  close(): Promise<void>;
}

export interface OutputFile extends ByteSink {
  /** Whole on the disk afterwards, under its temporary name; SHA-256 in hexadecimal. */
  close(): Promise<{readonly sha256: string; readonly bytes: number}>;
}

/** A folder that receives all files of a run or none of them. */
export interface OutputFolder {
  /** Names that stood in the folder before. */
  readonly before: readonly string[];
  readText(name: string): Promise<string>;
  create(name: string): Promise<OutputFile>;
  /** Puts every created file under its name, then removes `stale` ones. */
  commit(stale: readonly string[]): Promise<void>;
  /** Leaves the folder as it was; harmless after `commit`. */
  abandon(): Promise<void>;
}

export interface Scratch extends ScratchStore {
  dispose(): Promise<void>;
}

/** A folder of files that each are whole or absent, whatever happens to the process; made by the first writing. */
export interface Store {
  /** Sorted; empty where there is no such folder. */
  list(): Promise<readonly string[]>;
  /** Undefined where there is none of that name. */
  read(name: string): Promise<Uint8Array | undefined>;
  /** On the disk when it returns. */
  writeWhole(name: string, bytes: Uint8Array): Promise<void>;
  /** Creates the file; false where one of that name stands. */
  claim(name: string, bytes: Uint8Array): Promise<boolean>;
  /** On the disk when it returns. */
  append(name: string, bytes: Uint8Array): Promise<void>;
  remove(name: string): Promise<void>;
  /** Removes the folder with all that is in it. */
  dispose(): Promise<void>;
}

/** Threads of this process that run `cli/batch/worker-thread.ts`. */
export interface Threads {
  /** One task on a thread that is free. */
  run(task: unknown): Promise<unknown>;
  /** Ends the threads, also at work. */
  end(): Promise<void>;
}

/** A process, as others on the same or another machine know it. */
export interface Owner {
  readonly pid: number;
  readonly machine: string;
}

/** What happens at Ctrl-C or SIGTERM. */
export interface Interruptible {
  /** Asks the work to come to an end by itself, once; the next signal ends it at once. Absent: so does the first. */
  stop?(): void;
  /** What is said when the process ends at once. */
  farewell(): string;
}

export interface Host {
  readonly arguments: readonly string[];
  readonly out: Terminal;
  readonly err: Terminal;
  readonly colour: boolean;
  readonly version: string;
  /** Equal bytes are promised for equal ones. */
  readonly runtime: {readonly node: string; readonly architecture: string};
  /** Milliseconds since 1970. */
  now(): number;
  /** Such a number as a date and time of day, ISO 8601, UTC. */
  dateText(milliseconds: number): string;
  /** Lets signals and other events in between two pieces of work. */
  breathe(): Promise<void>;
  /** Lets so many milliseconds go by. */
  pause(milliseconds: number): Promise<void>;
  openInput(path: string): Promise<InputFile>;
  /** `path` as it reads in the folder of `file`; one that starts at the root stays. */
  beside(file: string, path: string): string;
  openOutput(path: string): Promise<OutputFolder>;
  openScratch(): Promise<Scratch>;
  openStore(path: string): Store;
  /** Where relative paths start from. */
  readonly folder: string;
  /** Threads worth starting at most. */
  readonly cores: number;
  /**
   * @param data plain, for every thread
   * @param script what they run, in `cli/batch`; default: what computes lines
   */
  startThreads(count: number, data: unknown, script?: string): Promise<Threads>;
  /**
   * @param address as `--queue` takes it
   * @param lostAfter seconds of silence after which a line is taken from its worker
   */
  openQueue(address: string, lostAfter: number, tell: (text: string) => void): Promise<LineQueue>;
  readonly self: Owner;
  /** Whether another process is at work, as far as can be told: one of another machine is. */
  isAlive(owner: Owner): boolean;
  /** @returns a function that ends it */
  interruptible(what: Interruptible): () => void;
}
