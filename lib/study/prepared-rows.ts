/** Rows of a grid made ready to be studied: their heights, their support, and whether they share their geometry. */
import {ReportableError} from "../errors.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import {condition} from "../survey/condition.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import type {LineRecord} from "../survey/survey.ts";
import {effectiveDirectionOf} from "./direction-of-line.ts";
import type {Settings} from "./settings.ts";
import {cutNotices, supportOfLine} from "./support-of-line.ts";
import {type LineZones, zonesFor} from "./zones.ts";

interface PreparedRow {
  readonly line: SurveyLine;
  readonly conditioned: ConditionedLine;
  readonly zones: LineZones;
  /** Rows of one key share their geometry. */
  readonly key: string;
}

export type Prepared = PreparedRow | {readonly id: string; readonly failure: ReportableError};

/** Prepares the rows of a grid, in any order. What is wrong with polygons is thrown: it is wrong for every row. */
export function rowPreparer(settings: Settings): (record: LineRecord) => Prepared {
  const zonesOf = zonesFor(settings);
  const placed = settings.model.support.length > 0;
  const conditionedLike = conditioner(settings);
  let last: {readonly row: Float64Array; readonly pattern: string} | undefined;
  const patternLike = ({stations: {row}}: SurveyLine): string => {
    if (last?.row !== row) last = {row, pattern: patternOf(row, placed)};
    return last.pattern;
  };
  return (record) => {
    if ("failure" in record) return record;
    const zones = zonesOf(record.line);
    const line = {...record.line, notices: [...record.line.notices, ...zones.notices]};
    try {
      const first = conditionedLike(line);
      const conditioned = {...first, notices: [...first.notices, ...cutNotices(first, zones.support)]};
      const pattern = `${patternLike(line)}${directionOf(first)}`;
      if (zones.support === undefined) return {line, conditioned, zones, key: pattern};
      const support = supportOfLine(conditioned, settings.model, zones.support);
      return {line, conditioned, zones, key: `${pattern} ${support.map(({from, to}) => `${from}:${to}`).join(" ")}`};
    } catch (error) {
      if (!(error instanceof ReportableError)) throw error;
      return {id: line.id, failure: error};
    }
  };
}

/** Rows that share their arrays of places and heights are conditioned once. */
function conditioner(settings: Settings): (line: SurveyLine) => ConditionedLine {
  let last: ConditionedLine | undefined;
  return (line) => {
    const direction = effectiveDirectionOf(line, settings);
    if (last === undefined || !isAlike(last, line, direction))
      last = condition(line, settings.model.boundary, direction);
    return {
      ...last,
      line,
      direction,
      channels: [{...last.channels[0], channel: line.channels[0]!}, ...last.channels.slice(1)],
    };
  };
}

function isAlike({line, direction: own}: ConditionedLine, next: SurveyLine, direction?: EffectiveDirection): boolean {
  const [a, b] = [line.stations, next.stations];
  if (a.row !== b.row || a.chainage !== b.chainage) return false;
  if (a.elevation !== b.elevation || a.clearance !== b.clearance || a.ground !== b.ground) return false;
  if (own?.inclination !== direction?.inclination || own?.beta !== direction?.beta) return false;
  const [channel] = line.channels;
  const [other] = next.channels;
  return (
    line.channels.length === 1 &&
    next.channels.length === 1 &&
    channel!.noise !== "record" &&
    channel!.noise === other!.noise &&
    channel!.noiseLength === other!.noiseLength &&
    channel!.observable === other!.observable &&
    channel!.above === other!.above
  );
}

/** Which pixels hold readings, as runs; the place of the first counts only where the support is fixed. */
function patternOf(row: Float64Array, placed: boolean): string {
  const runs: number[] = placed ? [row[0]!] : [];
  let length = 1;
  for (let i = 1; i < row.length; ++i) {
    const step = row[i]! - row[i - 1]!;
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
