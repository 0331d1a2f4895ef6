/**
 * Debian's general-purpose tools, for comparisons with the outside. A tool that is
 * missing fails the test that needs it.
 */
import {spawnSync} from "node:child_process";

/** The distribution's interpreter: the one that sees python3-numpy, -scipy, -mpmath and -gdal. */
const PYTHON = "/usr/bin/python3";

/** What a Python program prints, given text on its standard input. */
export const runPython = (script: string, input = ""): string => run(PYTHON, ["-c", script], input);

/** What a program prints. */
export const runTool = (command: string, args: readonly string[]): string => run(command, args, "");

function run(command: string, args: readonly string[], input: string): string {
  const result = spawnSync(command, args, {input, encoding: "utf8", maxBuffer: 1 << 29});
  if (result.error !== undefined)
    throw new Error(
      `${command} could not be run (${result.error.message}). These tests need the Debian packages gdal-bin, python3-gdal, proj-bin, python3-numpy, python3-scipy, python3-mpmath and redis-server.`,
    );
  if (result.status !== 0)
    throw new Error(`${command} ended with status ${result.status ?? result.signal}:\n${result.stderr.slice(-4000)}`);
  return result.stdout;
}
