/**
 * Level lines studied one after the other in a process of their own, on one thread, through the library.
 * Arguments: `whole` for source and averages or `source` for that alone, stations, lines, where to write.
 */
import {writeFileSync} from "node:fs";
import {estimateLine, studyLine} from "../../lib/study/line-study.ts";
import {levelSettings, levelSurveyLine} from "./level-input.ts";

export interface LevelRun {
  /** Processor's seconds of each line, all threads of the process. */
  readonly seconds: readonly number[];
  readonly density: readonly number[];
  /** Of the last line, nT; empty where the source alone was asked for. */
  readonly average: readonly number[];
  readonly half: readonly number[];
}

const NT = 1e-9;
const processor = (): number => (process.cpuUsage().user + process.cpuUsage().system) / 1e6;

const [what, stations, lines, out] = process.argv.slice(2);
const settings = levelSettings(Number(stations));
const seconds: number[] = [];
let answers: Omit<LevelRun, "seconds"> = {density: [], average: [], half: []};
for (let seed = 1; seed <= Number(lines); ++seed) {
  const line = levelSurveyLine(Number(stations), seed);
  const begun = processor();
  if (what === "source") {
    const {estimate} = estimateLine(line, settings);
    seconds.push(processor() - begun);
    answers = {...answers, density: Array.from(estimate.density, (value) => value / NT)};
  } else {
    const {estimate, averages} = studyLine(line, settings);
    seconds.push(processor() - begun);
    answers = {
      density: Array.from(estimate.density, (value) => value / NT),
      average: Array.from(averages.value, (value) => value / NT),
      half: Array.from(averages.lower, (lower, j) => (0.5 * (averages.upper[j] - lower)) / NT),
    };
  }
}
writeFileSync(out!, JSON.stringify({seconds, ...answers}));
