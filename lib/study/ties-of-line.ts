/** The ties of one line as the operator sees them. */

import {levelRowInto} from "../continuation/field-on-level.ts";
import {InputError, ModelError} from "../errors.ts";
import {boundaryAt} from "../geometry/boundary-line.ts";
import type {Interval} from "../geometry/interval.ts";
import {stretchAt} from "../inverse/averages.ts";
import type {Resolution} from "../inverse/nouns.ts";
import type {Panels} from "../operators/panels.ts";
import type {PointReading} from "../operators/readings-of-line.ts";
import type {Response} from "../potential/kernel.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {Tie} from "../survey/tie.ts";
import type {Known} from "./operated.ts";

export interface LineTie {
  readonly tie: Tie;
  readonly x: number;
  /** Above the datum of the section, and above the boundary there, m. */
  readonly z: number;
  readonly above: number;
  readonly response: Response;
}

/** A tie farther than this many heights from the line says nothing about it. */
const REACH = 5;

/** @throws {InputError} `tie/far`, `tie/below-boundary`, `tie/no-coordinates`, `tie/component-on-boundary`, `direction/not-given` */
export function tiesOfLine(conditioned: ConditionedLine, ties: readonly Tie[]): readonly LineTie[] {
  const {line, boundaryLine, datum, direction} = conditioned;
  return ties
    .filter((tie) => tie.line === line.id)
    .map((tie) => {
      const {x, across} = "chainage" in tie.at ? {x: tie.at.chainage, across: 0} : footOf(line, tie, tie.at);
      const heights = Float64Array.from(conditioned.height).sort();
      const reach = REACH * heights[heights.length >> 1];
      let nearest = Infinity;
      for (const station of line.stations.chainage) nearest = Math.min(nearest, Math.abs(station - x));
      const distance = Math.hypot(nearest, across);
      if (!(distance <= reach)) throw farFrom(line, tie, distance, reach);
      const z = tie.elevation - datum;
      const above = z - boundaryAt(boundaryLine, x);
      // A tie within a millimetre of the boundary is meant to lie on it.
      if (!(above >= -1e-3))
        throw new InputError(
          "tie/below-boundary",
          `The tie lies ${(-above).toPrecision(3)} m below the boundary (${conditioned.boundary}); it must lie on or above it. Lower the boundary or correct its elevation.`,
          {place: tie.place},
        );
      if (tie.observable.needsDirection && direction === undefined)
        throw new InputError(
          "direction/not-given",
          `A tie of ${tie.observable.name} needs the direction of the Earth's field. Give --inclination and --declination, or --date.`,
          {place: tie.place},
        );
      const response = tie.observable.response(direction);
      const onBoundary = above <= 1e-3;
      if (onBoundary && !(response.order === 0 && response.im === 0))
        throw new InputError(
          "tie/component-on-boundary",
          `A tie on the boundary itself can only be of the downward component; this one is of ${tie.observable.name}. Give one above the boundary.`,
          {place: tie.place},
        );
      return {tie, x, z, above: onBoundary ? 0 : above, response};
    });
}

const farFrom = (line: SurveyLine, tie: Tie, metres: number, reach: number): InputError =>
  new InputError(
    "tie/far",
    `The tie lies ${metres.toPrecision(3)} m from the nearest station of line ${line.id}, beyond ${REACH} heights (${reach.toPrecision(3)} m), so that it says nothing about it. Correct its line or its place.`,
    {place: tie.place},
  );

/** The foot of the tie on the straight line through the two nearest stations, and its distance off that line; m. */
function footOf(
  {stations, id}: SurveyLine,
  tie: Tie,
  at: {readonly x: number; readonly y: number},
): {readonly x: number; readonly across: number} {
  const {x, y, chainage} = stations;
  if (x === undefined || y === undefined)
    throw new InputError(
      "tie/no-coordinates",
      `The tie is given by x, y, but line ${id} is known by its chainage only. Give the tie's chainage.`,
      {place: tie.place},
    );
  const away = (i: number): number => Math.hypot(x[i] - at.x, y[i] - at.y);
  const order = [...chainage.keys()].sort((i, j) => away(i) - away(j));
  const a = order[0];
  const b = order.find((i) => Math.abs(chainage[i] - chainage[a]) > 1e-6);
  if (b === undefined) return {x: chainage[a], across: away(a)};
  const [dx, dy] = [x[b] - x[a], y[b] - y[a]];
  const length = Math.hypot(dx, dy);
  const share = ((at.x - x[a]) * dx + (at.y - y[a]) * dy) / (length * length);
  // Metres of chainage for one unit of the map, whatever that is.
  const scale = Math.abs(chainage[b] - chainage[a]) / length;
  const across = (Math.abs((at.x - x[a]) * dy - (at.y - y[a]) * dx) / length) * scale;
  return {x: chainage[a] + share * (chainage[b] - chainage[a]), across};
}

