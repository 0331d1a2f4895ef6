/** One command run to its end, and what the system counted for it. */
import {spawnSync} from "node:child_process";

/** The distribution's interpreter: the one that sees its numpy and scipy. */
export const PYTHON = "/usr/bin/python3";
/** Files beside this one that are not compiled; npm runs scripts from the project's root. */
export const BENCH_FOLDER = "test/bench";

export interface Measured {
  /** Wall clock, s. */
  readonly seconds: number;
  /** Processor time of all its threads, s. */
  readonly processor: number;
  /** Peak resident memory, bytes. */
  readonly peak: number;
}

/** One thread for the algebra behind numpy, at the speed that it finds by itself. */
function singleThread(): NodeJS.ProcessEnv {
  const {OPENBLAS_CORETYPE: _type, OPENBLAS_L2_SIZE: _size, ...rest} = process.env;
  return {...rest, OPENBLAS_NUM_THREADS: "1", OMP_NUM_THREADS: "1", MKL_NUM_THREADS: "1"};
}

/**
 * @param threads of the algebra behind numpy
 * @throws {Error} when the command cannot be run or fails
 */
export function measured(command: string, args: readonly string[], threads: "one" | "all" = "one"): Measured {
  const found = spawnSync(PYTHON, [`${BENCH_FOLDER}/measure.py`, command, ...args], {
    encoding: "utf8",
    env: threads === "one" ? singleThread() : process.env,
  });
  if (found.error !== undefined) throw new Error(`${PYTHON} could not be run: ${found.error.message}`);
  if (found.status !== 0) throw new Error(`measure.py failed:\n${found.stderr}`);
  const {status, ...figures} = JSON.parse(found.stdout) as Measured & {status: number};
  if (status !== 0) throw new Error(`${command} ${args.join(" ")} ended with status ${status}:\n${found.stderr}`);
  return figures;
}

/** The program under test, as it was built beside these files. */
const PROGRAM = new URL("../../cli/main.js", import.meta.url).pathname;

export const measuredProgram = (args: readonly string[]): Measured => measured(process.execPath, [PROGRAM, ...args]);

export const measuredPython = (script: string, args: readonly string[], threads?: "one" | "all"): Measured =>
  measured(PYTHON, [`${BENCH_FOLDER}/${script}`, ...args], threads);

/** What `script --versions` prints. */
export function versionsOf(script: string): Readonly<Record<string, string>> {
  const found = spawnSync(PYTHON, [`${BENCH_FOLDER}/${script}`, "--versions"], {encoding: "utf8"});
  if (found.status !== 0)
    throw new Error(
      `The baseline needs ${PYTHON} with the Debian packages python3-numpy and python3-scipy: ${found.error?.message ?? found.stderr}`,
    );
  return JSON.parse(found.stdout);
}
