/** The walk of one line from readings to answers: the table of contents of the program. */
import {answersAtBounds, LOOSEST_FACTOR} from "../continuation/at-bounds.ts";
import {continueField} from "../continuation/levels.ts";
import {depthToTrust} from "../continuation/trust.ts";
import {DEFAULT_TRUST_FRACTION} from "../continuation/trust-fraction.ts";
import type {Support} from "../geometry/interval.ts";
import {clip, totalLength} from "../geometry/interval.ts";
import {apparentNoise, chanceRatio} from "../inverse/apparent-noise.ts";
import {averagesOn, resolutionOf} from "../inverse/averages.ts";
import {averagingKernels} from "../inverse/averaging-kernels.ts";
import {estimateSource} from "../inverse/estimate.ts";
import {multiplierForNorm} from "../inverse/multiplier-for.ts";
import {partsOf, type SourceEstimate, type Strip} from "../inverse/nouns.ts";
import {plainMeanOf, stripEstimate} from "../inverse/strip-estimate.ts";
import {tradeoffCurve} from "../inverse/tradeoff.ts";
import {lengthFromLagOne, notWhite, whiteness} from "../inverse/whiteness.ts";
import {doubt, type Notice} from "../notice.ts";
import {whitened} from "../operators/correlated-noise.ts";
import type {Panels} from "../operators/panels.ts";
import type {Readings} from "../operators/readings.ts";
import {readingsWithPoints} from "../operators/readings-of-line.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
import type {Solver} from "../solvers/solver.ts";
import {byChainage} from "../survey/by-chainage.ts";
import {condition} from "../survey/condition.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import {spacingOf} from "../survey/record-noise.ts";
import {remarksOnBand} from "./band-remarks.ts";
import {disagreement, gainNotices, gainOf, unlessApart} from "./channels-together.ts";
import {comparisonOf} from "./comparison.ts";
import {effectiveDirectionOf} from "./direction-of-line.ts";
import {feasibility} from "./feasibility.ts";
import {gradientSignNotices} from "./gradient-sign.ts";
import {remarksOfLevels} from "./levels-below-trust.ts";
import {noiseCause} from "./noise-cause.ts";
import {type ChannelNoises, lengthText, noisesOf, withNoises} from "./noises.ts";
import {intervalsOn, type Operated, operated} from "./operated.ts";
import type {LineStudy} from "./outcome.ts";
import {remarksOfRegional} from "./regional-remark.ts";
import type {Settings} from "./settings.ts";
import type {SharedGeometry} from "./shared-geometry.ts";
import {doubtsOfSpacing} from "./spacing-doubt.ts";
import {acrossStrike, crossingOf, squareToStrike} from "./strike.ts";
import {stripsOfLine} from "./strips-of-line.ts";
import {cutNotices, panelsOfLine, supportOfLine} from "./support-of-line.ts";
import {namingTies, type TieRow, tieRows, tiesHeard, tiesOfLine} from "./ties-of-line.ts";
import {type LineZones, zonesFor} from "./zones.ts";

/**
 * @param shared what lines of one geometry share, as `sharedGeometry` makes it; speed alone depends on it
 * @throws {ReportableError} when the line cannot be answered: its heights, noise, support or bound are at fault, or no
 *   source explains it
 */
export function studyLine(
  line: SurveyLine,
  settings: Settings,
  zones = zonesFor(settings)(line),
  shared?: SharedGeometry,
): LineStudy {
  const crossing = crossingOf(line, settings);
  const direction = effectiveDirectionOf(line, settings, crossing?.azimuth);
  if (crossing === undefined) return studySquare(line, settings, zones, direction, shared);
  return acrossStrike(line, settings, zones, crossing, (...scaled) => studySquare(...scaled, direction, shared));
}

/** The source of a line without any answer, on chainage times `scale`: square to the strike, where one was given. */
export interface LineEstimate {
  readonly conditioned: ConditionedLine;
  readonly panels: Panels;
  readonly estimate: SourceEstimate;
  readonly notices: readonly Notice[];
}

