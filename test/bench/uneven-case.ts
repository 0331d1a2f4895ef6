/** An uneven line from the library, source and averages on all panels, against the same dense job in numpy and scipy. */
import {readFileSync, writeFileSync} from "node:fs";
import {type BenchCase, type Figure, median, spreadText} from "./bench-case.ts";
import {relativeDifference} from "./columns.ts";
import {measured, measuredPython} from "./measured.ts";
import {type UnevenAnswers, unevenInput} from "./uneven-input.ts";

const RUNS = 5;
const TARGET = 0.5;
/** A quarter of the least height, which is what panels are by default, and as many panels as stations; m. */
const PANELS = [4.5, 2] as const;
const JOB = new URL("uneven-job.js", import.meta.url).pathname;

/** The same equations on the same panels: rounding, over a multiplier of a millionth of the largest eigenvalue. */
const SAME = 1e-7;
/** The program's windows give valid intervals that are a little longer than the best; see `line-case.ts`. */
const SHORTEST = 0.995;
const LONGEST = 1.15;
const LONGEST_MEDIAN = 1.03;
const SHIFT = 0.25;

export const unevenCase: BenchCase = {
  name: "uneven",
  title: "Uneven line of 2,000 stations: source and averages on all panels, from the library",
  run(folder) {
    const found = PANELS.map((panel) => withPanels(`${folder}/${panel}`, panel));
    return {
      figures: found.flatMap(({figures}) => figures),
      notes: [
        `Heights sway by a tenth of ten spacings, stations stray by a sixth of their spacing; ${RUNS} runs each in a process of its own, in turn, one thread. Processor time of the job alone, without starting and reading.`,
        ...found.map(({agreement}) => agreement),
      ],
    };
  },
};

function withPanels(path: string, panel: number): {readonly figures: readonly Figure[]; readonly agreement: string} {
  const input = `${path}.json`;
  writeFileSync(input, JSON.stringify(unevenInput(panel)));
  const answers = (name: string, run: (output: string) => unknown): UnevenAnswers => {
    const output = `${path}-${name}.json`;
    run(output);
    return JSON.parse(readFileSync(output, "utf8")) as UnevenAnswers;
  };
  const runs = Array.from({length: RUNS}, () => ({
    program: answers("program", (output) => measured(process.execPath, [JOB, input, output])),
    baseline: answers("baseline", (output) => measuredPython("uneven_bands.py", [input, output])),
  }));
  const agreement = compare(runs[0]!.program, runs[0]!.baseline);
  const count = runs[0]!.program.density.length;
  const figure = (part: string, pick: "source" | "all", target: number | undefined): Figure => {
    const a = runs.map(({program}) => program[pick]);
    const b = runs.map(({baseline}) => baseline[pick]);
    const ratio = median(a) / median(b);
    return {
      ...{what: `${count} panels, ${part}, processor time`, program: spreadText(a), baseline: spreadText(b), ratio},
      target: target === undefined ? "" : `≤ ${target}×`,
      met: target === undefined ? undefined : ratio <= target,
    };
  };
  return {figures: [figure("all", "all", TARGET), figure("source alone", "source", undefined)], agreement};
}

/** @throws {Error} where the answers differ by more than is stated above: then no time means anything */
function compare(ours: UnevenAnswers, theirs: UnevenAnswers): string {
  const source = relativeDifference(Float64Array.from(ours.density), Float64Array.from(theirs.density));
  const half = ({lower, upper}: UnevenAnswers, j: number): number => 0.5 * (upper[j]! - lower[j]!);
  const middle = ({lower, upper}: UnevenAnswers, j: number): number => 0.5 * (upper[j]! + lower[j]!);
  const widths = ours.lower.map((_, j) => half(ours, j) / half(theirs, j));
  const shift = Math.max(...ours.lower.map((_, j) => Math.abs(middle(ours, j) - middle(theirs, j)) / half(theirs, j)));
  const [shortest, longest] = [Math.min(...widths), Math.max(...widths)];
  const typical = median(widths);
  const agree =
    source <= SAME && shortest >= SHORTEST && longest <= LONGEST && typical <= LONGEST_MEDIAN && shift <= SHIFT;
  const told =
    `${ours.density.length} panels: sources agree to ${source.toExponential(0)} of the largest (allowed ${SAME}); half-widths ` +
    `${shortest.toFixed(3)} – ${longest.toFixed(3)} of the best ones, median ${typical.toFixed(3)} (allowed ${SHORTEST} – ${LONGEST}, ` +
    `median ${LONGEST_MEDIAN}); centres within ${shift.toFixed(2)} half-widths (allowed ${SHIFT}).`;
  if (!agree) throw new Error(`The answers of the case uneven disagree, so no ratio is given. ${told}`);
  return told;
}
