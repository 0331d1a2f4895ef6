/**
 * A grid row by row with one pooled multiplier. Two walks over the rows: the first gathers, for every geometry that
 * occurs, the energies of the modes; the second answers. Memory holds one block of rows, a few geometries, and the
 * sums of the rest.
 */
import {InputError, ModelError, ReportableError} from "../errors.ts";
import {misfitLimit} from "../inverse/misfit-range.ts";
import type {BoundChoice} from "../inverse/nouns.ts";
import {doubt, isDoubtful, type Notice} from "../notice.ts";
import {matVecInto} from "../numeric/matmul.ts";
import {valuesOfLine} from "../operators/readings-of-line.ts";
import {whitenData} from "../operators/whitened.ts";
import {energyOutside, evidenceOf, modalSums} from "../solvers/spectral.ts";
import {dataCoefficients} from "../spectral/singular-system.ts";
import {condition} from "../survey/condition.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineRecord, Survey} from "../survey/survey.ts";
import {effectiveDirectionOf} from "./direction-of-line.ts";
import type {RowBand, RowOutcome, RowStudy} from "./outcome.ts";
import {type RowAnswers, type RowGeometry, rowAnswers, rowGeometry} from "./row-geometry.ts";
import type {Settings} from "./settings.ts";
import {statusWithout} from "./skipped.ts";
import {cutNotices, supportOfLine} from "./support-of-line.ts";
import {checkGroups} from "./survey-study.ts";
import {type LineZones, type ZonesOf, zonesFor} from "./zones.ts";

/** Geometries kept at a time: a 1,000-pixel row takes about 25 MB. A heuristic. */
const KEPT = 4;
/** Multipliers at which the largest norm of a row is noted in the first walk, per decade. */
const NORM_POINTS = 8;

/** Sums over all rows of one geometry. */
interface Pool {
  readonly eigenvalues: Float64Array;
  readonly energies: Float64Array;
  /** Of the regional, a row. */
  readonly terms: number;
  rows: number;
  readings: number;
  outside: number;
}

/**
 * Outcomes in the order of the rows.
 * @throws {ReportableError} when no row can be answered, or no multiplier serves them together
 */
export async function* studyGrid(survey: Survey, settings: Settings): AsyncGenerator<RowOutcome> {
  checkGroups(survey, settings);
  if (settings.model.strike !== undefined)
    throw new InputError(
      "strike/grid",
      "--strike turns one line at a time, and the survey is a grid, worked row by row with one bound. Leave it out, or take lines across the strike with --profiles FILE.geojson.",
    );
  if (settings.wanted.intervals === "simultaneous")
    throw new InputError(
      "intervals/grid",
      "--intervals simultaneous makes a band for all numbers of one line, and the survey is a grid, whose rows share their half-widths whatever they read. Leave it out, or take lines across the grid with --profiles FILE.geojson or --every N.",
    );
  const zonesOf = zonesFor(settings);
  const geometries = recent<RowGeometry>(KEPT);
  const pooled = await poolRows(survey, settings, zonesOf, geometries);
  const answers = recent<RowAnswers>(KEPT);
  let index = -1;
  for await (const record of survey.lines()) {
    ++index;
    const prepared = prepare(record, settings, zonesOf);
    if ("failure" in prepared) {
      const {id, failure} = prepared;
      yield {status: statusWithout(failure), id, index, failure};
      continue;
    }
    const {line, conditioned, zones, key} = prepared;
    const geometry = geometries(key, () => rowGeometry(conditioned, settings, zones.support));
    const answer = answers(key, () => rowAnswers(geometry, settings, pooled.bound, pooled.multiplier));
    const study = answerRow(line, conditioned, geometry, answer, pooled, survey.grid);
    const doubtful = isDoubtful(study.notices);
    yield {status: doubtful ? "doubtful" : "done", id: line.id, index, study};
  }
}

type Prepared =
  | {
      readonly line: SurveyLine;
      readonly conditioned: ConditionedLine;
      readonly zones: LineZones;
      /** Rows of one key share their geometry. */
      readonly key: string;
    }
  | {readonly id: string; readonly failure: ReportableError};

