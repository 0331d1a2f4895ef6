/** A level grid of 20,000 × 20,000 pixels, whole command: time and peak memory, on request. */
import {type BenchCase, bytesText, type Figure, spreadText} from "./bench-case.ts";
import {levelGridOptions} from "./level-grid-case.ts";
import {measuredProgram, measuredPython} from "./measured.ts";

const COLUMNS = 20_000;
const HEIGHTS = [1_000, 20_000];
const TARGET_SECONDS = 15 * 60;
const TARGET_BYTES = 1e9;

export const hugeGridCase: BenchCase = {
  name: "huge-grid",
  title: "Level grid of 20,000 × 20,000 float32: whole command",
  run(folder) {
    const figures = HEIGHTS.flatMap((rows): Figure[] => {
      const input = `${folder}/grid.tif`;
      measuredPython("level_grid_input.py", [`${COLUMNS}`, `${rows}`, input]);
      const {seconds, processor, peak} = measuredProgram(["continue", input, ...levelGridOptions(`${folder}/out`)]);
      const whole = rows === HEIGHTS.at(-1);
      const figure = (what: string, program: string, target = "", met?: boolean): Figure => ({
        ...{what: `${rows} rows: ${what}`, program, baseline: "–", ratio: undefined, target, met},
      });
      return [
        whole
          ? figure("wall clock", spreadText([seconds]), `< ${TARGET_SECONDS} s`, seconds < TARGET_SECONDS)
          : figure("wall clock", spreadText([seconds])),
        figure("processor time", spreadText([processor])),
        figure("peak memory", bytesText(peak), `< ${bytesText(TARGET_BYTES)}`, peak < TARGET_BYTES),
      ];
    });
    return {
      figures,
      notes: [
        "Level 0 and the source, value and half-width; one run each. Peak memory of both heights tells whether it grows.",
      ],
    };
  },
};