/** What each panel adds to the reading of a tie; on the boundary, the mean over `stretch`. */
function tieRow(panels: Panels, tie: LineTie, stretch: Interval | undefined): Float64Array {
  const row = new Float64Array(panels.count);
  if (stretch === undefined) return levelRowInto(row, 0, panels, tie.x, tie.z - tie.above, tie.above, tie.response);
  for (let j = 0; j < panels.count; ++j) {
    const inside = Math.min(panels.to[j], stretch.to) - Math.max(panels.from[j], stretch.from);
    if (inside > 0) row[j] = (inside * tie.response.re) / (stretch.to - stretch.from);
  }
  return row;
}

/** A tie put to the panels: what each adds to it, and itself as a reading. */
export interface TieRow {
  readonly row: Float64Array;
  readonly value: number;
  readonly exact: boolean;
  readonly point: PointReading;
  /** What it is the mean of f over; undefined above the boundary. */
  readonly stretch: Interval | undefined;
}

/** @param resolution of the line without ties on the boundary; asked for only where there are some */
export function tieRows(ties: readonly LineTie[], panels: Panels, resolution: () => Resolution): readonly TieRow[] {
  const without = ties.some(({above}) => above === 0) ? resolution() : undefined;
  return ties.map((tie): TieRow => {
    const stretch = tie.above > 0 || without === undefined ? undefined : stretchAt(panels, without, tie.x);
    if (tie.above === 0 && stretch === undefined)
      throw new InputError(
        "tie/off-support",
        `The tie on the boundary at chainage ${tie.x} lies off the support, where the source is zero by assumption. Widen --support or leave it out.`,
        {place: tie.tie.place},
      );
    const {x, z, response} = tie;
    return {
      row: tieRow(panels, tie, stretch),
      value: tie.tie.value,
      exact: tie.tie.tolerance === 0,
      point: {x, z, response, noise: tie.tie.tolerance},
      stretch,
    };
  });
}

/**
 * Ties as the intervals hear them: above the boundary further readings, where one to be met exactly is given a thousandth
 * of the noise, which only lengthens them; on it means of f over their stretches, exact ones as known.
 *
 * @param rows the same ties put to the panels
 */
export function tiesHeard(ties: readonly LineTie[], rows: readonly TieRow[], {channels}: ConditionedLine): Known {
  const [{noise, response: first}] = channels;
  const readings = ties.flatMap(({tie, x, z, above, response}, k) => {
    const {stretch} = rows[k];
    // On the boundary the downward component is f itself, times what it counts.
    if (stretch !== undefined)
      return tie.tolerance > 0
        ? [
            {
              point: {x, z, response, noise: tie.tolerance / Math.abs(response.re), stretch},
              value: tie.value / response.re,
            },
          ]
        : [];
    // A gradient in units of a field, or the other way: a height turns one into the other.
    const turned = noise * above ** (first.order - response.order);
    return [{point: {x, z, response, noise: tie.tolerance > 0 ? tie.tolerance : 1e-3 * turned}, value: tie.value}];
  });
  const means = rows.flatMap(({stretch, exact, value}, k) =>
    stretch !== undefined && exact ? [{stretch, value: value / ties[k].response.re}] : [],
  );
  return {readings, means};
}

/**
 * Says which ties cannot be met within the bound, and the least norm that they need.
 * @param leastNorm of the sources that meet the exact ones, SI·√m
 */
export function namingTies<T>(ties: readonly LineTie[], leastNorm: () => number, choose: () => T): T {
  try {
    return choose();
  } catch (error) {
    if (!(error instanceof ModelError) || error.code !== "bound/below-ties") throw error;
    const rows = ties.filter(({tie}) => tie.tolerance === 0).map(({tie}) => tie.place.row);
    const unit = DELIVERY_UNIT[ties[0].tie.observable.source.fieldDimension];
    const least = `${(leastNorm() / unit.factor).toPrecision(4)} ${unit.symbol}·√m`;
    throw new ModelError(
      "tie/infeasible",
      `${error.message} The ties stand in rows ${rows.join(", ")} of the tie file; the least norm that meets them is ${least}.`,
      {place: ties[0].tie.place, cause: error},
    );
  }
}
