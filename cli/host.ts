/**
 * The only file, with those of `host/`, that reads, writes, asks the time or prints. Everything else in `cli/` gets a
 * `Host`; tests give one of their own or a real one over temporary folders.
 *
 * What the operating system refuses is an `InputError` here: the user acts on it.
 */
import {createHash} from "node:crypto";
import {existsSync, readFileSync, rmSync, writeSync} from "node:fs";
import {type FileHandle, mkdir, mkdtemp, open, readdir, readFile, rename, rm, rmdir} from "node:fs/promises";
import {availableParallelism, hostname, tmpdir} from "node:os";
import {basename, dirname, isAbsolute, join, resolve} from "node:path";
import {fileURLToPath} from "node:url";
import {InputError} from "../lib/errors.ts";
import {claim, isAlive} from "./host/claim.ts";
import {openStore} from "./host/store.ts";
import type {Host, InputFile, Interruptible, OutputFile, OutputFolder, Scratch, Terminal} from "./nouns.ts";
import {PARTS, UNFINISHED} from "./own-names.ts";
import {asking} from "./refusals.ts";

const BUFFER_BYTES = 1 << 17;

/** What a signal has to undo before the process ends, and whether it must wait for a moment that may not be cut. */
interface Interruption {
  readonly undo: Set<() => void>;
  held: boolean;
  pending: boolean;
  /** Work that can come to an end by itself. */
  soft: Interruptible | undefined;
}

const noInterruption = (): Interruption => ({undo: new Set(), held: false, pending: false, soft: undefined});

async function openInput(path: string): Promise<InputFile> {
  const handle = await asking(path, () => open(path, "r"));
  try {
    const stat = await asking(path, () => handle.stat());
    if (stat.isDirectory())
      throw new InputError("host/is-a-folder", `"${path}" is a folder. Name a file inside it.`, {place: {file: path}});
    if (!stat.isFile())
      throw new InputError(
        "host/not-a-file",
        `"${path}" is not a file that can be read at any place. Save it to a file first.`,
        {place: {file: path}},
      );
    return {
      name: path,
      size: stat.size,
      read: (offset, length, into) => readAt(handle, path, stat.size, offset, length, into),
      close: () => handle.close(),
    };
  } catch (error) {
    await handle.close();
    throw error;
  }
}

/** The bytes [offset, offset + length) of a file of `size` bytes; fewer where it ends. */
async function readAt(
  handle: FileHandle,
  shown: string,
  size: number,
  offset: number,
  length: number,
  into?: Uint8Array,
) {
  const wanted = Math.max(0, Math.min(length, size - offset));
  const bytes = into !== undefined && into.length >= wanted ? into.subarray(0, wanted) : new Uint8Array(wanted);
  let filled = 0;
  while (filled < bytes.length) {
    const left = bytes.length - filled;
    const {bytesRead} = await asking(shown, () => handle.read(bytes, filled, left, offset + filled));
    if (bytesRead === 0) break;
    filled += bytesRead;
  }
  return bytes.subarray(0, filled);
}

/** Writes every byte from `position` on. */
async function writeAt(handle: FileHandle, shown: string, bytes: Uint8Array, position: number): Promise<void> {
  let done = 0;
  while (done < bytes.length) {
    const left = bytes.length - done;
    const {bytesWritten} = await asking(shown, () => handle.write(bytes, done, left, position + done));
    done += bytesWritten;
  }
}

/** A new file, written through a buffer and digested on the way; `shown` stands in messages. */
async function createFile(path: string, shown: string, opened: Set<FileHandle>): Promise<OutputFile> {
  const handle = await asking(shown, () => open(path, "wx"));
  opened.add(handle);
  const digest = createHash("sha256");
  const buffer = new Uint8Array(BUFFER_BYTES);
  let filled = 0;
  let written = 0;
  const flush = async () => {
    const bytes = buffer.subarray(0, filled);
    digest.update(bytes);
    await writeAt(handle, shown, bytes, written);
    written += filled;
    filled = 0;
  };
  return {
    async write(bytes) {
      for (let taken = 0; taken < bytes.length; ) {
        const step = Math.min(bytes.length - taken, BUFFER_BYTES - filled);
        buffer.set(bytes.subarray(taken, taken + step), filled);
        filled += step;
        taken += step;
        if (filled === BUFFER_BYTES) await flush();
      }
    },
    async close() {
      await flush();
      await asking(shown, () => handle.sync());
      await asking(shown, () => handle.close());
      opened.delete(handle);
      return {sha256: digest.digest("hex"), bytes: written};
    },
  };
}

