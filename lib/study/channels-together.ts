/** Several channels of one line: what the further ones add to the first, and whether all tell of one source. */
import {ModelError} from "../errors.ts";
import {type Support, totalLength} from "../geometry/interval.ts";
import {apparentNoise, chanceRatio} from "../inverse/apparent-noise.ts";
import {resolutionOf} from "../inverse/averages.ts";
import type {BoundChoice, ChannelGain, Resolution} from "../inverse/nouns.ts";
import type {BoundRule, RuleQuestion} from "../inverse/rules/rule.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import type {Panels} from "../operators/panels.ts";
import type {Solver} from "../solvers/solver.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {intervalsOn, operated, withChannel} from "./operated.ts";
import type {Settings} from "./settings.ts";

/**
 * The resolution of the first channel alone, at a multiplier of its own by the same rule and with the bound of all.
 * @returns undefined where there is one channel, or the first alone gives the rule no hold
 */
export function gainOf(
  conditioned: ConditionedLine,
  {model, bound, wanted}: Settings,
  panels: Panels,
  support: Support,
  choice: BoundChoice,
): ChannelGain | undefined {
  const [, ...further] = conditioned.channels;
  if (further.length === 0) return undefined;
  const first = withChannel(conditioned, 0);
  const {solver, readings} = operated(first, panels, model.regional, [], bound.modes);
  const own = multiplierBy(bound, {
    solver,
    supportLength: totalLength(support),
    lines: 1,
    places: readings.x,
    largestNorm: solver.norm,
  });
  if (own === undefined) return undefined;
  const {intervals} = intervalsOn(first, {
    support,
    panels,
    degree: model.regional,
    bound: choice.bound,
    confidence: wanted.confidence,
    kind: wanted.intervals,
  });
  const {length} = resolutionOf(intervals, panels, own, conditioned.line.stations.chainage);
  return {further: further.map(({channel}) => channel.role), without: length};
}

function multiplierBy(rule: BoundRule, question: RuleQuestion): number | undefined {
  try {
    return rule.choose(question).multiplier;
  } catch (error) {
    if (error instanceof ModelError) return undefined;
    throw error;
  }
}

/** @param resolution of all channels together */
export function gainNotices(gain: ChannelGain | undefined, resolution: Resolution): Notice[] {
  if (gain === undefined) return [];
  const {further, without} = gain;
  return [
    remark(
      "channels/gain",
      `Resolution ${metres(resolution.length)} with ${further.join(" and ")}, ${metres(without)} without: each at the multiplier that the rule takes for its readings.`,
    ),
  ];
}

const metres = (length: number): string => (Number.isFinite(length) ? `${length.toPrecision(3)} m` : "none");

/** Whether the readings are noisier than they should be, by what no source explains, and by more than chance. */
const lessExplained = (solver: Solver): boolean => {
  const apparent = apparentNoise(solver);
  return apparent !== undefined && apparent.ratio > chanceRatio(solver.data);
};

/**
 * A doubt where each channel alone is explained by some source on the boundary, and all together by none. Of a
 * two-dimensional source every channel is Re(α F) or Re(α F′) of one analytic F, so that each foretells the others:
 * the vertical and the along component are a conjugate pair.
 * @param all of the same channels together, whitened by the same noise
 */
export function disagreement(
  conditioned: ConditionedLine,
  panels: Panels,
  degree: number,
  all: Solver,
): Notice | undefined {
  const {channels} = conditioned;
  if (channels.length < 2 || !lessExplained(all)) return undefined;
  if (channels.some((_, k) => lessExplained(operated(withChannel(conditioned, k), panels, degree).solver)))
    return undefined;
  const names = channels.map(({channel}) => channel.observable.name);
  const along = names.filter((name) => name.includes("-along"));
  const pair = along.length > 0 && along.length < names.length;
  const signs = [
    ...(along.length > 0 ? ["an along component counts towards increasing chainage"] : []),
    ...(names.some((name) => name.endsWith("-gradient"))
      ? ["a gradient is the lower sensor minus the upper over their distance"]
      : []),
  ];
  return doubt(
    pair ? "channels/not-conjugate" : "channels/disagree",
    `${channels.map(({channel}) => `${channel.role} (${channel.observable.name})`).join(" and ")} are each explained by a source below the line, but not by the same one: ${pair ? "the components are not those of one two-dimensional source" : "the channels are not those of one two-dimensional source"}. Either the ground changes across the line, or a channel has the wrong sign, axis, unit or height${signs.length > 0 ? ` (${signs.join("; ")})` : ""}. Check these; else use the channels one at a time, and do not trust the intervals.`,
  );
}

/**
 * @param apart that the channels disagree, if they do
 * @throws {ModelError} of `feasible`; where the channels disagree, under the code of that doubt
 */
export function unlessApart(apart: Notice | undefined, feasible: () => Notice[]): Notice[] {
  try {
    return apart === undefined ? feasible() : [apart, ...feasible()];
  } catch (error) {
    if (apart === undefined || !(error instanceof ModelError)) throw error;
    throw new ModelError(apart.code, `${apart.message} ${error.message}`, {cause: error});
  }
}
