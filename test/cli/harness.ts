/** Runs the program in this process, on the real machine but for terminal, clock and threads, which need the compiled program. */
import {existsSync, mkdtempSync, readdirSync, rmSync, writeFileSync} from "node:fs";
import {tmpdir} from "node:os";
import {join} from "node:path";
import {onTestFinished} from "vitest";
import {nodeHost} from "../../cli/host.ts";
import type {Host, Terminal} from "../../cli/nouns.ts";
import {groundward} from "../../cli/program.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {floatBytes, plainTags, tiffBytes} from "../formats/tiff-bytes.ts";

export interface Outcome {
  readonly status: number;
  readonly out: string;
  readonly err: string;
}

function recorder(isTerminal: boolean): {readonly terminal: Terminal; text(): string} {
  let text = "";
  return {
    terminal: {
      isTerminal,
      columns: 100,
      write: (more) => {
        text += more;
      },
    },
    text: () => text,
  };
}

/** @param replaced parts of the host to put in place of the machine's */
export async function run(args: readonly string[], replaced: Partial<Host> = {}, isTerminal = false): Promise<Outcome> {
  const out = recorder(isTerminal);
  const err = recorder(isTerminal);
  const host = nodeHost({arguments: args, out: out.terminal, err: err.terminal, colour: false, cores: 1, ...replaced});
  const status = await groundward(host);
  return {status, out: out.text(), err: err.text()};
}

/** A folder that goes with the test. */
export function temporaryFolder(): string {
  const folder = mkdtempSync(join(tmpdir(), "groundward-test-"));
  onTestFinished(() => rmSync(folder, {recursive: true, force: true}));
  return folder;
}

/** Writes `name` into a folder of its own; @returns its path */
export function fileWith(name: string, content: string | Uint8Array, folder = temporaryFolder()): string {
  const path = join(folder, name);
  writeFileSync(path, content);
  return path;
}

/** What a folder holds, hidden names too; empty when there is none. */
export const contents = (folder: string): string[] => (existsSync(folder) ? readdirSync(folder).sort() : []);

/** A grid of `field-vertical` in nT, float32, 50 m × 25 m pixels: a ridge that runs across the rows, noise of 1 nT. */
export function gridBytes(width = 24, height = 5): Uint8Array {
  const {normal} = seededRandom(21);
  const values: number[] = [];
  for (let row = 0; row < height; ++row)
    for (let column = 0; column < width; ++column) {
      const x = 50 * (column - width / 2);
      values.push(40 * (Math.atan2(x + 100, 60) - Math.atan2(x - 100, 60)) + normal());
    }
  return tiffBytes(plainTags(width, height), floatBytes(values));
}

/** A gravity survey in CSV: `line,chainage,clearance,gravity`, a strip of mass below chainage 200:260, seeded noise of 0.02 mGal. */
export function surveyText(lines: readonly string[] = ["L1"], stations = 60): string {
  const {normal} = seededRandom(20);
  const rows = ["line,chainage,clearance,gravity"];
  for (const line of lines)
    for (let i = 0; i < stations; ++i) {
      const x = 10 * i;
      // 0.6 mGal on the boundary between 200 and 260, seen from 30 m: a harmonic measure.
      const angle = Math.atan2(x - 200, 30) - Math.atan2(x - 260, 30);
      rows.push(`${line},${x},30,${((0.6 * angle) / Math.PI + 0.02 * normal()).toFixed(5)}`);
    }
  return `${rows.join("\n")}\n`;
}
