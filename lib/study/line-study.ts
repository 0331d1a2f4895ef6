/** The walk of one line from readings to answers: the table of contents of the program. */
import {answersAtBounds, LOOSEST_FACTOR} from "../continuation/at-bounds.ts";
import {continueField} from "../continuation/levels.ts";
import {depthToTrust} from "../continuation/trust.ts";
import {DEFAULT_TRUST_FRACTION} from "../continuation/trust-fraction.ts";
import {totalLength} from "../geometry/interval.ts";
import {averagesOn, resolutionOf} from "../inverse/averages.ts";
import {averagingKernels} from "../inverse/averaging-kernels.ts";
import {estimateSource} from "../inverse/estimate.ts";
import type {SourceEstimate} from "../inverse/nouns.ts";
import {plainMeanOf, stripEstimate} from "../inverse/strip-estimate.ts";
import {tradeoffCurve} from "../inverse/tradeoff.ts";
import type {Notice} from "../notice.ts";
import {lazily, withLater} from "../numeric/lazily.ts";
import type {Panels} from "../operators/panels.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import {BOUNDARY_FIELD} from "../potential/level-quantity.ts";
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
import {noisesOf, withNoises} from "./noises.ts";
import {intervalsOn} from "./operated.ts";
import type {LineStudy} from "./outcome.ts";
import {remarksOfRegional} from "./regional-remark.ts";
import {doubtsOfResidual, whitenedResiduals} from "./residual-doubts.ts";
import type {Settings} from "./settings.ts";
import {settled, whiteMisfit, widerMisfit} from "./settled.ts";
import type {SharedGeometry} from "./shared-geometry.ts";
import {doubtsOfSpacing} from "./spacing-doubt.ts";
import {acrossStrike, crossingOf, squareToStrike} from "./strike.ts";
import {doubtsOfStrips, stripsOfLine} from "./strips-of-line.ts";
import {cutNotices, panelsOfLine, supportOfLine} from "./support-of-line.ts";
import {namingTies, tieRows, tiesHeard, tiesOfLine} from "./ties-of-line.ts";
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
  return {first, support, panels, ties, rows, conditioned, readings, strips, asked, choice, feasible, estimate};
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
  const {first, support, panels, ties, rows, conditioned, readings, strips, asked, choice, feasible, estimate} = source;
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
  const averages = averagesOn(intervals, panels, resolution, support);
  const levels = wanted.levels.map((level) => continueField(level, question));
  const estimates = strips.map((strip) => stripEstimate(intervals, panels, estimate.density, strip, support));
  // Not all who study a line read these, and they take as long as the rest.
  const trust = lazily(() => depthToTrust(question, wanted.trustFraction ?? DEFAULT_TRUST_FRACTION));
  const atBounds = lazily(() =>
    choice.basis === "assumed-bound" ? answersAtBounds(question, strips, wanted.levels, choice.bound) : undefined,
  );
  if (intervals.tally !== undefined) {
    // It counts what was asked for, and a notice tells of it.
    trust();
    atBounds();
  }
  const study = {
    line,
    observable: line.channels[0].observable,
    conditioned,
    panels,
    choice,
    ...(comparison === undefined ? {} : {comparison}),
    estimate,
    resolution,
    gain,
    noises,
    averages,
    levels,
    strips: estimates,
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
  return withLater(study, {
    curve: () => tradeoffCurve(asked.solver),
    kernels: () =>
      averagingKernels(intervals, continuum, panels, resolution, choice.multiplier, line.stations.chainage),
    trust,
    atBounds,
  });
}
