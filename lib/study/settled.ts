/** The noise of a line settled before its source is sought, and what other models of it would leave unexplained. */
import type {Support} from "../geometry/interval.ts";
import {totalLength} from "../geometry/interval.ts";
import {apparentNoise, chanceRatio} from "../inverse/apparent-noise.ts";
import {multiplierForNorm} from "../inverse/multiplier-for.ts";
import {doubt} from "../notice.ts";
import type {Panels} from "../operators/panels.ts";
import {readingsWithPoints} from "../operators/readings-of-line.ts";
import type {Solver} from "../solvers/solver.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {type Operated, operated} from "./operated.ts";
import type {Settings} from "./settings.ts";
import type {SharedGeometry} from "./shared-geometry.ts";
import {panelsOfLine} from "./support-of-line.ts";
import type {TieRow} from "./ties-of-line.ts";

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
export function settled(
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
export function widerMisfit(
  conditioned: ConditionedLine,
  support: Support,
  settings: Settings,
  bound: number | undefined,
) {
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
export function whiteMisfit(
  conditioned: ConditionedLine,
  panels: Panels,
  degree: number,
  bound: number | undefined,
): number {
  const channels = conditioned.channels.map((channel) => ({...channel, noiseLength: 0}));
  const {solver} = operated({...conditioned, channels}, panels, degree);
  return solver.misfit(bound === undefined ? 0 : multiplierForNorm(solver, bound));
}