/**
 * The estimate of {@link studyLine} alone: no averages, levels, strips and their intervals, which take most of the time.
 * @throws {ReportableError} as `studyLine`
 */
export function estimateLine(line: SurveyLine, settings: Settings, zones = zonesFor(settings)(line)): LineEstimate {
  const crossing = crossingOf(line, settings);
  const direction = effectiveDirectionOf(line, settings, crossing?.azimuth);
  const square =
    crossing === undefined
      ? {scaledLine: line, scaledSettings: settings, scaledZones: zones}
      : squareToStrike(line, settings, zones, crossing.scale);
  const {conditioned, panels, estimate, choice, feasible} = sourceSquare(
    square.scaledLine,
    square.scaledSettings,
    square.scaledZones,
    direction,
  );
  const notices = [...line.notices, ...zones.notices, ...conditioned.notices, ...choice.notices, ...feasible];
  return {conditioned, panels, estimate, notices};
}

/** From readings to the one source, where the sources run square to the line. */
function sourceSquare(
  line: SurveyLine,
  settings: Settings,
  zones: LineZones,
  direction: EffectiveDirection | undefined,
  shared?: SharedGeometry,
) {
  const {model, wanted} = settings;
  const first = condition(line, model.boundary, direction);
  const support = supportOfLine(first, model, zones.support);
  const panels = panelsOfLine(first, support, model);
  const ties = tiesOfLine(first, model.ties ?? []);
  const rows = tieRows(ties, panels, () => {
    const above = ties.filter((tie) => tie.above > 0).map(({tie}) => tie);
    const without = {...settings, model: {...model, ties: above}, wanted: {...wanted, levels: [], strips: []}};
    return studySquare(line, without, {...zones, strips: []}, direction).resolution;
  });
  const {conditioned, readings, values, regional, operator, solver, asGiven} = settled(
    first,
    panels,
    model.regional,
    rows,
    settings.bound.modes,
    shared,
  );
  const signs = gradientSignNotices(conditioned, panels, model.regional);
  const apart = signs[0] ?? disagreement(first, panels, model.regional, asGiven);
  const strips = stripsOfLine(line, support, wanted.strips, zones.strips);
  const curve = tradeoffCurve(solver);
  const asked = {
    solver,
    supportLength: totalLength(support),
    lines: 1,
    places: readings.x,
    largestNorm: solver.norm,
  };
  const choice = namingTies(
    ties,
    () => solver.norm(Infinity),
    () => settings.bound.choose(asked),
  );
  const feasible = unlessApart(apart, () =>
    feasibility(
      solver,
      choice,
      () => widerMisfit(conditioned, support, settings, choice.basis === "given-bound" ? choice.bound : undefined),
      (misfit, bound) =>
        noiseCause(
          conditioned,
          misfit,
          () => whiteMisfit(conditioned, panels, model.regional, bound),
          bound === undefined ? "a source on this support" : "a source within the bound",
        ),
    ),
  );
  const estimate = estimateSource(solver, choice, operator, readings, regional, values);
  return {first, support, panels, ties, rows, conditioned, readings, strips, curve, asked, choice, feasible, estimate};
}

