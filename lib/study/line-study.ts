/** The walk of one line from readings to answers: the table of contents of the program. */

import {continueField} from "../continuation/levels.ts";
import {InputError, ModelError} from "../errors.ts";
import type {Support} from "../geometry/interval.ts";
import {clip, type Interval, totalLength} from "../geometry/interval.ts";
import {apparentNoise, chanceRatio} from "../inverse/apparent-noise.ts";
import {averagesOn, resolutionOf, stretchAt} from "../inverse/averages.ts";
import {estimateSource} from "../inverse/estimate.ts";
import {intervalSolver} from "../inverse/intervals.ts";
import {multiplierForNorm} from "../inverse/multiplier-for.ts";
import {partsOf, type SourceEstimate, type Strip} from "../inverse/nouns.ts";
import {stripEstimate} from "../inverse/strip-estimate.ts";
import {tradeoffCurve} from "../inverse/tradeoff.ts";
import {notWhite, whiteness} from "../inverse/whiteness.ts";
import {doubt, type Notice} from "../notice.ts";
import {continuumOf} from "../operators/continuum.ts";
import {type ForwardOperator, forwardOperator} from "../operators/forward.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {type PointReading, readingsOfLine, readingsWithPoints, valuesOfLine} from "../operators/readings-of-line.ts";
import {type RegionalBasis, regionalBasis} from "../operators/regional.ts";
import {whiten, whitenData} from "../operators/whitened.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import {constrain} from "../solvers/constraint.ts";
import type {Solver} from "../solvers/solver.ts";
import {spectralSolver} from "../solvers/spectral.ts";
import {condition} from "../survey/condition.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import {effectiveDirectionOf} from "./direction-of-line.ts";
import {feasibility} from "./feasibility.ts";
import {gradientSignNotices} from "./gradient-sign.ts";
import type {LineStudy} from "./outcome.ts";
import type {Settings} from "./settings.ts";
import {stripsOfLine} from "./strips-of-line.ts";
import {cutNotices, panelsOfLine, supportOfLine} from "./support-of-line.ts";
import {type LineTie, tieRow, tiesOfLine} from "./ties-of-line.ts";
import {type LineZones, zonesFor} from "./zones.ts";

/**
 * @throws {ReportableError} when the line cannot be answered: its heights, noise, support or bound are at fault, or no
 *   source explains it
 */
export function studyLine(line: SurveyLine, settings: Settings, zones = zonesFor(settings)(line)): LineStudy {
  const {model, wanted} = settings;
  const direction = effectiveDirectionOf(line, settings);
  const first = condition(line, model.boundary, direction);
  const support = supportOfLine(first, model, zones.support);
  const panels = panelsOfLine(first, support, model);
  const ties = tiesOfLine(first, model.ties ?? []);
  const stretches = stretchesOfTies(line, settings, zones, ties, panels);
  const {conditioned, readings, values, regional, operator, solver} = settled(
    first,
    panels,
    model.regional,
    ties,
    stretches,
  );
  const strips = stripsOfLine(line, support, wanted.strips, zones.strips);
  const curve = tradeoffCurve(solver);
  const choice = namingTies(ties, () =>
    settings.bound.choose({solver, supportLength: totalLength(support), lines: 1, largestNorm: solver.norm}),
  );
  const signs = gradientSignNotices(conditioned, panels, model.regional);
  const feasible = blaming(signs, () =>
    feasibility(solver, choice, () =>
      widerMisfit(conditioned, support, settings, choice.basis === "given-bound" ? choice.bound : undefined),
    ),
  );
  const estimate = estimateSource(solver, choice, operator, readings, regional, values);

  const known = ties.filter(({above}) => above > 0);
  const continuum = continuumOf(
    readingsWithPoints(
      conditioned,
      known.map((tie) => pointOf(tie, conditioned)),
    ),
    support,
    boundaryOfPanels(panels),
  );
  const sorted = regionalBasis(continuum, model.regional, conditioned.channels.length);
  const heard = Float64Array.of(...valuesOfLine(conditioned), ...known.map(({tie}) => tie.value));
  const data = whitenData(
    Float64Array.from(continuum.place, (i) => heard[i]),
    continuum,
    sorted,
  );
  const intervals = intervalSolver(continuum, sorted, data, choice.bound, wanted.confidence);
  const resolution = resolutionOf(intervals, panels, choice.multiplier, line.stations.chainage);
  const question = {
    conditioned,
    panels,
    density: estimate.density,
    continuum,
    solver: intervals,
    resolution,
    quantity: wanted.levelQuantity ?? BOUNDARY_FIELD,
  };
  return {
    line,
    observable: line.channels[0].observable,
    conditioned,
    panels,
    curve,
    choice,
    estimate,
    resolution,
    averages: averagesOn(intervals, panels, resolution, support),
    levels: wanted.levels.map((level) => continueField(level, question)),
    strips: strips.map((strip) => stripEstimate(intervals, panels, estimate.density, strip, support)),
    confidence: wanted.confidence,
    notices: [
      ...line.notices,
      ...zones.notices,
      ...cutNotices(first, zones.support),
      ...conditioned.notices,
      ...choice.notices,
      ...signs,
      ...feasible,
      ...doubtsOfResidual(conditioned, estimate),
      ...doubtsOfStrips(strips, support),
    ],
  };
}

