/**
 * Speed and memory of the program as a user meets it: `npm run bench`, or with names of cases `npm run bench -- line`.
 * Needs Debian's python3-numpy and python3-scipy, for level-grid and huge-grid python3-gdal too. Exit status 1 where a target is missed.
 */
import {mkdirSync, mkdtempSync, rmSync, writeFileSync} from "node:fs";
import {tmpdir} from "node:os";
import {assumedCase} from "./assumed-case.ts";
import {bandCase} from "./band-case.ts";
import {coverageCase} from "./coverage-case.ts";
import {crossingsCase} from "./crossings-case.ts";
import {gridCase} from "./grid-case.ts";
import {growthCase} from "./growth-case.ts";
import {hugeGridCase} from "./huge-grid-case.ts";
import {levelGridCase} from "./level-grid-case.ts";
import {levelLineCase} from "./level-line-case.ts";
import {levelLinesCase} from "./level-lines-case.ts";
import {lineCase} from "./line-case.ts";
import {BENCH_FOLDER} from "./measured.ts";
import {machineLines, resultsText, type Told, tableOf} from "./results.ts";
import {rulesCase} from "./rules-case.ts";
import {startCase} from "./start-case.ts";
import {unevenCase} from "./uneven-case.ts";
import {millionCase, unevenLineCase} from "./uneven-line-case.ts";

const CASES = [
  ...[lineCase, levelLineCase, unevenCase, levelLinesCase, growthCase, gridCase, levelGridCase],
  ...[crossingsCase, startCase],
];
/** Slower, or of answers rather than speed: run by name alone. */
const ON_REQUEST = [rulesCase, coverageCase, bandCase, assumedCase, unevenLineCase, millionCase, hugeGridCase];
const NAMED = [...CASES, ...ON_REQUEST];

const asked = process.argv.slice(2);
const unknown = asked.find((name) => !NAMED.some((each) => each.name === name));
if (unknown !== undefined) {
  console.error(
    `There is no case ${unknown}. Give some of ${NAMED.map(({name}) => name).join(", ")}, or none for ${CASES.map(({name}) => name).join(", ")}.`,
  );
  process.exit(2);
}
const chosen = asked.length === 0 ? CASES : NAMED.filter(({name}) => asked.includes(name));
const folder = mkdtempSync(`${tmpdir()}/groundward-bench-`);
try {
  const told: Told[] = [];
  for (const bench of chosen) {
    console.error(`${bench.title} …`);
    mkdirSync(`${folder}/${bench.name}`);
    const done = {bench, result: await bench.run(`${folder}/${bench.name}`)};
    told.push(done);
    // A full run takes a quarter of an hour: what is known is told.
    console.error(`${tableOf([done])}\n`);
  }
  const date = new Date();
  console.log(machineLines(date).join("\n"));
  console.log(`\n${tableOf(told)}\n`);
  for (const {bench, result} of told)
    console.log([`${bench.title}\n  ${result.notes.join("\n  ")}`, ...(result.tables ?? [])].join("\n\n"), "\n");
  // Only a full run is kept, so that all figures of the page are of one day and machine.
  if (chosen.length === CASES.length && CASES.every((each) => chosen.includes(each)))
    writeFileSync(`${BENCH_FOLDER}/results.md`, resultsText(told, date));
  if (told.some(({result}) => result.figures.some(({met}) => met === false))) process.exitCode = 1;
} finally {
  rmSync(folder, {recursive: true, force: true});
}
