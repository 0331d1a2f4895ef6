/**
 * The only file, with those of `host/`, that reads, writes, asks the time or prints. Everything else in `cli/` gets a
 * `Host`; tests give one of their own or a real one over temporary folders. What a start does not need is loaded when
 * it is first asked for.
 *
 * What the operating system refuses is an `InputError` here: the user acts on it.
 */
import {existsSync, readFileSync, writeSync} from "node:fs";
import {availableParallelism, hostname} from "node:os";
import {dirname, isAbsolute, join} from "node:path";
import {fileURLToPath} from "node:url";
import type {Interruption} from "./host/interruption.ts";
import {isAlive} from "./host/is-alive.ts";
import {openStore} from "./host/store.ts";
import type {Host, Terminal} from "./nouns.ts";

const noInterruption = (): Interruption => ({undo: new Set(), held: false, pending: false, soft: undefined});

/** `version` of the nearest package.json above this file; it stands two folders up once compiled. */
function ownVersion(): string {
  for (let folder = dirname(fileURLToPath(import.meta.url)); ; folder = dirname(folder)) {
    const manifest = join(folder, "package.json");
    if (existsSync(manifest)) return JSON.parse(readFileSync(manifest, "utf8")).version;
    if (dirname(folder) === folder) throw new Error("package.json is missing from the installation");
  }
}

function terminalOn(stream: NodeJS.WriteStream): Terminal {
  return {isTerminal: stream.isTTY === true, columns: stream.columns ?? 100, write: (text) => void stream.write(text)};
}

/** The machine itself. Parts can be replaced, which tests do. */
export function nodeHost(replaced: Partial<Host> = {}, interruption: Interruption = noInterruption()): Host {
  const noColour = (process.env["NO_COLOR"] ?? "") !== "";
  return {
    arguments: process.argv.slice(2),
    out: terminalOn(process.stdout),
    err: terminalOn(process.stderr),
    colour: !noColour && process.stdout.isTTY === true,
    version: ownVersion(),
    runtime: {node: process.version, architecture: process.arch},
    now: () => Date.now(),
    dateText: (milliseconds) => new Date(milliseconds).toISOString(),
    breathe: () => new Promise((done) => setImmediate(done)),
    pause: (milliseconds) => new Promise((done) => setTimeout(done, milliseconds)),
    openInput: async (path) => (await import("./host/input.ts")).openInput(path),
    beside: (file, path) => (isAbsolute(path) ? path : join(dirname(file), path)),
    openOutput: async (path) => (await import("./host/output.ts")).openOutput(path, interruption),
    openScratch: async () => (await import("./host/scratch.ts")).openScratch(interruption),
    openStore,
    folder: process.cwd(),
    cores: availableParallelism(),
    startThreads: async (count, data, script) => (await import("./host/threads.ts")).startThreads(count, data, script),
    openQueue: async (address, lostAfter, tell) =>
      (await import("./host/queue.ts")).openQueue(address, {lostAfter, tell}),
    self: {pid: process.pid, machine: hostname()},
    isAlive,
    interruptible(what) {
      interruption.soft = what;
      return () => {
        if (interruption.soft === what) interruption.soft = undefined;
      };
    },
    ...replaced,
  };
}

/**
 * Runs the program as a process: its result is the exit status.
 * Ctrl-C and SIGTERM end it with 130 after removing what is unfinished; a closed pipe ends nothing.
 */
export async function runAsProcess(program: (host: Host) => Promise<number>): Promise<void> {
  const interruption = noInterruption();
  const leave = () => {
    for (const undo of interruption.undo) undo();
    writeSync(2, `\ninterrupted: ${interruption.soft?.farewell() ?? "nothing of this run was kept"}\n`);
    process.exit(130);
  };
  let asked = false;
  for (const signal of ["SIGINT", "SIGTERM"] as const)
    process.on(signal, () => {
      if (interruption.held) interruption.pending = true;
      else if (asked || interruption.soft?.stop === undefined) leave();
      else {
        asked = true;
        interruption.soft.stop();
      }
    });
  for (const stream of [process.stdout, process.stderr])
    stream.on("error", (error: NodeJS.ErrnoException) => {
      if (error.code !== "EPIPE") throw error;
    });
  const status = await program(nodeHost({}, interruption));
  process.exitCode = interruption.pending ? 130 : status;
}
