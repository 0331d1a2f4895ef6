/** The support and the panels of one line. */
import {InputError} from "../errors.ts";
import {boundaryAt} from "../geometry/boundary-line.ts";
import {clip, type Support, supportOf} from "../geometry/interval.ts";
import {unionOf} from "../geometry/track.ts";
import {type Notice, remark} from "../notice.ts";
import {type Panels, panelsOn} from "../operators/panels.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {ChainageZone, ModelSettings} from "./settings.ts";
import {offSupport} from "./skipped.ts";

/** Apron in median heights: at five heights a source adds at most 1/(5π), 6 %, of its strength to the end station. */
const APRON = 5;

/**
 * Polygons go on where lines end: beyond the ends they count as far as this, in median heights. A source farther out adds at
 * most 1/(20π), 1.6 %, of its strength to the end station, and a district drawn around a survey is no grid of panels.
 */
const REACH = 20;

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
 * The intervals that were asked for this line's group and what lies in the polygons, or the line and an apron.
 * @param area the part inside the polygons, if any were asked
 * @throws {InputError} `support/disjoint`, `support/off-line`, and what `supportOf` throws
 */
export function supportOfLine(
  conditioned: ConditionedLine,
  settings: ModelSettings,
  area: Support | undefined,
): Support {
  const {line} = conditioned;
  const span = spanOf(line.stations.chainage);
  const asked = settings.support.filter(
    (entry): entry is ChainageZone => !("area" in entry) && (entry.group === undefined || entry.group === line.group),
  );
  if (asked.length === 0 && area === undefined) {
    const apron = APRON * medianOf(conditioned.height);
    return [{from: span.from - apron, to: span.to + apron}];
  }
  const reach = REACH * medianOf(conditioned.height);
  const near = clip({from: span.from - reach, to: span.to + reach}, area ?? []);
  const support = asked.length === 0 ? near : unionOf([...supportOf(asked), ...near]);
  const meets = support.some(({from, to}) => to > span.from && from < span.to);
  if (!meets && area !== undefined) throw offSupport(line);
  if (!meets)
    throw new InputError(
      "support/disjoint",
      `The support ${support.map(({from, to}) => `${from}:${to}`).join(", ")} does not meet line ${line.id}, which runs from chainage ${span.from.toFixed(1)} to ${span.to.toFixed(1)} m. Give a support under the line, in the same chainage (groundward inspect prints it).`,
      {place: {file: line.file}},
    );
  return support;
}

/** Says where polygons were cut off beyond the ends of the line. @param area the part inside them, if any were asked */
export function cutNotices(conditioned: ConditionedLine, area: Support | undefined): Notice[] {
  if (area === undefined) return [];
  const {from, to} = spanOf(conditioned.line.stations.chainage);
  const reach = REACH * medianOf(conditioned.height);
  if (area.every((part) => part.from >= from - reach && part.to <= to + reach)) return [];
  return [
    remark(
      "support/cut-off",
      `Polygons of --support go on beyond ${REACH} median heights (${reach.toPrecision(3)} m) from the ends of the line and count up to there. Sources farther out add at most 1.6 % of their strength to the end station; give --support A:B to let them.`,
    ),
  ];
}

/**
 * Default panel: a quarter of the least height; an eighth where a gradient is read, since gradients tell of shorter
 * waves (on the long-line model 20 m up, at 0.1 % noise, 0.0217 in place of 0.0233). See `panelsOn`.
 */
export function panelsOfLine(conditioned: ConditionedLine, support: Support, settings: ModelSettings): Panels {
  const share = conditioned.channels.some(({response}) => response.order === 1) ? 0.125 : 0.25;
  return panelsOn(support, settings.panel ?? share * leastHeight(conditioned), conditioned.boundaryLine);
}

/** The lowest sensor of any channel over the boundary, m. */
const leastHeight = ({line, boundaryLine, channels}: ConditionedLine): number =>
  channels.reduce(
    (least, {z}) =>
      Math.min(least, spanOf(z.map((height, i) => height - boundaryAt(boundaryLine, line.stations.chainage[i]))).from),
    Infinity,
  );
