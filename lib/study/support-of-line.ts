/** The support and the panels of one line. */
import {InputError} from "../errors.ts";
import {type Support, supportOf} from "../geometry/interval.ts";
import {type Panels, panelsOn} from "../operators/panels.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {ModelSettings} from "./settings.ts";

/** Apron in median heights: at five heights a source adds at most 1/(5π), 6 %, of its strength to the end station. */
const APRON = 5;

export interface Span {
  readonly from: number;
  readonly to: number;
}

export function spanOf(values: Float64Array): Span {
  let from = Infinity;
  let to = -Infinity;
  for (const value of values) {
    from = Math.min(from, value);
    to = Math.max(to, value);
  }
  return {from, to};
}

const medianOf = (values: Float64Array): number => Float64Array.from(values).sort()[values.length >> 1];

/**
 * The intervals that were asked for this line's group, or the line and an apron.
 * @throws {InputError} `support/disjoint`, and what `supportOf` throws
 */
export function supportOfLine(conditioned: ConditionedLine, settings: ModelSettings): Support {
  const {line} = conditioned;
  const span = spanOf(line.stations.chainage);
  const asked = settings.support.filter(({group}) => group === undefined || group === line.group);
  if (asked.length === 0) {
    const apron = APRON * medianOf(conditioned.height);
    return [{from: span.from - apron, to: span.to + apron}];
  }
  const support = supportOf(asked);
  if (!support.some(({from, to}) => to > span.from && from < span.to))
    throw new InputError(
      "support/disjoint",
      `The support ${support.map(({from, to}) => `${from}:${to}`).join(", ")} does not meet line ${line.id}, which runs from chainage ${span.from.toFixed(1)} to ${span.to.toFixed(1)} m. Give a support under the line, in the same chainage (groundward inspect prints it).`,
      {place: {file: line.file}},
    );
  return support;
}

/** Default panel: a quarter of the least height; see `panelsOn`. */
export const panelsOfLine = (conditioned: ConditionedLine, support: Support, settings: ModelSettings): Panels =>
  panelsOn(support, settings.panel ?? 0.25 * spanOf(conditioned.height).from);
