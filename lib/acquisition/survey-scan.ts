/** The first walk over the tables: every cell checked, a few numbers kept for each line. */
import type {Place} from "../errors.ts";
import {checkGeographic, foldLongitude} from "../geometry/transformation.ts";
import {anomalyCheck} from "./anomaly-check.ts";
import type {ChannelPlan} from "./channel-plan.ts";
import type {Layout} from "./choose-columns.ts";
import {type LineRun, lineRuns, type RunPlan} from "./line-runs.ts";

/** Two coordinates of the file: x, y or longitude, latitude. */
export type Coordinates = readonly [number, number];

export interface RunSummary {
  readonly name: string | undefined;
  readonly file: string;
  readonly firstRow: number;
  readonly stations: number;
  /** The two stations farthest apart, in no order that means anything; undefined without stations or coordinates. */
  readonly ends: readonly [Coordinates, Coordinates] | undefined;
}

export interface Scan {
  readonly runs: readonly RunSummary[];
  /** Roles of which some cell holds a number. */
  readonly filled: ReadonlySet<string>;
  /** Rows that name no line. */
  readonly unnamed: number;
  /** Stations of turns and stops, left out. */
  readonly turns: number;
}

/** The columns that hold coordinates; undefined where only chainage is known. */
export const coordinateRoles = (layout: Layout): readonly [string, string] | undefined =>
  layout === "planar" ? ["x", "y"] : layout === "geographic" ? ["longitude", "latitude"] : undefined;

/**
 * @throws {InputError} `value/not-an-anomaly`, `crs/latitude-range`, `crs/longitude-range` and those of {@link lineRuns}
 */
export async function scanSurvey(plan: RunPlan, layout: Layout, channels: readonly ChannelPlan[]): Promise<Scan> {
  const checks = channels.map(anomalyCheck);
  const roles = coordinateRoles(layout);
  const runs: RunSummary[] = [];
  const filled = new Set<string>();
  let unnamed = 0;
  let turns = 0;
  for await (const run of lineRuns(plan)) {
    unnamed += run.unnamed;
    turns += run.turns;
    if (run.remnant) {
      turns += run.row.length;
      continue;
    }
    channels.forEach((channel, c) => {
      checks[c]!.add(run.columns.get(channel.role)!);
    });
    for (const [role, column] of run.columns)
      if (!filled.has(role) && column.some((value) => !Number.isNaN(value))) filled.add(role);
    const ends = roles === undefined ? undefined : endsOf(run, roles, layout === "geographic");
    runs.push({name: run.name, file: run.file, firstRow: run.firstRow, stations: run.row.length, ends});
  }
  channels.forEach((channel, c) => {
    const {table, choices} = plan.tables[0]!;
    const column = choices.find(({role}) => role === channel.role)?.column;
    const place: Place = column === undefined ? {file: table.name} : {file: table.name, column};
    checks[c]!.finish(place);
  });
  return {runs, filled, unnamed, turns};
}

/** The farthest two of the stations that are first, last, or extreme in a coordinate. */
function endsOf(
  run: LineRun,
  roles: readonly [string, string],
  geographic: boolean,
): readonly [Coordinates, Coordinates] | undefined {
  const [first, second] = [run.columns.get(roles[0])!, run.columns.get(roles[1])!];
  const count = run.row.length;
  if (count === 0) return undefined;
  if (geographic)
    for (let i = 0; i < count; ++i) checkGeographic(first[i]!, second[i]!, {file: run.file, row: run.row[i]!});
  const from = first[0]!;
  const east = (i: number) => (geographic ? from + foldLongitude(first[i]! - from) : first[i]!);
  const extremes = [0, count - 1, 0, 0, 0, 0];
  for (let i = 1; i < count; ++i) {
    if (east(i) < east(extremes[2]!)) extremes[2] = i;
    if (east(i) > east(extremes[3]!)) extremes[3] = i;
    if (second[i]! < second[extremes[4]!]!) extremes[4] = i;
    if (second[i]! > second[extremes[5]!]!) extremes[5] = i;
  }
  const squeeze = geographic ? Math.cos((second[0]! * Math.PI) / 180) : 1;
  let ends: [number, number] = [0, 0];
  let farthest = -1;
  for (const i of extremes)
    for (const j of extremes) {
      const distance = Math.hypot((east(i) - east(j)) * squeeze, second[i]! - second[j]!);
      if (distance > farthest) {
        farthest = distance;
        ends = [i, j];
      }
    }
  return [
    [first[ends[0]]!, second[ends[0]]!],
    [first[ends[1]]!, second[ends[1]]!],
  ];
}
