/** Long lines whose heights and spacings are uneven: the source at a given norm, without modes, against a dense job. */
import {readFileSync, writeFileSync} from "node:fs";
import {averagesOn, resolutionOf} from "../../lib/inverse/averages.ts";
import {intervalSolver} from "../../lib/inverse/intervals.ts";
import {multiplierForNorm} from "../../lib/inverse/multiplier-for.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {fieldAt} from "../../lib/operators/functional.ts";
import {multipoleOperator} from "../../lib/operators/multipole.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whitenData} from "../../lib/operators/whitened.ts";
import {iterativeSolver} from "../../lib/solvers/iterative.ts";
import {FIELD, unevenLine} from "../harness/uneven-line.ts";
import {type BenchCase, bytesText, type CaseResult} from "./bench-case.ts";
import {relativeDifference} from "./columns.ts";
import {measuredPython} from "./measured.ts";

const SHORT = 2_000;
const LONG = 100_000;
const MILLION = 1_000_000;
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
  const multiplier = multiplierForNorm(solver, bound);
  const density = solver.estimate(multiplier);
  return {line, bound, multiplier, density, setUp: ready - begun, all: processor() - begun};
}

/** Resolution and averages on all panels, and a level at all stations, each number with its interval. */
function answered({line, bound, multiplier}: ReturnType<typeof solved>): number {
  const {readings, panels, values} = line;
  const begun = processor();
  const continuum = continuumOf(
    readings,
    panels.components.map(({interval}) => interval),
  );
  const basis = regionalBasis(continuum, 1);
  const data = whitenData(
    Float64Array.from(continuum.place, (i) => values[i]!),
    continuum,
    basis,
  );
  const intervals = intervalSolver(continuum, basis, data, {bound, confidence: 0.95});
  const resolution = resolutionOf(intervals, panels, multiplier, readings.x);
  averagesOn(
    intervals,
    panels,
    resolution,
    panels.components.map(({interval}) => interval),
  );
  for (let i = 0; i < continuum.count; ++i)
    intervals.interval(fieldAt(continuum.x[i]!, 0.5 * continuum.z[i]!, FIELD, continuum));
  return processor() - begun;
}

/** Source, averages and a level of one long line. */
function longLine(stations: number): CaseResult {
  const long = solved(stations);
  const intervals = answered(long);
  const seconds = (what: string, text: string) => ({
    ...{what: `${stations.toLocaleString("en")} stations, ${what}, processor time`, program: text, baseline: "–"},
    ...{ratio: undefined, target: "", met: undefined},
  });
  return {
    figures: [
      seconds("source", `${long.all.toFixed(1)} s, of which ${long.setUp.toFixed(1)} s to set up`),
      seconds(`${long.line.panels.count.toLocaleString("en")} averages and a level`, `${intervals.toFixed(1)} s`),
    ],
    notes: [`Peak memory of the process: ${bytesText(process.resourceUsage().maxRSS * 1024)}.`],
  };
}

export const unevenLineCase: BenchCase = {
  name: "uneven-line",
  title:
    "Uneven lines: source at a given norm of 2,000 stations; of 100,000 source, averages and a level with intervals",
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
    const long = longLine(LONG);
    return {
      figures: [
        {
          ...{what: "2,000 stations, source, processor time", program: `${short.all.toFixed(1)} s`},
          baseline: `${dense.seconds.toFixed(1)} s`,
          ...{ratio: short.all / dense.seconds, target: "", met: undefined},
        },
        ...long.figures,
      ],
      notes: [
        `Heights sway by a fifth, stations stray by a third of their spacing. Sources of 2,000 stations agree to ${apart.toExponential(0)} of the largest (allowed ${SAME}).`,
        ...long.notes,
      ],
    };
  },
};

export const millionCase: BenchCase = {
  name: "million-stations",
  title: "An uneven line of 1,000,000 stations: source, averages and a level with intervals",
  run: () => longLine(MILLION),
};