async function openOutput(path: string, interruption: Interruption): Promise<OutputFolder> {
  const firstMade = await asking(path, () => mkdir(path, {recursive: true}));
  const opened = new Set<FileHandle>();
  const created: string[] = [];
  let workplace: string | undefined;
  const removeMade = async () => {
    // Folders made for this run go, from the inside out, as long as they are empty.
    if (firstMade === undefined) return;
    const top = resolve(firstMade);
    for (let at = resolve(path); at.length >= top.length; at = dirname(at)) {
      try {
        await rmdir(at);
      } catch {
        return;
      }
    }
  };
  const undo = () => {
    if (workplace !== undefined) rmSync(workplace, {recursive: true, force: true});
  };
  interruption.undo.add(undo);
  const abandon = async () => {
    interruption.undo.delete(undo);
    if (workplace === undefined) return;
    for (const handle of opened) await handle.close().catch(() => undefined);
    await rm(workplace, {recursive: true, force: true});
    workplace = undefined;
    await removeMade();
  };
  try {
    workplace = await claim(path);
    const before = (await asking(path, () => readdir(path)))
      .filter((name) => name !== UNFINISHED && name !== PARTS)
      .sort();
    const inside = workplace;
    return {
      before,
      readText: (name) => asking(join(path, name), () => readFile(join(path, name), "utf8")),
      async create(name) {
        if (name === "" || name !== basename(name) || name.startsWith("."))
          throw new Error(`"${name}" is no name for a file of a run`);
        const file = await createFile(join(inside, name), join(path, name), opened);
        created.push(name);
        return file;
      },
      async commit(stale) {
        interruption.held = true;
        try {
          for (const name of created)
            await asking(join(path, name), () => rename(join(inside, name), join(path, name)));
          for (const name of stale)
            if (name === basename(name) && !created.includes(name))
              await asking(join(path, name), () => rm(join(path, name), {force: true}));
          await rm(inside, {recursive: true, force: true});
          workplace = undefined;
          interruption.undo.delete(undo);
        } finally {
          interruption.held = false;
        }
      },
      abandon,
    };
  } catch (error) {
    interruption.undo.delete(undo);
    if (workplace !== undefined) await rm(workplace, {recursive: true, force: true});
    await removeMade();
    throw error;
  }
}

async function openScratch(interruption: Interruption): Promise<Scratch> {
  const folder = await asking(tmpdir(), () => mkdtemp(join(tmpdir(), "groundward-")));
  const undo = () => rmSync(folder, {recursive: true, force: true});
  interruption.undo.add(undo);
  const path = join(folder, "scratch");
  const handle = await asking(path, () => open(path, "w+"));
  let size = 0;
  return {
    async append(bytes) {
      const at = size;
      size += bytes.length;
      await writeAt(handle, path, bytes, at);
    },
    read: (offset, length) => readAt(handle, path, size, offset, length),
    async dispose() {
      await handle.close();
      await rm(folder, {recursive: true, force: true});
      interruption.undo.delete(undo);
    },
  };
}

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
    openInput,
    beside: (file, path) => (isAbsolute(path) ? path : join(dirname(file), path)),
    openOutput: (path) => openOutput(path, interruption),
    openScratch: () => openScratch(interruption),
    openStore,
    folder: process.cwd(),
    cores: availableParallelism(),
    startThreads: async (count, data) => (await import("./host/threads.ts")).startThreads(count, data),
    openQueue: async (address, lostAfter) => (await import("./host/queue.ts")).openQueue(address, lostAfter),
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
