/** One line, whole command, against the same dense job in numpy and scipy. */
import {mkdirSync, writeFileSync} from "node:fs";
import {alternate, type BenchCase, bytesText, type Figure, median, spreadText} from "./bench-case.ts";
import {columnsOf, relativeDifference} from "./columns.ts";
import {LINE_SETTINGS, lineOptions, lineTable} from "./line-input.ts";
import {measuredProgram, measuredPython} from "./measured.ts";

const RUNS = 5;
const TARGET = 5;

/** The one source, and the field it makes: the same equations on the same panels, so rounding alone may differ. */
const SAME = 1e-9;
/**
 * The program's intervals look at windows of a long line and are valid but a little longer than the best, which
 * the baseline computes. Shorter ones, or much longer ones, would be another answer: at the ends of the line, where
 * the regional is weakest, a tenth was measured, elsewhere one or two hundredths.
 */
const SHORTEST = 0.995;
const LONGEST = 1.15;
const LONGEST_MEDIAN = 1.03;
/** Centres of two valid intervals of one answer, over the half-width. */
const SHIFT = 0.25;

/** Tables that hold intervals, and the columns compared. */
const TABLES = [
  {file: "source.csv", place: "from_m", single: "source_mGal", lower: "lower_mGal", upper: "upper_mGal"},
  {file: "levels.csv", place: "chainage_m", single: "field_mGal", lower: "lower_mGal", upper: "upper_mGal"},
  {file: "strips.csv", place: "from_m", single: undefined, lower: "lower_kg/m2", upper: "upper_kg/m2"},
] as const;

export const lineCase: BenchCase = {
  name: "line",
  title: "Line of 2,000 stations, 600 panels: whole command",
  run(folder) {
    const table = `${folder}/lines.csv`;
    const settings = `${folder}/settings.json`;
    const ours = `${folder}/program`;
    const theirs = `${folder}/baseline`;
    mkdirSync(theirs);
    writeFileSync(table, lineTable());
    writeFileSync(settings, JSON.stringify(LINE_SETTINGS));
    const program = () => measuredProgram(["continue", table, ...lineOptions(ours)]);
    const baseline = () => measuredPython("dense_line.py", [table, settings, theirs]);
    // The first run of each warms the disk and is compared, not timed.
    program();
    baseline();
    const agreement = compare(ours, theirs);
    const runs = alternate(RUNS, program, baseline);
    const figure = (what: string, pick: "seconds" | "processor", target: number | undefined): Figure => {
      const a = runs.program.map((run) => run[pick]);
      const b = runs.baseline.map((run) => run[pick]);
      const ratio = median(a) / median(b);
      return {
        what,
        program: spreadText(a),
        baseline: spreadText(b),
        ratio,
        target: target === undefined ? "" : `≤ ${target}×`,
        met: target === undefined ? undefined : ratio <= target,
      };
    };
    return {
      figures: [figure("wall clock", "seconds", TARGET), figure("processor time", "processor", undefined)],
      notes: [
        `Both read the same table, fit the source within the bound, and give 600 averages, two levels at every station and three strips with intervals; ${RUNS} runs each, in turn. The program also writes trade-off, ledger, record and report.`,
        agreement,
        `Peak memory: program ${bytesText(median(runs.program.map(({peak}) => peak)))}, baseline ${bytesText(median(runs.baseline.map(({peak}) => peak)))}.`,
      ],
    };
  },
};

/** @throws {Error} where the answers differ by more than is stated above: then no time means anything */
function compare(ours: string, theirs: string): string {
  const single: number[] = [];
  const widths: number[] = [];
  const shifts: number[] = [];
  for (const {file, place, single: name, lower, upper} of TABLES) {
    const names = [place, lower, upper, ...(name === undefined ? [] : [name])];
    const a = columnsOf(`${ours}/${file}`, names);
    const b = columnsOf(`${theirs}/${file}`, names);
    const apart = relativeDifference(a[0]!, b[0]!);
    if (!(apart <= SAME)) throw new Error(`${file}: places differ by ${apart}`);
    if (name !== undefined) single.push(relativeDifference(a[3]!, b[3]!));
    for (let i = 0; i < a[0]!.length; ++i) {
      const half = 0.5 * (b[2]![i]! - b[1]![i]!);
      widths.push((0.5 * (a[2]![i]! - a[1]![i]!)) / half);
      shifts.push(Math.abs(0.5 * (a[2]![i]! + a[1]![i]! - b[2]![i]! - b[1]![i]!)) / half);
    }
  }
  const found = {
    single: Math.max(...single),
    shortest: Math.min(...widths),
    longest: Math.max(...widths),
    middle: median(widths),
    shift: Math.max(...shifts),
  };
  if (
    !(
      found.single <= SAME &&
      found.shortest >= SHORTEST &&
      found.longest <= LONGEST &&
      found.middle <= LONGEST_MEDIAN &&
      found.shift <= SHIFT
    )
  )
    throw new Error(`The answers of the case line disagree, so no ratio is given: ${JSON.stringify(found)}`);
  return (
    `Answers agree: source and fields to ${found.single.toExponential(0)} of the largest (allowed ${SAME}); ` +
    `half-widths ${found.shortest.toFixed(3)} – ${found.longest.toFixed(3)} of the best ones, median ${found.middle.toFixed(3)} ` +
    `(allowed ${SHORTEST} – ${LONGEST}, median ${LONGEST_MEDIAN}); centres within ${found.shift.toFixed(2)} half-widths (allowed ${SHIFT}).`
  );
}
