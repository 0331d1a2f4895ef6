/** What `cli/` asks of the machine. `host.ts` answers; tests give answers of their own. */
import type {ByteSink, ByteSource, ScratchStore} from "../lib/formats/byte-source.ts";

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
  openInput(path: string): Promise<InputFile>;
  /** `path` as it reads in the folder of `file`; one that starts at the root stays. */
  beside(file: string, path: string): string;
  openOutput(path: string): Promise<OutputFolder>;
  openScratch(): Promise<Scratch>;
}
