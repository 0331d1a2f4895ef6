/**
 * The program's side of the case `uneven`: source within a bound and averages with intervals on every panel, from the
 * library. A process of its own, so that nothing is warm: `node uneven-job.js input.json output.json`.
 */
import {readFileSync, writeFileSync} from "node:fs";
import {averagesOn, resolutionOf} from "../../lib/inverse/averages.ts";
import {intervalSolver} from "../../lib/inverse/intervals.ts";
import {multiplierForNorm} from "../../lib/inverse/multiplier-for.ts";
import {continuumOf} from "../../lib/operators/continuum.ts";
import {forwardOperator} from "../../lib/operators/forward.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {pick, readingsOf} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {whiten, whitenData} from "../../lib/operators/whitened.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import type {UnevenAnswers, UnevenInput} from "./uneven-input.ts";

const [input, output] = process.argv.slice(2);
const given = JSON.parse(readFileSync(input, "utf8")) as UnevenInput;
const processor = (): number => (process.cpuUsage().user + process.cpuUsage().system) / 1e6;

const begun = processor();
const [from, to] = given.support;
const support = [{from, to}];
const values = Float64Array.from(given.value);
const sensor = {x: Float64Array.from(given.x), z: Float64Array.from(given.z), noise: given.noise};
const readings = readingsOf([{...sensor, response: {re: 1, im: 0, order: 0}, noiseLength: 0}]);
const panels = panelsOn(support, given.panel);
const basis = regionalBasis(readings, 1);
const solver = spectralSolver(whiten(forwardOperator(readings, panels), readings, values, basis), basis.terms);
const bound = given.rms * Math.sqrt(to - from);
const multiplier = multiplierForNorm(solver, bound);
const density = solver.estimate(multiplier);
const solved = processor();

const continuum = continuumOf(readings, support);
const sorted = pick(readings, continuum.place);
const order = regionalBasis(sorted, 1);
const data = whitenData(
  Float64Array.from(continuum.place, (i) => values[i]),
  sorted,
  order,
);
const intervals = intervalSolver(continuum, order, data, {bound, confidence: given.confidence});
const resolution = resolutionOf(intervals, panels, multiplier, readings.x);
const {lower, upper} = averagesOn(intervals, panels, resolution, support);
const answers: UnevenAnswers = {
  ...{density: [...density], lower: [...lower], upper: [...upper], multiplier},
  ...{source: solved - begun, all: processor() - begun},
};
writeFileSync(output, JSON.stringify(answers));
