/** Long lines whose heights and spacings are uneven: the source at a given norm, without modes, against a dense job. */
import {readFileSync, writeFileSync} from "node:fs";
import {multiplierForNorm} from "../../lib/inverse/multiplier-for.ts";
import {multipoleOperator} from "../../lib/operators/multipole.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";
import {iterativeSolver} from "../../lib/solvers/iterative.ts";
import {unevenLine} from "../harness/uneven-line.ts";
import {type BenchCase, bytesText} from "./bench-case.ts";
import {relativeDifference} from "./columns.ts";
import {measuredPython} from "./measured.ts";

const SHORT = 2_000;
const LONG = 100_000;
/** The same panels and norm: what the steps and the expansions leave out, with room. */
const SAME = 1e-6;
/** The norm asked for, over that at a thousandth of the largest eigenvalue. */
const BOUND_SHARE = 1.05;

/** The processor's seconds of this process: others may use the machine. */
const processor = (): number => (process.cpuUsage().user + process.cpuUsage().system) / 1e6;

function solved(stations: number) {
  const line = unevenLine({stations, sway: 0.2});
  const begun = processor();
  const basis = regionalBasis(line.readings, 1);
  const data = whitenData(line.values, line.readings, basis);
  const solver = iterativeSolver(multipoleOperator(line.readings, line.panels), line.readings, data, basis);
  const ready = processor();
  const bound = BOUND_SHARE * solver.norm(1e-3 * solver.largest);
  const density = solver.estimate(multiplierForNorm(solver, bound));
  return {line, bound, density, setUp: ready - begun, all: processor() - begun};
}

export const unevenLineCase: BenchCase = {
  name: "uneven-line",
  title: "Uneven lines of 2,000 and 100,000 stations: source at a given norm",
  run(folder) {
    const short = solved(SHORT);
    const {readings, panels, values} = short.line;
    const input = {
      ...{x: [...readings.x], z: [...readings.z], value: [...values], noise: readings.noise[0]},
      ...{from: panels.from[0], to: panels.to[panels.count - 1], panels: panels.count, bound: short.bound},
    };
    writeFileSync(`${folder}/input.json`, JSON.stringify(input));
    measuredPython("uneven_line.py", [`${folder}/input.json`, `${folder}/output.json`]);
    const dense = JSON.parse(readFileSync(`${folder}/output.json`, "utf8")) as {density: number[]; seconds: number};
    const apart = relativeDifference(short.density, Float64Array.from(dense.density));
    if (!(apart <= SAME)) throw new Error(`The sources of the case uneven-line differ by ${apart} of the largest.`);
    const long = solved(LONG);
    const text = ({setUp, all}: {readonly setUp: number; readonly all: number}): string =>
      `${all.toFixed(1)} s, of which ${setUp.toFixed(1)} s to set up`;
    return {
      figures: [
        {
          ...{what: "2,000 stations, processor time", program: text(short), baseline: `${dense.seconds.toFixed(1)} s`},
          ...{ratio: short.all / dense.seconds, target: "", met: undefined},
        },
        {
          ...{what: "100,000 stations, processor time", program: text(long), baseline: "–"},
          ...{ratio: undefined, target: "", met: undefined},
        },
      ],
      notes: [
        `Heights sway by a fifth, stations stray by a third of their spacing. Sources of 2,000 stations agree to ${apart.toExponential(0)} of the largest (allowed ${SAME}).`,
        `Peak memory of the process with 100,000 stations: ${bytesText(process.resourceUsage().maxRSS * 1024)}.`,
      ],
    };
  },
};
