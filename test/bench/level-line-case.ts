/** One level line through the library: the source at its bound and an interval for every panel, against two jobs in numpy. */
import {readFileSync, writeFileSync} from "node:fs";
import {type BenchCase, type Figure, median, spreadText} from "./bench-case.ts";
import {relativeDifference} from "./columns.ts";
import {levelJob} from "./level-input.ts";
import type {LevelRun} from "./level-run.ts";
import {measured, measuredPython} from "./measured.ts";

const STATIONS = 2_000;
const RUNS = 5;
/** Lines in one process: the first finds nothing compiled. */
const LINES = 8;
const TARGET_DENSE = 0.1;
const TARGET_FAST = 1.5;

/** The same panels and norm: rounding, and where conjugate gradients of the fast baseline end. */
const SAME = 1e-6;
/** As in the case `line`: windows cost a little, and the ends of the line most. */
const SHORTEST = 0.99;
const LONGEST_MEDIAN = 1.03;
const SHIFT = 0.3;

interface Answer extends Omit<LevelRun, "seconds"> {
  readonly seconds: number;
}

const numbers = (values: readonly number[]): Float64Array => Float64Array.from(values);

/** @throws {Error} where the answers differ by more than is stated above: then no time means anything */
function levelAgreement(ours: Omit<LevelRun, "seconds">, theirs: Omit<LevelRun, "seconds">): string {
  const apart = relativeDifference(numbers(ours.density), numbers(theirs.density));
  const widths = ours.half.map((half, j) => half / theirs.half[j]!);
  const shifts = ours.average.map((value, j) => Math.abs(value - theirs.average[j]!) / theirs.half[j]!);
  const found = {apart, least: Math.min(...widths), middle: median(widths), shift: median(shifts)};
  const {least, middle, shift} = found;
  if (!(apart <= SAME && least >= SHORTEST && middle <= LONGEST_MEDIAN && shift <= SHIFT))
    throw new Error(`The answers on a level line disagree, so no ratio is given: ${JSON.stringify(found)}`);
  return `source to ${apart.toExponential(0)} of the largest (allowed ${SAME}); half-widths from ${least.toFixed(3)} of the other's on (allowed ${SHORTEST}), median ${middle.toFixed(3)} (allowed ${LONGEST_MEDIAN}); centres apart by ${shift.toFixed(2)} half-widths in the median (allowed ${SHIFT})`;
}

const RUN = new URL("./level-run.js", import.meta.url).pathname;

export function levelRun(what: "whole" | "source", stations: number, lines: number, out: string) {
  const {peak} = measured(process.execPath, [RUN, what, `${stations}`, `${lines}`, out]);
  return {peak, ...(JSON.parse(readFileSync(out, "utf8")) as LevelRun)};
}

export function levelBaseline(kind: "dense" | "fast", folder: string): Answer {
  const out = `${folder}/${kind}.json`;
  measuredPython("level_line.py", [kind, `${folder}/job.json`, out]);
  return JSON.parse(readFileSync(out, "utf8")) as Answer;
}

export const levelLineCase: BenchCase = {
  name: "level-line",
  title: "Level line of 2,000 stations: source at its bound and 2,000 averages with intervals, in one process",
  run(folder) {
    writeFileSync(`${folder}/job.json`, JSON.stringify(levelJob(STATIONS, 1)));
    const alone = levelRun("whole", STATIONS, 1, `${folder}/ours.json`);
    const agreements = (["dense", "fast"] as const).map(
      (kind) => `${kind}: ${levelAgreement(alone, levelBaseline(kind, folder))}`,
    );
    const times = {first: [] as number[], later: [] as number[], source: [] as number[]};
    const theirs = {dense: [] as number[], fast: [] as number[]};
    for (let k = 0; k < RUNS; ++k) {
      const {seconds} = levelRun("whole", STATIONS, LINES, `${folder}/ours.json`);
      times.first.push(seconds[0]!);
      times.later.push(seconds.at(-1)!);
      times.source.push(levelRun("source", STATIONS, LINES, `${folder}/source.json`).seconds.at(-1)!);
      for (const kind of ["dense", "fast"] as const) theirs[kind].push(levelBaseline(kind, folder).seconds);
    }
    const figure = (
      what: string,
      own: readonly number[],
      kind: "dense" | "fast",
      target: number | undefined,
    ): Figure => {
      const ratio = median(own) / median(theirs[kind]);
      return {
        ...{what, program: spreadText(own), baseline: spreadText(theirs[kind]), ratio},
        target: target === undefined ? "" : `≤ ${target}×`,
        met: target === undefined ? undefined : ratio <= target,
      };
    };
    return {
      figures: [
        figure("against eigen-decompositions", times.later, "dense", TARGET_DENSE),
        figure("against transforms", times.later, "fast", TARGET_FAST),
        figure("first line of a process, against eigen-decompositions", times.first, "dense", undefined),
        figure("first line of a process, against transforms", times.first, "fast", undefined),
        figure("the source alone, against the whole of transforms", times.source, "fast", undefined),
      ],
      notes: [
        `Processor time inside the process, reading and start left out on both sides; lines ${LINES} of a process where nothing else is said, each with nothing kept from the others; ${RUNS} runs each, in turn.`,
        ...agreements.map((words) => `Answers agree with ${words}.`),
      ],
    };
  },
};