/**
 * The averages that ties on the boundary itself are of: over the resolution length of the line without them.
 */
function stretchesOfTies(
  line: SurveyLine,
  settings: Settings,
  zones: LineZones,
  ties: readonly LineTie[],
  panels: Panels,
): ReadonlyMap<LineTie, Interval> {
  const onBoundary = ties.filter(({above}) => above === 0);
  if (onBoundary.length === 0) return new Map();
  const without = {
    ...settings,
    model: {...settings.model, ties: ties.filter(({above}) => above > 0).map(({tie}) => tie)},
    wanted: {...settings.wanted, levels: [], strips: []},
  };
  const {resolution} = studyLine(line, without, {...zones, strips: []});
  return new Map(
    onBoundary.map((tie) => {
      const stretch = stretchAt(panels, resolution, tie.x);
      if (stretch === undefined)
        throw new InputError(
          "tie/off-support",
          `The tie on the boundary at chainage ${tie.x} lies off the support, where the source is zero by assumption. Widen --support or leave it out.`,
          {place: tie.tie.place},
        );
      return [tie, stretch] as const;
    }),
  );
}

/** For the intervals a tie is one more reading; one to be met exactly is given a thousandth of the noise, which only lengthens them. */
function pointOf({tie, x, z, above, response}: LineTie, {channels}: ConditionedLine): PointReading {
  const [{noise, response: first}] = channels;
  // A gradient in units of a field, or the other way: a height turns one into the other.
  const turned = noise * above ** (first.order - response.order);
  return {x, z, response, noise: tie.tolerance > 0 ? tie.tolerance : 1e-3 * turned};
}

/** Where nothing fits, a gradient that runs the wrong way is the first thing to look at. */
function blaming<T>(signs: readonly Notice[], judge: () => T): T {
  try {
    return judge();
  } catch (error) {
    if (!(error instanceof ModelError) || signs.length === 0) throw error;
    throw new ModelError(error.code, `${signs.map(({message}) => message).join(" ")} As it stands: ${error.message}`, {
      place: error.place,
      cause: error,
    });
  }
}

/** Says which ties cannot be met within the bound. */
function namingTies<T>(ties: readonly LineTie[], choose: () => T): T {
  try {
    return choose();
  } catch (error) {
    if (!(error instanceof ModelError) || error.code !== "bound/below-ties") throw error;
    const rows = ties.filter(({tie}) => tie.tolerance === 0).map(({tie}) => tie.place.row);
    throw new ModelError(
      "tie/infeasible",
      `${error.message} The ties stand in rows ${rows.join(", ")} of the tie file.`,
      {
        place: ties[0].tie.place,
        cause: error,
      },
    );
  }
}

/** A line whose noise is settled, with its operator and solver. */
interface Settled {
  readonly conditioned: ConditionedLine;
  /** Of the channels, and of ties with a tolerance. */
  readonly readings: Readings;
  readonly values: Float64Array;
  readonly regional: RegionalBasis;
  readonly operator: ForwardOperator;
  readonly solver: Solver;
}

/**
 * A noise taken from the record is raised where the readings show, by what no source explains, that their fourth
 * differences miss part of it. With several channels from the record all are raised alike.
 */