/** The sources run square to the line. */
function studySquare(
  line: SurveyLine,
  settings: Settings,
  zones: LineZones,
  direction: EffectiveDirection | undefined,
  shared?: SharedGeometry,
): LineStudy {
  const {model, wanted} = settings;
  const source = sourceSquare(line, settings, zones, direction, shared);
  const {first, support, panels, ties, rows, conditioned, readings, strips, curve, asked, choice, feasible, estimate} =
    source;
  const {continuum, intervals} = intervalsOn(
    conditioned,
    {
      support,
      panels,
      degree: model.regional,
      bound: choice.bound,
      confidence: wanted.confidence,
      loosest: choice.basis === "assumed-bound" ? LOOSEST_FACTOR : 1,
      kind: wanted.intervals,
      shared,
    },
    tiesHeard(ties, rows, conditioned),
  );
  const remains = whitenedResiduals(conditioned, estimate, readings);
  const noises = noisesOf(conditioned, remains, estimate);
  const resolution = resolutionOf(intervals, panels, choice.multiplier, line.stations.chainage);
  const {compared} = settings.bound;
  const comparison =
    compared === undefined
      ? undefined
      : comparisonOf(compared, asked, {
          resolution: (multiplier) => resolutionOf(intervals, panels, multiplier, line.stations.chainage).length,
          stripMeans: (density) => strips.map((strip) => ({strip, plainMean: plainMeanOf(panels, density, strip)})),
        });
  const gain = gainOf(conditioned, settings, panels, support, choice);
  const question = {
    conditioned,
    panels,
    density: estimate.density,
    continuum,
    solver: intervals,
    resolution,
    quantity: wanted.levelQuantity ?? BOUNDARY_FIELD,
  };
  const trust = depthToTrust(question, wanted.trustFraction ?? DEFAULT_TRUST_FRACTION);
  const averages = averagesOn(intervals, panels, resolution, support);
  const levels = wanted.levels.map((level) => continueField(level, question));
  const estimates = strips.map((strip) => stripEstimate(intervals, panels, estimate.density, strip, support));
  return {
    line,
    observable: line.channels[0].observable,
    conditioned,
    panels,
    curve,
    choice,
    ...(comparison === undefined ? {} : {comparison}),
    estimate,
    resolution,
    kernels: averagingKernels(intervals, continuum, panels, resolution, choice.multiplier, line.stations.chainage),
    gain,
    noises,
    averages,
    levels,
    strips: estimates,
    trust,
    atBounds:
      choice.basis === "assumed-bound" ? answersAtBounds(question, strips, wanted.levels, choice.bound) : undefined,
    confidence: wanted.confidence,
    intervals: wanted.intervals,
    notices: [
      ...line.notices,
      ...zones.notices,
      ...cutNotices(first, zones.support),
      ...withNoises([...conditioned.notices, ...choice.notices], noises, conditioned),
      ...feasible,
      ...doubtsOfResidual(conditioned, estimate, remains, noises),
      ...doubtsOfStrips(strips, support),
      ...gainNotices(gain, resolution),
      ...remarksOfLevels(wanted.levels, conditioned, trust),
      ...(wanted.intervals === "simultaneous"
        ? []
        : remarksOfRegional(question, model.regional, wanted.confidence, levels)),
      ...doubtsOfSpacing(resolution, spacingOf(line.stations.chainage)),
      ...remarksOnBand(intervals.tally?.()),
    ],
  };
}

/** A line whose noise is settled, with its operator and solver. */
interface Settled extends Operated {
  readonly conditioned: ConditionedLine;
  /** The solver before the noise was raised, if it was. */
  readonly asGiven: Solver;
}

/**
 * A noise taken from the record is raised where the readings show, by what no source explains, that their fourth
 * differences miss part of it. With several channels from the record all are raised alike.
 */
