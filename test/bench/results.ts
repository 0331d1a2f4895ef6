/** The figures as a table, for the terminal and for results.md. */
import {cpus, loadavg, release, totalmem} from "node:os";
import {type BenchCase, bytesText, type CaseResult} from "./bench-case.ts";
import {versionsOf} from "./measured.ts";

export interface Told {
  readonly bench: BenchCase;
  readonly result: CaseResult;
}

const COLUMNS = ["case", "program", "baseline", "ratio", "target", "met"];

export const tableOf = (told: readonly Told[]): string => {
  const rows = told.flatMap(({bench, result}) =>
    result.figures.map((figure) => [
      `${bench.name}: ${figure.what}`,
      figure.program,
      figure.baseline,
      figure.ratio === undefined ? "–" : figure.ratio.toFixed(2),
      figure.target === "" ? "–" : figure.target,
      figure.met === undefined ? "–" : figure.met ? "yes" : "NO",
    ]),
  );
  return markdownTable(COLUMNS, rows);
};

export function markdownTable(columns: readonly string[], rows: readonly (readonly string[])[]): string {
  const width = columns.map((name, k) => Math.max(name.length, ...rows.map((row) => row[k]!.length)));
  const line = (cells: readonly string[]): string =>
    `| ${cells.map((cell, k) => cell.padEnd(width[k]!)).join(" | ")} |`;
  return [line(columns), line(width.map((n) => "-".repeat(n))), ...rows.map(line)].join("\n");
}

/** What the figures were taken on. */
export function machineLines(date: Date): readonly string[] {
  const {python, numpy, scipy} = versionsOf("dense_line.py");
  const cores = cpus();
  return [
    `Date: ${date.toISOString().slice(0, 10)}`,
    `Machine: ${cores[0]?.model ?? "unknown processor"}, ${cores.length} cores, ${bytesText(totalmem())}, ${process.platform} ${release()} ${process.arch}`,
    `Node ${process.versions.node}; Python ${python}, numpy ${numpy}, scipy ${scipy}`,
    `Load average when the figures were done (1, 5, 15 min): ${loadavg()
      .map((load) => load.toFixed(1))
      .join(", ")}; the benchmark itself makes about 1, more means that others used the machine`,
  ];
}

export const resultsText = (told: readonly Told[], date: Date): string => `# Results of the benchmark

Written by \`npm run bench\`; medians with the range in brackets. The program runs its mathematics in one thread, the
baseline's algebra too, but where a row says otherwise. Answers are compared before times: where they disagree the benchmark stops.

${machineLines(date)
  .map((line) => `- ${line}`)
  .join("\n")}

${tableOf(told)}

${told.map(({bench, result}) => `## ${bench.title}\n\n${result.notes.join("\n")}\n`).join("\n")}`;
