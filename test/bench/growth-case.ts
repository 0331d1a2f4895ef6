/** How time and memory of one level line grow with its length, each length in a process of its own. */
import {type BenchCase, bytesText, type Figure} from "./bench-case.ts";
import {levelRun} from "./level-line-case.ts";

const STATIONS = [10_000, 30_000, 100_000, 300_000, 1_000_000] as const;
/** With averages and their intervals on all panels: minutes more beyond. */
const STATIONS_WHOLE = [10_000, 30_000, 100_000] as const;
const EXPONENT = 1.15;
const MEMORY = 2e9;

/** The slope of a straight line through the points, by least squares. */
function slopeThrough(x: readonly number[], y: readonly number[]): number {
  const mean = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
  const [middleX, middleY] = [mean(x), mean(y)];
  const cross = x.reduce((sum, value, k) => sum + (value - middleX) * (y[k]! - middleY), 0);
  return cross / x.reduce((sum, value) => sum + (value - middleX) ** 2, 0);
}

function grown(
  what: "whole" | "source",
  words: string,
  lengths: readonly number[],
  folder: string,
): {figures: Figure[]; note: string} {
  const runs = lengths.map((stations) => {
    const {seconds, peak} = levelRun(what, stations, 1, `${folder}/${what}.json`);
    return {stations, seconds: seconds[0]!, peak};
  });
  const exponent = slopeThrough(
    runs.map(({stations}) => Math.log(stations)),
    runs.map(({seconds}) => Math.log(seconds)),
  );
  const most = Math.max(...runs.map(({peak}) => peak));
  return {
    figures: [
      {
        ...{what: `${words}: exponent of the processor time`, program: exponent.toFixed(2), baseline: "–"},
        ...{ratio: undefined, target: `≤ ${EXPONENT}`, met: exponent <= EXPONENT},
      },
      {
        ...{what: `${words}: peak memory`, program: bytesText(most), baseline: "–"},
        ...{ratio: undefined, target: `< ${bytesText(MEMORY)}`, met: most < MEMORY},
      },
    ],
    note: `${words}: ${runs.map(({stations, seconds, peak}) => `${stations.toLocaleString("en")} stations ${seconds.toFixed(1)} s, ${bytesText(peak)}`).join("; ")}.`,
  };
}

export const growthCase: BenchCase = {
  name: "growth",
  title: "One level line of 10,000 to 1,000,000 stations, a panel a station",
  run(folder) {
    const source = grown("source", "source alone", STATIONS, folder);
    const whole = grown("whole", "source and averages, to 100,000", STATIONS_WHOLE, folder);
    return {figures: [...source.figures, ...whole.figures], notes: [source.note, whole.note]};
  },
};
