/** Hundreds of level lines of one geometry, whole command, against the dense job on a few of them. */
import {closeSync, openSync, readSync, writeFileSync} from "node:fs";
import {type BenchCase, bytesText, type Figure, median, spreadText} from "./bench-case.ts";
import {columnsOf, relativeDifference} from "./columns.ts";
import {levelJob, levelOptions, levelTable} from "./level-input.ts";
import {levelBaseline} from "./level-line-case.ts";
import {measuredProgram} from "./measured.ts";

const STATIONS = 2_000;
/** A thousand need no more a line: what is prepared once is shared by more. */
const LINES = 300;
/** Lines that the baseline works out, from the first on. */
const SAMPLE = 3;
const TARGET = 0.05;
/** Readings in the table are rounded to five places, a ten-thousandth of their noise. */
const ROUNDED = 1e-3;

/** A row of the table is shorter. */
const ROW_BYTES = 400;

/** Writes the first rows of a table that is too long to be read whole, its header among them. */
function writeHead(table: string, rows: number, head: string): void {
  const bytes = Buffer.alloc(rows * ROW_BYTES);
  const file = openSync(table, "r");
  const length = readSync(file, bytes);
  closeSync(file);
  writeFileSync(head, bytes.subarray(0, length).toString("utf8").split("\n").slice(0, rows).join("\n"));
}

export const levelLinesCase: BenchCase = {
  name: "level-lines",
  title: `${LINES} level lines of 2,000 stations and one geometry: whole command`,
  run(folder) {
    const table = `${folder}/lines.csv`;
    const out = `${folder}/program`;
    writeFileSync(table, levelTable(STATIONS, LINES));
    const program = measuredProgram(["continue", table, ...levelOptions(STATIONS, out)]);
    const seconds: number[] = [];
    const apart: number[] = [];
    writeHead(`${out}/source.csv`, 1 + SAMPLE * STATIONS, `${folder}/head.csv`);
    const [density] = columnsOf(`${folder}/head.csv`, ["source_nT"]);
    for (let k = 0; k < SAMPLE; ++k) {
      writeFileSync(`${folder}/job.json`, JSON.stringify(levelJob(STATIONS, k + 1)));
      const dense = levelBaseline("dense", folder);
      seconds.push(dense.seconds);
      apart.push(
        relativeDifference(density!.subarray(k * STATIONS, (k + 1) * STATIONS), Float64Array.from(dense.density)),
      );
    }
    const most = Math.max(...apart);
    if (!(most <= ROUNDED)) throw new Error(`The sources of the case level-lines differ by ${most} of the largest.`);
    const figure = (what: string, own: number): Figure => {
      const ratio = own / median(seconds);
      return {what, program: spreadText([own]), baseline: spreadText(seconds), ratio, target: "", met: undefined};
    };
    const clock = figure("a line, wall clock, all cores", program.seconds / LINES);
    return {
      figures: [
        {...clock, target: `≤ ${TARGET}×`, met: clock.ratio! <= TARGET},
        figure("a line, processor time", program.processor / LINES),
      ],
      notes: [
        `The program ran ${LINES} lines once, in ${program.seconds.toFixed(0)} s by the clock and ${program.processor.toFixed(0)} s of processor time, with start, reading, report and tables; the baseline ran ${SAMPLE} of them in one thread without start and reading, and is taken to need as much for each of the rest.`,
        `Sources agree to ${most.toExponential(0)} of the largest (allowed ${ROUNDED}). Peak memory of the program ${bytesText(program.peak)}.`,
      ],
    };
  },
};