function settled(
  first: ConditionedLine,
  panels: Panels,
  degree: number,
  ties: readonly LineTie[] = [],
  stretches: ReadonlyMap<LineTie, Interval> = new Map(),
): Settled {
  const soft = ties.filter(({tie}) => tie.tolerance > 0);
  const exact = ties.filter(({tie}) => tie.tolerance === 0);
  const rowOf = (tie: LineTie): Float64Array => tieRow(panels, tie, stretches.get(tie));
  const pointsOf = (conditioned: ConditionedLine): Readings =>
    readingsWithPoints(
      conditioned,
      soft.map(({tie, x, z, response}) => ({x, z, response, noise: tie.tolerance})),
    );
  const readings = pointsOf(first);
  const values = Float64Array.of(...valuesOfLine(first), ...soft.map(({tie}) => tie.value));
  const measured = forwardOperator(readingsOfLine(first), panels);
  const matrix = new Float64Array(readings.count * panels.count);
  matrix.set(measured.matrix);
  soft.forEach((tie, k) => {
    matrix.set(rowOf(tie), (measured.readings + k) * panels.count);
  });
  const operator: ForwardOperator = {readings: readings.count, panels, matrix};
  const regional = regionalBasis(readings, degree, first.channels.length);
  const free = whiten(operator, readings, values, regional);
  const tied =
    exact.length === 0
      ? undefined
      : constrain(
          free,
          exact.map(rowOf),
          exact.map(({tie}) => tie.value),
        );
  const solver = spectralSolver(tied?.system ?? free, regional.terms, tied);
  const apparent = first.channels.every(({noiseFrom}) => noiseFrom === "record") ? apparentNoise(solver) : undefined;
  if (apparent === undefined || !(apparent.ratio > chanceRatio(solver.data)))
    return {conditioned: first, readings, values, regional, operator, solver};
  const {ratio} = apparent;
  const notice = doubt(
    "noise/raised",
    `The fourth differences of the record give a noise that no source explains the rest by: it was raised ${ratio.toPrecision(3)} times. The noise is stronger in longer waves than white noise, or the ground is not two-dimensional. Give --noise if you know better.`,
  );
  const conditioned = {
    ...first,
    channels: first.channels.map((channel) => ({...channel, noise: channel.noise * ratio})),
    notices: [...first.notices, notice],
  };
  return {
    conditioned,
    readings: pointsOf(conditioned),
    values,
    regional,
    operator,
    solver: solver.withNoise(ratio),
  };
}

/** Misfit within the bound on a support five median heights wider either side, for the message of `feasibility`. */
function widerMisfit(conditioned: ConditionedLine, support: Support, settings: Settings, bound: number | undefined) {
  const heights = Float64Array.from(conditioned.height).sort();
  const metres = 5 * heights[heights.length >> 1];
  const wide = support.map(({from, to}) => ({from: from - metres, to: to + metres}));
  const joined = wide.reduce<{from: number; to: number}[]>((parts, next) => {
    const last = parts.at(-1);
    if (last !== undefined && next.from <= last.to) parts[parts.length - 1] = {from: last.from, to: next.to};
    else parts.push(next);
    return parts;
  }, []);
  const {solver} = settled(conditioned, panelsOfLine(conditioned, joined, settings.model), settings.model.regional);
  const multiplier = bound === undefined ? 0 : multiplierForNorm(solver, bound);
  return {metres, share: totalLength(joined) / totalLength(support) - 1, misfit: solver.misfit(multiplier)};
}

function doubtsOfResidual({line, channels}: ConditionedLine, estimate: SourceEstimate): Notice[] {
  const order = Int32Array.from(line.stations.chainage.keys()).sort(
    (i, j) => line.stations.chainage[i] - line.stations.chainage[j] || i - j,
  );
  return estimate.channels.slice(0, channels.length).flatMap(({residual}, k) => {
    const {excess, lagOne} = whiteness(Float64Array.from(order, (i) => residual[i]));
    if (!(excess > notWhite(residual.length, estimate.misfit / channels.length))) return [];
    const which = channels.length > 1 ? ` of ${channels[k].channel.role}` : "";
    return [
      doubt(
        "residual/not-white",
        `The residuals${which} are not white noise (neighbours correlate by ${lagOne.toFixed(2)}): either the readings' noise is correlated, or part of the anomaly is taken for noise. Intervals that count on white noise are too narrow by then. Look at the residual in the report; give the noise as it is at the wavelengths of the anomaly, or a wider --support.`,
      ),
    ];
  });
}

function doubtsOfStrips(strips: readonly Strip[], support: Support): Notice[] {
  return strips
    .filter((strip) => partsOf(strip).every((part) => clip(part, support).length === 0))
    .map((strip) =>
      doubt(
        "strip/off-support",
        `Strip ${strip.name} (${strip.from}:${strip.to}) lies off the support, where the source is zero by assumption. Widen --support if the strip can hold sources.`,
      ),
    );
}
