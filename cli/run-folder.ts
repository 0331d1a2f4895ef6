/** The folder of a run: which files it may write over, their digests, and all of them or none. */
import {InputError} from "../lib/errors.ts";
import type {ByteSink} from "../lib/formats/byte-source.ts";
import type {OpenBytes, OpenScratch, OpenText} from "../lib/products/opening.ts";
import type {FileDigest} from "../lib/products/record.ts";
import type {Host, OutputFile, OutputFolder, Scratch} from "./nouns.ts";
import {type RunIdentity, runDifference} from "./run-difference.ts";

const RECORD = "record.json";
const TIMING = "timing.json";
const encoder = new TextEncoder();

export interface RunFolder {
  readonly openText: OpenText;
  readonly openBytes: OpenBytes;
  readonly openScratch: OpenScratch;
  /**
   * Closes every file, adds the record of their digests and the timing, and puts all in place.
   * @returns the files that the record lists
   */
  finish(record: (outputs: readonly FileDigest[]) => string, timing: () => string): Promise<readonly FileDigest[]>;
  /** Removes what was begun; harmless after `finish`. */
  abandon(): Promise<void>;
}

interface EarlierRun extends RunIdentity {
  readonly outputs: readonly string[];
}

/** The run whose record stands in the folder; undefined where there is none that can be read as ours. */
async function earlierRun(folder: OutputFolder): Promise<EarlierRun | undefined> {
  if (!folder.before.includes(RECORD)) return undefined;
  let record: {program?: {name?: unknown}; settings?: unknown; inputs?: unknown; outputs?: unknown};
  try {
    record = JSON.parse(await folder.readText(RECORD));
  } catch (error) {
    if (error instanceof SyntaxError) return undefined;
    throw error;
  }
  if (record?.program?.name !== "groundward" || !Array.isArray(record.outputs)) return undefined;
  const names = record.outputs.map((output: unknown) => (output as {file?: unknown} | null)?.file);
  return {
    settings: record.settings,
    inputs: record.inputs,
    outputs: names.filter((name): name is string => typeof name === "string"),
  };
}

export interface RunPlan {
  readonly identity: RunIdentity;
  /** Whether files of others and of other runs may be written over. */
  readonly replace: boolean;
  /** Whether the run means to write a file of this name. */
  writes(name: string): boolean;
}

/**
 * @throws {InputError} `out/other-run` when the folder holds a run of other settings or inputs, `out/foreign-file`
 *   when a file that the run means to write exists and is not of an earlier run; neither with `replace`
 */
export async function openRunFolder(
  host: Host,
  path: string,
  {identity, replace, writes}: RunPlan,
): Promise<RunFolder> {
  const folder = await host.openOutput(path);
  const files: {readonly name: string; readonly file: OutputFile}[] = [];
  const scratches: Scratch[] = [];
  const place = {place: {file: path}};
  const abandon = async (): Promise<void> => {
    for (const scratch of scratches.splice(0)) await scratch.dispose();
    await folder.abandon();
  };
  try {
    const earlier = await earlierRun(folder);
    const changed = earlier && runDifference(earlier, identity);
    if (changed !== undefined && !replace)
      throw new InputError(
        "out/other-run",
        `The folder holds another run (${changed}). Give --replace to write over it, or choose another folder with --out.`,
        place,
      );
    const ours = new Set(earlier === undefined ? [] : [...earlier.outputs, RECORD, TIMING]);
    const foreign = (name: string): boolean => !replace && folder.before.includes(name) && !ours.has(name);
    const refuse = (name: string): never => {
      throw new InputError(
        "out/foreign-file",
        `The folder holds a file ${name} that no run recorded there. Move it, give --replace to write over it, or choose another folder with --out.`,
        place,
      );
    };
    // Told now and not after hours of work.
    for (const name of folder.before)
      if (foreign(name) && (name === RECORD || name === TIMING || writes(name))) refuse(name);
    const create = (name: string): Promise<OutputFile> => (foreign(name) ? refuse(name) : folder.create(name));
    const openBytes = async (name: string): Promise<ByteSink> => {
      const file = await create(name);
      files.push({name, file});
      return file;
    };
    const writeWhole = async (name: string, text: string): Promise<void> => {
      const file = await create(name);
      await file.write(encoder.encode(text));
      await file.close();
    };
    return {
      openText: async (name) => {
        const file = await openBytes(name);
        return {write: (text) => file.write(encoder.encode(text))};
      },
      openBytes,
      openScratch: async () => {
        const scratch = await host.openScratch();
        scratches.push(scratch);
        return scratch;
      },
      async finish(record, timing) {
        const outputs: FileDigest[] = [];
        for (const {name, file} of files) outputs.push({file: name, ...(await file.close())});
        await writeWhole(TIMING, timing());
        await writeWhole(RECORD, record(outputs));
        await folder.commit(earlier === undefined ? [] : earlier.outputs);
        for (const scratch of scratches.splice(0)) await scratch.dispose();
        return outputs;
      },
      abandon,
    };
  } catch (error) {
    await abandon();
    throw error;
  }
}