function prepare(record: LineRecord, settings: Settings, zonesOf: ZonesOf): Prepared {
  if ("failure" in record) return record;
  // What is wrong with polygons is wrong for every row.
  const zones = zonesOf(record.line);
  const line = {...record.line, notices: [...record.line.notices, ...zones.notices]};
  try {
    const first = condition(line, settings.model.boundary, effectiveDirectionOf(line, settings));
    const conditioned = {...first, notices: [...first.notices, ...cutNotices(first, zones.support)]};
    const pattern = `${patternOf(line, settings.model.support.length > 0)}${directionOf(first)}`;
    if (zones.support === undefined) return {line, conditioned, zones, key: pattern};
    const support = supportOfLine(conditioned, settings.model, zones.support);
    return {line, conditioned, zones, key: `${pattern} ${support.map(({from, to}) => `${from}:${to}`).join(" ")}`};
  } catch (error) {
    if (!(error instanceof ReportableError)) throw error;
    return {id: line.id, failure: error};
  }
}

/** Which pixels hold readings, as runs; the place of the first counts only where the support is fixed. */
function patternOf(line: SurveyLine, placed: boolean): string {
  const {row, count} = line.stations;
  const runs: number[] = placed ? [row[0]] : [];
  let length = 1;
  for (let i = 1; i < count; ++i) {
    const step = row[i] - row[i - 1];
    if (step === 1) ++length;
    else {
      runs.push(length, step);
      length = 1;
    }
  }
  runs.push(length);
  return runs.join(" ");
}

/** Rows share a geometry while the Earth's field along them is the same to a tenth of a degree and a thousandth of β. */
const directionOf = ({direction}: ConditionedLine): string =>
  direction === undefined ? "" : ` ${direction.inclination.toFixed(1)}° ${direction.beta.toFixed(3)}`;

/** The first walk: sums over rows, then the one multiplier and bound. */
async function poolRows(
  survey: Survey,
  settings: Settings,
  zonesOf: ZonesOf,
  geometries: (key: string, make: () => RowGeometry) => RowGeometry,
): Promise<BoundChoice> {
  const pools = new Map<string, Pool>();
  const grid: number[] = [];
  const largest: number[] = [];
  let supportLength = 0;
  let failure: ReportableError | undefined;
  for await (const record of survey.lines()) {
    const prepared = prepare(record, settings, zonesOf);
    if ("failure" in prepared) {
      if (failure === undefined || statusWithout(failure) === "skipped") failure = prepared.failure;
      continue;
    }
    const {conditioned, zones, key} = prepared;
    const geometry = geometries(key, () => rowGeometry(conditioned, settings, zones.support));
    const {modes} = geometry;
    const {data, energies, outside} = onModes(conditioned, geometry);
    let pool = pools.get(key);
    if (pool === undefined) {
      pool = {
        eigenvalues: modes.eigenvalues,
        energies: new Float64Array(modes.count),
        terms: geometry.basis.terms,
        rows: 0,
        readings: 0,
        outside: 0,
      };
      pools.set(key, pool);
    }
    for (let k = 0; k < energies.length; ++k) pool.energies[k] += energies[k];
    pool.rows += 1;
    pool.readings += data.length;
    pool.outside += outside;
    supportLength = Math.max(supportLength, geometry.supportLength);
    if (grid.length === 0) {
      const top = Math.log10(10 * modes.eigenvalues[0]);
      for (let t = top; t > top - 16; t -= 1 / NORM_POINTS) grid.push(t);
      largest.push(...grid.map(() => 0));
    }
    const {norm} = modalSums(modes.eigenvalues, energies, 0);
    for (let k = 0; k < grid.length; ++k) largest[k] = Math.max(largest[k], norm(10 ** grid[k]));
  }
  const all = [...pools.values()];
  if (all.length === 0)
    throw (
      failure ??
      new ModelError("grid/no-readings", "The grid holds no reading at all. Check its nodata value and band.")
    );
  const join = (pick: (pool: Pool) => Float64Array): Float64Array => {
    const joined = new Float64Array(all.reduce((sum, pool) => sum + pick(pool).length, 0));
    let at = 0;
    for (const pool of all) {
      joined.set(pick(pool), at);
      at += pick(pool).length;
    }
    return joined;
  };
  const order = sortedByEigenvalue(
    join((pool) => pool.eigenvalues),
    join((pool) => pool.energies),
    join((pool) => new Float64Array(pool.energies.length).fill(pool.rows)),
  );
  const total = (pick: (pool: Pool) => number): number => all.reduce((sum, pool) => sum + pick(pool), 0);
  const outside = total((pool) => pool.outside);
  const readings = total((pool) => pool.readings);
  const terms = total((pool) => pool.rows * pool.terms);
  const solver = {
    ...modalSums(order.eigenvalues, order.energies, outside),
    data: readings,
    unknowns: 0,
    modes: order.eigenvalues.length,
    modal: order,
    evidence: evidenceOf(order.eigenvalues, order.energies, outside, readings - terms, order.repeats),
    estimate: (): Float64Array => new Float64Array(),
    withNoise(): never {
      throw new Error("pooled rows share one noise");
    },
  };
  const largestNorm = (multiplier: number): number => {
    const place = (grid[0] - Math.log10(multiplier)) * NORM_POINTS;
    if (!(place > 0)) return largest[0];
    const left = Math.min(Math.floor(place), grid.length - 2);
    // Norms fall with the multiplier: the next smaller multiplier bounds from above.
    return largest[Math.min(left + 1, grid.length - 1)];
  };
  return settings.bound.choose({solver, supportLength, lines: total((pool) => pool.rows), largestNorm});
}

