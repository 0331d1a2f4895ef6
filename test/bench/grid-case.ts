/** A tall grid: peak memory, and that it does not grow with the height. */
import {readFileSync} from "node:fs";
import {type BenchCase, bytesText, median, spreadText} from "./bench-case.ts";
import {gridOptions, writeGrid} from "./grid-input.ts";
import {type Measured, measuredProgram} from "./measured.ts";

const RUNS = 5;
const ROWS = 4_000;
const TARGET_BYTES = 500e6;
/** A file of half the rows has half the bytes; the program's peak may follow it by no more than this. */
const TARGET_GROWTH = 1.1;
/** Rows without a pixel, at the lower edge; see `grid-input.ts`. */
const EMPTY_ROWS = 5;

export const gridCase: BenchCase = {
  name: "grid",
  title: "Grid of 4,000 rows × 1,000 columns: peak resident memory",
  run(folder) {
    const sizes = [ROWS, ROWS / 2].map((rows) => {
      const input = `${folder}/grid-${rows}.tif`;
      writeGrid(input, rows);
      const runs: Measured[] = [];
      return {rows, input, out: `${folder}/out-${rows}`, runs};
    });
    for (let k = 0; k < RUNS; ++k)
      for (const {input, out, runs} of sizes) runs.push(measuredProgram(["continue", input, ...gridOptions(out)]));
    for (const {rows, out} of sizes) checkRows(`${out}/lines.csv`, rows);
    const [tall, low] = sizes.map(({runs}) => runs);
    const peaks = [tall!, low!].map((runs) => runs.map(({peak}) => peak));
    const growth = median(peaks[0]!) / median(peaks[1]!);
    return {
      figures: [
        {
          what: `peak memory, ${ROWS} rows`,
          program: spreadText(peaks[0]!, bytesText),
          baseline: "–",
          ratio: undefined,
          target: `< ${bytesText(TARGET_BYTES)}`,
          met: Math.max(...peaks[0]!) < TARGET_BYTES,
        },
        {
          what: `peak memory, ${ROWS} rows against ${ROWS / 2}`,
          program: spreadText(peaks[0]!, bytesText),
          baseline: spreadText(peaks[1]!, bytesText),
          ratio: growth,
          target: `≤ ${TARGET_GROWTH}×`,
          met: growth <= TARGET_GROWTH,
        },
        {
          what: `wall clock, ${ROWS} rows against ${ROWS / 2}`,
          program: spreadText(tall!.map(({seconds}) => seconds)),
          baseline: spreadText(low!.map(({seconds}) => seconds)),
          ratio: median(tall!.map(({seconds}) => seconds)) / median(low!.map(({seconds}) => seconds)),
          target: "",
          met: undefined,
        },
      ],
      notes: [
        `float32, a margin without value on every row, a lake on some, ${EMPTY_ROWS} rows empty; level 0, value and half-width; ${RUNS} runs each, in turn. The target holds for the largest peak.`,
        "The baseline is the program itself on a grid of half the rows. Every row was answered, the empty ones skipped.",
      ],
    };
  },
};

/** @throws {Error} unless the ledger answers every row but the empty ones */
function checkRows(ledger: string, rows: number): void {
  const statuses = readFileSync(ledger, "utf8")
    .trimEnd()
    .split("\n")
    .slice(1)
    .map((line) => line.split(",")[1]);
  const skipped = statuses.filter((status) => status === "skipped").length;
  const answered = statuses.filter((status) => status === "done" || status === "doubtful").length;
  if (answered !== rows - EMPTY_ROWS || skipped !== EMPTY_ROWS)
    throw new Error(`${ledger}: of ${rows} rows, ${answered} were answered and ${skipped} skipped`);
}
