/** A level grid of 2,000 × 2,000 pixels, whole command, against one eigen-decomposition for all rows in numpy and scipy. */
import {spawnSync} from "node:child_process";
import {readFileSync, writeFileSync} from "node:fs";
import {type BenchCase, bytesText, type Figure, median, spreadText} from "./bench-case.ts";
import {BENCH_FOLDER, type Measured, measuredProgram, measuredPython, PYTHON} from "./measured.ts";

const RUNS = 5;
const SIZE = 2_000;
const CLEARANCE = 60;
const CONFIDENCE = 0.95;
/** On all cores, as both run by themselves. */
const TARGET = 0.5;
/**
 * Cells of the baseline are a third of the program's, for what averages away inside a cell is bias that its intervals would
 * miss: 7 % of their width on the program's own cells. Values then differ by the width of cells, 4e-3 of the largest measured;
 * on the same cells 6e-8.
 */
const ALLOWED = {value: 1e-2, multiplier: 1e-2, resolution: 1e-2, norm: 1e-3, misfit: 3e-3};
/** The program's intervals look at windows of a row and are a little longer than the best: 0.7 % to 1.4 % measured. */
const SHORTEST = 0.995;
const LONGEST = 1.05;
const LONGEST_MEDIAN = 1.03;

export const levelGridOptions = (out: string): readonly string[] => [
  ...["--observable", "field-vertical", "--clearance", `${CLEARANCE}`, "--noise", "1", "--bound", "discrepancy"],
  ...["--level", "0", "--confidence", `${CONFIDENCE}`, "--out", out, "--replace", "--quiet"],
];

export const levelGridCase: BenchCase = {
  name: "level-grid",
  title: "Level grid of 2,000 × 2,000 float32: whole command",
  run(folder) {
    const input = `${folder}/grid.tif`;
    const ours = `${folder}/program`;
    const [theirs, settings, summary] = [`${folder}/baseline.tif`, `${folder}/settings.json`, `${folder}/summary.json`];
    measuredPython("level_grid_input.py", [`${SIZE}`, `${SIZE}`, input]);
    const program = (...more: string[]) => measuredProgram(["continue", input, ...levelGridOptions(ours), ...more]);
    program();
    const bound = boundOf(`${ours}/lines.csv`);
    const baseline = (threads: "one" | "all") => {
      writeFileSync(
        settings,
        JSON.stringify({
          ...{clearance: CLEARANCE, noise: 1, confidence: CONFIDENCE, bound},
          // Cells a sixth of a pixel wide; and the rows that the program chose the multiplier by.
          split: 6,
          sample: [0, ...Array.from({length: 40}, (_, k) => 24 + 50 * k)],
          threads: threads === "one" ? 1 : "ALL_CPUS",
        }),
      );
      return measuredPython("level_grid.py", [input, theirs, settings, summary], threads);
    };
    baseline("one");
    const agreement = compare([`${ours}/level_0_rowwise.tif`, `${ours}/lines.csv`, theirs, summary]);
    const runs = {program: [] as Measured[], alone: [] as Measured[], one: [] as Measured[], all: [] as Measured[]};
    for (let k = 0; k < RUNS; ++k) {
      runs.program.push(program());
      runs.all.push(baseline("all"));
      runs.alone.push(program("--workers", "1"));
      runs.one.push(baseline("one"));
    }
    const figure = (
      what: string,
      pick: "seconds" | "processor",
      a: readonly Measured[],
      b: readonly Measured[],
      target?: number,
    ): Figure => {
      const [program, baseline] = [a, b].map((list) => list.map((run) => run[pick])) as [number[], number[]];
      const ratio = median(program) / median(baseline);
      return {
        what,
        program: spreadText(program),
        baseline: spreadText(baseline),
        ratio,
        target: target === undefined ? "" : `≤ ${target}×`,
        met: target === undefined ? undefined : ratio <= target,
      };
    };
    return {
      figures: [
        figure("wall clock, all cores", "seconds", runs.program, runs.all, TARGET),
        figure("wall clock, all cores against one thread", "seconds", runs.program, runs.one),
        figure("processor time, one thread each", "processor", runs.alone, runs.one),
      ],
      notes: [
        `Both read the same tiles of ${SIZE} × ${SIZE} pixels, choose the multiplier by the same 41 rows and give the field at the boundary with its half-width; ${RUNS} runs each, in turn. The program also chooses its bound, and writes the source, overviews, ledger, record and report; the baseline is told the bound.`,
        agreement,
        `Peak memory: program ${bytesText(median(runs.program.map(({peak}) => peak)))}, baseline ${bytesText(median(runs.all.map(({peak}) => peak)))}.`,
      ],
    };
  },
};

/** Of the first row; counted from the end, for the reason before it is quoted and holds commas. */
function boundOf(ledger: string): number {
  const [header, first] = readFileSync(ledger, "utf8").split("\n");
  const names = header!.split(",");
  return Number(first!.split(",").at(names.indexOf("bound") - names.length));
}

/** @throws {Error} where the answers differ by more than is stated above: then no time means anything */
function compare(files: readonly string[]): string {
  const run = spawnSync(PYTHON, [`${BENCH_FOLDER}/level_grid_compare.py`, ...files], {encoding: "utf8"});
  if (run.status !== 0) throw new Error(`level_grid_compare.py failed:\n${run.stderr}`);
  const found = JSON.parse(run.stdout) as Record<keyof typeof ALLOWED | "shortest" | "longest" | "middle", number>;
  const near = (Object.keys(ALLOWED) as (keyof typeof ALLOWED)[]).every((name) => found[name] <= ALLOWED[name]);
  if (!(near && found.shortest >= SHORTEST && found.longest <= LONGEST && found.middle <= LONGEST_MEDIAN))
    throw new Error(`The answers of the case level-grid disagree, so no ratio is given: ${run.stdout}`);
  return (
    `Answers agree: values to ${found.value.toExponential(0)} of the largest (allowed ${ALLOWED.value}), norms to ${found.norm.toExponential(0)}, ` +
    `misfits to ${found.misfit.toExponential(0)}, multiplier to ${found.multiplier.toExponential(0)}; half-widths ${found.shortest.toFixed(3)} – ` +
    `${found.longest.toFixed(3)} of the baseline's, median ${found.middle.toFixed(3)} (allowed ${SHORTEST} – ${LONGEST}, median ${LONGEST_MEDIAN}).`
  );
}
