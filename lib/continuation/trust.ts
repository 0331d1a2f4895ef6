/** Depth to trust: how far down the field is data, and from where on down it is mostly the bound. */
import {boundaryAt} from "../geometry/boundary-line.ts";
import {levelRowInto} from "./field-on-level.ts";
import {levelFunctional, median, spreadStations} from "./level-functional.ts";
import {type LevelQuestion, responsesOf} from "./levels.ts";

/** Stations at which intervals are taken. */
const STATIONS = 60;
/** The lowest level looked at, as a share of the least height of the sensor; below it a point is next to the sources. */
const LEAST = 0.01;
/** The level is found to one part in this many of a factor 2. */
const HALVINGS = 5;

export interface Trust {
  /** Of the range of the field that an interval may span. */
  readonly fraction: number;
  /**
   * The lowest level at which the interval is narrower, m above the boundary, with every level looked at between it and
   * the lowest sensor; 0 where that holds down to the boundary; NaN where it does not even at the lowest sensor.
   */
  readonly level: number;
  /** The least height of the sensor, m: where the search begins. */
  readonly sensor: number;
  /** How many stations were asked. */
  readonly stations: number;
}

/**
 * Half the width of the intervals is the median over some 60 stations above the support; the range is that of the
 * field of the one source at the same stations, and at those over the greatest and least of the source.
 *
 * @returns undefined where there are no intervals, or no station above the support
 */
export function depthToTrust(question: LevelQuestion, fraction: number): Trust | undefined {
  const {conditioned, panels, density, continuum, solver, quantity} = question;
  const {chainage} = conditioned.line.stations;
  const {observable} = conditioned.channels[0].channel;
  const [response, second] = responsesOf(quantity, observable.source.method, conditioned.direction);
  const asked = spreadStations(chainage, continuum, STATIONS);
  if (second !== undefined || asked.length === 0) return undefined;
  const seen = new Set([...asked, ...overExtremes(question)]);
  const row = new Float64Array(panels.count);
  const isTrusted = (height: number): boolean => {
    let least = Infinity;
    let greatest = -Infinity;
    for (const i of seen) {
      levelRowInto(row, 0, panels, chainage[i], boundaryAt(continuum.boundary, chainage[i]), height, response);
      const field = row.reduce((sum, weight, j) => sum + weight * density[j], 0);
      least = Math.min(least, field);
      greatest = Math.max(greatest, field);
    }
    const halves = asked.map(
      (i) => solver.interval(levelFunctional(question, chainage[i], height, response)!.functional).halfWidth,
    );
    return 2 * median(halves) < fraction * (greatest - least);
  };
  const sensor = conditioned.height.reduce((a, b) => Math.min(a, b), Infinity);
  const found = (level: number): Trust => ({fraction, level, sensor, stations: asked.length});
  if (!isTrusted(sensor)) return found(Number.NaN);
  // From the sensor down by halves, so that no level in between is taken on trust; then by halves of the last step.
  let upper = sensor;
  let lower = sensor;
  for (;;) {
    if (!(lower > LEAST * sensor)) return found(0);
    lower = Math.max(0.5 * upper, LEAST * sensor);
    if (!isTrusted(lower)) break;
    upper = lower;
  }
  for (let k = 0; k < HALVINGS; ++k) {
    const middle = Math.sqrt(lower * upper);
    if (isTrusted(middle)) upper = middle;
    else lower = middle;
  }
  return found(upper);
}

/** The stations nearest to the panels of greatest and least density below the line: a narrow peak would fall between those asked. */
function overExtremes({conditioned, panels, density}: LevelQuestion): number[] {
  const {chainage} = conditioned.line.stations;
  const from = chainage.reduce((a, b) => Math.min(a, b), Infinity);
  const to = chainage.reduce((a, b) => Math.max(a, b), -Infinity);
  const below = [...panels.centre.keys()].filter((j) => panels.centre[j] >= from && panels.centre[j] <= to);
  if (below.length === 0) return [];
  const ends = [
    below.reduce((a, b) => (density[b] < density[a] ? b : a)),
    below.reduce((a, b) => (density[b] > density[a] ? b : a)),
  ];
  return ends.map((j) =>
    [...chainage.keys()].reduce((a, b) =>
      Math.abs(chainage[b] - panels.centre[j]) < Math.abs(chainage[a] - panels.centre[j]) ? b : a,
    ),
  );
}