function settled(
  first: ConditionedLine,
  panels: Panels,
  degree: number,
  ties: readonly TieRow[] = [],
  modes = false,
  shared?: SharedGeometry,
): Settled {
  const asGiven = operated(first, panels, degree, ties, modes, shared);
  const {solver} = asGiven;
  const apparent = first.channels.every(({noiseFrom}) => noiseFrom === "record") ? apparentNoise(solver) : undefined;
  if (apparent === undefined || !(apparent.ratio > chanceRatio(solver.data)))
    return {...asGiven, conditioned: first, asGiven: solver};
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
  const readings = readingsWithPoints(
    conditioned,
    ties.filter(({exact}) => !exact).map(({point}) => point),
  );
  return {...asGiven, conditioned, readings, solver: solver.withNoise(ratio), asGiven: solver};
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

/** Misfit within the bound were the noise not correlated, for the message of `feasibility`. */
function whiteMisfit(conditioned: ConditionedLine, panels: Panels, degree: number, bound: number | undefined): number {
  const channels = conditioned.channels.map((channel) => ({...channel, noiseLength: 0}));
  const {solver} = operated({...conditioned, channels}, panels, degree);
  return solver.misfit(bound === undefined ? 0 : multiplierForNorm(solver, bound));
}

/** Of each channel, over the standard deviation and in the order of chainage. */
function whitenedResiduals(
  {line, channels}: ConditionedLine,
  estimate: SourceEstimate,
  readings: Readings,
): readonly Float64Array[] {
  const {count, chainage} = line.stations;
  const all = new Float64Array(readings.count);
  let at = 0;
  for (const {residual} of estimate.channels) {
    all.set(residual, at);
    at += residual.length;
  }
  const white = whitened(all, readings);
  const order = byChainage(chainage);
  return channels.map((_, k) => Float64Array.from(order, (i) => white[k * count + i]!));
}

function doubtsOfResidual(
  {line, channels}: ConditionedLine,
  estimate: SourceEstimate,
  remains: readonly Float64Array[],
  noises: readonly ChannelNoises[],
): Notice[] {
  return remains.flatMap((residual, k) => {
    const {excess, lagOne} = whiteness(residual);
    if (!(excess > notWhite(residual.length, estimate.misfit / channels.length))) return [];
    // A fit takes the long waves of the noise with it: neighbours are left anticorrelated, by its share of the readings.
    const taken = (2 * estimate.degreesOfFreedom) / estimate.readings + 3 / Math.sqrt(residual.length);
    if (lagOne < 0 && -lagOne <= taken) return [];
    const {channel, noiseLength} = channels[k]!;
    const which = channels.length > 1 ? ` of ${channel.role}` : "";
    const known = noises[k]!.length;
    const length = known ?? lengthFromLagOne(lagOne, spacingOf(line.stations.chainage));
    const basis =
      known === undefined ? "from neighbours alone; too short where the fit took some of the noise" : "from the record";
    const found =
      noiseLength > 0
        ? `The residuals${which} are not those of noise correlated over ${Number(noiseLength.toPrecision(4))} m: whitened for it, neighbours still correlate by ${lagOne.toFixed(2)}. Either that length is wrong`
        : `The residuals${which} are not white noise (neighbours correlate by ${lagOne.toFixed(2)}): either the readings' noise is correlated`;
    const cure =
      noiseLength > 0 || length === undefined
        ? "give the noise as it is at the wavelengths of the anomaly, or a wider --support"
        : `if it is noise, give --noise-length ${lengthText(length)} with it (an estimate ${basis}), else a wider --support`;
    return [
      doubt(
        "residual/not-white",
        `${found}, or part of the anomaly is taken for noise. Intervals that count on ${noiseLength > 0 ? "it" : "white noise"} are mostly too narrow by then. Look at the residual in the report; ${cure}.`,
      ),
    ];
  });
}

function doubtsOfStrips(strips: readonly Strip[], support: Support): Notice[] {
  return strips.flatMap((strip) => {
    const whole = totalLength(partsOf(strip));
    const inside = partsOf(strip).reduce((sum, part) => sum + totalLength(clip(part, support)), 0);
    if (inside >= whole * (1 - 1e-9)) return [];
    const lies =
      inside > 0
        ? `lies off the support by ${Number((whole - inside).toPrecision(3))} of its ${Number(whole.toPrecision(4))} m`
        : "lies off the support";
    return [
      doubt(
        "strip/off-support",
        `Strip ${strip.name} (${strip.from}:${strip.to}) ${lies}, where the source is zero by assumption. Widen --support if the strip can hold sources.`,
      ),
    ];
  });
}
