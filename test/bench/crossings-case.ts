/** Where 10,000 lines cross: found in memory, and a smaller survey from its table to the printed statistics. */
import {closeSync, openSync, statSync, writeSync} from "node:fs";
import {performance} from "node:perf_hooks";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {findCrossings} from "../../lib/survey/crossings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import {misTieFigures} from "../../lib/survey/mis-ties.ts";
import type {LineRecord, Survey} from "../../lib/survey/survey.ts";
import {type BenchCase, bytesText, median, spreadText} from "./bench-case.ts";
import {crossingsIn, type Extent, type InventedLine, inventedLines, LARGE, SMALL} from "./crossings-input.ts";
import {type Measured, measuredProgram} from "./measured.ts";

const RUNS = 3;
/** s. */
const TARGET = 30;

export const crossingsCase: BenchCase = {
  name: "crossings",
  title: "Crossings of 10,000 lines of 1,000 stations, as measured",
  async run(folder) {
    const survey = inMemory(LARGE);
    const found: Taken[] = [];
    for (let k = 0; k < RUNS; ++k) found.push(await takenByFinding(survey));
    const memory = process.memoryUsage().rss;
    const table = `${folder}/lines.csv`;
    writeTable(table, SMALL);
    const command = (path: string) =>
      measuredProgram(["crossings", path, "--observable", "field-vertical", "--as-measured", "--quiet"]);
    const whole = Array.from({length: RUNS}, () => command(table));
    const largeTable = `${folder}/large.csv`;
    writeTable(largeTable, LARGE);
    const large = command(largeTable);
    const seconds = median(found.map((run) => run.seconds));
    const own = {baseline: "–", ratio: undefined};
    const untimed = {...own, target: "", met: undefined};
    return {
      figures: [
        {
          what: "found in memory",
          program: spreadText(found.map((run) => run.seconds)),
          ...own,
          target: `≤ ${TARGET} s`,
          met: seconds <= TARGET,
        },
        {what: "the same, processor time", program: spreadText(found.map((run) => run.processor)), ...untimed},
        {what: "whole command, 1,000 lines", program: spreadText(whole.map((run) => run.seconds)), ...untimed},
        {what: "the same, processor time", program: spreadText(whole.map((run) => run.processor)), ...untimed},
        {
          what: "whole command, 10,000 lines",
          program: spreadText([large.seconds]),
          ...own,
          target: `≤ ${TARGET} s`,
          met: large.seconds <= TARGET,
        },
        {what: "the same, processor time", program: spreadText([large.processor]), ...untimed},
      ],
      notes: [
        `${crossingsIn(LARGE)} crossings among ${rowsIn(LARGE)} stations, found and compared from arrays, ${RUNS} times; memory of the process with the survey in it ${bytesText(memory)}.`,
        `Whole command: tables of ${rowsIn(SMALL)} and ${rowsIn(LARGE)} rows (${bytesText(statSync(table).size)} and ${bytesText(statSync(largeTable).size)}) read three times, the larger by one run; ${crossingsIn(SMALL)} and ${crossingsIn(LARGE)} crossings; peak memory ${bytesText(median(whole.map(({peak}) => peak)))} and ${bytesText(large.peak)}.`,
      ],
    };
  },
};

const rowsIn = ({blocks, lines, ties, stations}: Extent): number => blocks * (lines + ties) * stations;

/** s. */
type Taken = Pick<Measured, "seconds" | "processor">;

/** @throws {Error} where the crossings are not those of the blocks: then no time means anything */
async function takenByFinding(survey: Survey): Promise<Taken> {
  const [started, before] = [performance.now(), process.cpuUsage()];
  const {crossings} = await findCrossings(survey, false);
  const {first, second, count} = crossings;
  const {rms} = misTieFigures(first.value.map((value, i) => value - second.value[i]!));
  const {user, system} = process.cpuUsage(before);
  const seconds = (performance.now() - started) / 1000;
  if (count !== crossingsIn(LARGE) || !(rms > 0)) throw new Error(`${count} crossings were found, rms ${rms}`);
  return {seconds, processor: (user + system) / 1e6};
}

function inMemory(extent: Extent): Survey {
  const lines = Array.from(inventedLines(extent), surveyLine);
  return {
    kind: "lines",
    files: ["made-up.csv"],
    axes: [],
    choices: [],
    delivered: undefined,
    notices: [],
    lineCount: lines.length,
    grid: undefined,
    async *lines(): AsyncGenerator<LineRecord> {
      for (const line of lines) yield {line};
    },
  };
}

function surveyLine({id, isTie, x, y, elevation, value}: InventedLine): SurveyLine {
  return {
    id,
    file: "made-up.csv",
    group: isTie ? "G2" : "G1",
    // Their numbers stand for row, chainage and offset, which are not looked at but to be read off.
    stations: {
      count: x.length,
      row: x,
      chainage: x,
      offset: x,
      x,
      y,
      elevation,
      clearance: undefined,
      ground: undefined,
    },
    channels: [{role: "value", observable: fieldVertical, values: value.map((nT) => nT * 1e-9), noise: 5e-10}],
    direction: 1,
    omitted: 0,
    locate: undefined,
    track: undefined,
    notices: [],
  };
}

function writeTable(path: string, extent: Extent): void {
  const file = openSync(path, "w");
  try {
    writeSync(file, "line,x,y,elevation,value\n");
    for (const {id, x, y, elevation, value} of inventedLines(extent)) {
      const rows: string[] = [];
      for (let i = 0; i < x.length; ++i)
        rows.push(`${id},${x[i]!.toFixed(2)},${y[i]!.toFixed(2)},${elevation[i]!.toFixed(2)},${value[i]!.toFixed(3)}`);
      writeSync(file, `${rows.join("\n")}\n`);
    }
  } finally {
    closeSync(file);
  }
}