function sortedByEigenvalue(eigenvalues: Float64Array, energies: Float64Array, repeats: Float64Array) {
  const order = Int32Array.from(eigenvalues.keys()).sort((i, j) => eigenvalues[j] - eigenvalues[i] || i - j);
  return {
    eigenvalues: Float64Array.from(order, (i) => eigenvalues[i]),
    energies: Float64Array.from(order, (i) => energies[i]),
    repeats: Float64Array.from(order, (i) => repeats[i]),
  };
}

function answerRow(
  line: SurveyLine,
  conditioned: ConditionedLine,
  geometry: RowGeometry,
  answers: RowAnswers,
  choice: BoundChoice,
  grid: Survey["grid"],
): RowStudy {
  const {modes} = geometry;
  const {data, coefficients, energies, outside} = onModes(conditioned, geometry);
  const sums = modalSums(modes.eigenvalues, energies, outside);
  const weights = coefficients.map(
    (c, k) => (Math.sqrt(modes.eigenvalues[k]) * c) / (modes.eigenvalues[k] + choice.multiplier),
  );
  const pixels = grid === undefined ? line.stations.count : grid.orientation === "rows" ? grid.width : grid.height;
  const band = ({fromModes, halfWidth}: RowAnswers["source"]): RowBand => {
    const parts = fromModes.map((matrix) =>
      matVecInto(new Float64Array(line.stations.count), matrix, weights, line.stations.count, modes.count),
    );
    const at = parts.length === 1 ? parts[0] : parts[0].map((_, i) => Math.hypot(...parts.map((part) => part[i])));
    const value = new Float64Array(pixels).fill(Number.NaN);
    const half = new Float64Array(pixels).fill(Number.NaN);
    for (let i = 0; i < at.length; ++i) {
      value[line.stations.row[i] - 1] = at[i];
      half[line.stations.row[i] - 1] = halfWidth[i];
    }
    return {value, halfWidth: half};
  };
  const misfit = sums.misfit(choice.multiplier);
  const notices: Notice[] = [...line.notices, ...conditioned.notices];
  if (misfit > misfitLimit(data.length))
    notices.push(
      doubt(
        "grid/row-fits-poorly",
        `The pooled multiplier leaves a misfit of ${misfit.toPrecision(4)} on row ${line.id}, beyond what the noise explains for ${data.length} readings (${misfitLimit(data.length).toPrecision(4)}).`,
      ),
    );
  const source = band(answers.source);
  return {
    source,
    levels: answers.levels.map(({setting, answer}) => ({
      setting,
      band: answer === answers.source ? source : band(answer),
    })),
    stations: line.stations.count,
    panels: geometry.panels.count,
    modes: modes.count,
    choice,
    norm: sums.norm(choice.multiplier),
    misfit,
    misfitExpected: data.length,
    noise: conditioned.channels[0].noise,
    noiseLength: conditioned.channels[0].noiseLength,
    resolution: answers.resolution,
    degreesOfFreedom: sums.degreesOfFreedom(choice.multiplier),
    notices,
  };
}

/** A row's readings seen by the modes of its geometry: c_k, c_k², and the energy outside their span. */
function onModes(conditioned: ConditionedLine, {modes, basis, readings}: RowGeometry) {
  const data = whitenData(valuesOfLine(conditioned), readings, basis);
  const coefficients = dataCoefficients(modes, data);
  const energies = coefficients.map((c) => c * c);
  return {data, coefficients, energies, outside: energyOutside(data, energies)};
}

/** Keeps the last few things made, by key. */
function recent<T>(most: number): (key: string, make: () => T) => T {
  const kept = new Map<string, T>();
  return (key, make) => {
    const found = kept.get(key) ?? make();
    kept.delete(key);
    kept.set(key, found);
    if (kept.size > most) kept.delete(kept.keys().next().value as string);
    return found;
  };
}
