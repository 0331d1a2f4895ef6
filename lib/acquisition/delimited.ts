/**
 * Survey lines from delimited text, in walks over the files: the first checks every cell and tells the
 * lines, their directions and what is missing; the second finds the zero of each axis; each further
 * walk hands out the lines. So a bad cell stops the work before anything is written, and memory holds
 * one line and a few numbers for each of the others.
 */
import {InputError} from "../errors.ts";
import type {ByteSource} from "../formats/byte-source.ts";
import {openTable, type Table} from "../formats/delimited.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import {chainageAt, movedAlong} from "../survey/line-axis.ts";
import type {Axis, LineRecord, RoleChoice, Survey} from "../survey/survey.ts";
import {ownHeights} from "./asked-columns.ts";
import {assembleLine, type Placing} from "./assemble-line.ts";
import {channelPlans} from "./channel-plan.ts";
import {type ColumnPlan, chooseColumns} from "./choose-columns.ts";
import {type Frames, framesFor} from "./frames.ts";
import {checkHeightSettings} from "./heights.ts";
import {identify} from "./line-identifiers.ts";
import {type ChosenTable, completeRun, lineRuns, type RunPlan} from "./line-runs.ts";
import {type PlacedGroup, placeGroups} from "./place-groups.ts";
import type {AcquisitionSettings} from "./settings.ts";
import {coordinateRoles, type Scan, scanSurvey} from "./survey-scan.ts";

/** Rows looked at to see which columns hold numbers. */
const SAMPLE = 200;
const HEIGHTS = ["elevation", "clearance", "ground"] as const;

/**
 * @param files at least one, in the order of the survey
 * @throws {InputError} for whatever is wrong with a file, its columns, a cell, a setting or a coordinate system
 */
export async function openDelimitedSurvey(
  files: readonly ByteSource[],
  settings: AcquisitionSettings,
): Promise<Survey> {
  // Of several things wrong, a setting is told before a file.
  channelPlans(settings.channels);
  const tables: Table[] = [];
  for (const file of files) tables.push(await openTable(file));
  return openTableSurvey(tables, settings);
}

/**
 * The same for tables of any form.
 * @param files at least one, in the order of the survey
 */
export async function openTableSurvey(files: readonly Table[], settings: AcquisitionSettings): Promise<Survey> {
  const channels = channelPlans(settings.channels, settings.noiseLength);
  const {tables, layout, chainageGiven, choices, notices} = await openTables(files, settings, channels);
  const read = new Set(tables[0]!.choices.map(({role}) => role));
  const heights = HEIGHTS.filter((role) => read.has(role));
  checkHeightSettings(read, settings, {file: files[0]!.name, row: 1});
  const split = settings.split === "auto" ? "auto" : read.has("line") ? "column" : "whole";
  const required = new Set([...read].filter((role) => !(HEIGHTS as readonly string[]).includes(role)));
  // The runs must be the same on every walk, so heights are seen to after the split.
  const plan: RunPlan = {tables, required, roles: read, split};
  const scan = await scanSurvey(plan, layout, channels);
  requireStations(scan, files);
  const filled = heights.filter((role) => scan.filled.has(role));
  const filledPlan: RunPlan = {...plan, roles: new Set([...required, ...filled])};
  notices.push(...checkHeightSettings(filledPlan.roles, settings, {file: files[0]!.name, row: 1}));
  notices.push(...sharedHeights(channels, filledPlan.roles));
  const {ids, repeated} = identify(scan.runs.map(({name}) => name));
  notices.push(
    ...scanNotices(
      scan,
      repeated,
      heights.filter((role) => !scan.filled.has(role)),
      files,
    ),
  );

  const coordinates = coordinateRoles(layout);
  const frames =
    coordinates === undefined
      ? undefined
      : framesFor(
          layout,
          settings,
          scan.runs.flatMap(({ends}) => ends ?? []),
        );
  if (frames !== undefined) notices.push(...frames.notices);
  const placing = await placeRuns(filledPlan, scan, frames, coordinates, chainageGiven, filled, notices);

  return {
    kind: "lines",
    files: files.map(({name}) => name),
    axes: placing.axes,
    choices,
    delivered: frames?.deliveredName,
    notices,
    lineCount: scan.runs.length,
    grid: undefined,
    async *lines(): AsyncGenerator<LineRecord> {
      let index = 0;
      for await (const run of lineRuns(filledPlan)) {
        if (run.remnant) continue;
        yield assembleLine(ids[index]!, completeRun(run, filled), placing.of(index), channels, settings);
        ++index;
      }
    },
  };
}

/** Further channels that have no height of their own. */
function sharedHeights(channels: ReturnType<typeof channelPlans>, roles: ReadonlySet<string>): Notice[] {
  return channels.slice(1).flatMap(({role}) => {
    const own = ownHeights(role);
    if (own.some((height) => roles.has(height))) return [];
    return [
      remark(
        "channel/height-of-first",
        `${role} has no height of its own and is taken to be read where value is. If its sensor stands elsewhere, give --column ${own.map((height) => `${height}=NAME`).join(" or --column ")}.`,
      ),
    ];
  });
}

/** What the columns of one table are; `needed`: roles that an earlier table of the survey was read with. */
export async function planColumns(
  table: Table,
  settings: AcquisitionSettings,
  channels: ReturnType<typeof channelPlans>,
  needed?: ReadonlySet<string>,
): Promise<ColumnPlan> {
  const geographic = settings.crs === undefined ? undefined : coordinateSystem(settings.crs).kind === "geographic";
  const sample: (readonly string[])[] = [];
  for await (const block of table.blocks()) {
    sample.push(...block.rows.slice(0, SAMPLE));
    break;
  }
  return chooseColumns({...table, sample}, settings, channels, geographic, needed);
}

async function openTables(
  files: readonly Table[],
  settings: AcquisitionSettings,
  channels: ReturnType<typeof channelPlans>,
) {
  const tables: ChosenTable[] = [];
  const notices: Notice[] = [];
  const choices: RoleChoice[] = [];
  let first: ColumnPlan | undefined;
  for (const file of files) {
    notices.push(...file.notices);
    const needed = first === undefined ? undefined : new Set(first.choices.map(({role}) => role));
    const plan = await planColumns(file, settings, channels, needed);
    if (first !== undefined && (plan.layout !== first.layout || plan.chainageGiven !== first.chainageGiven))
      throw new InputError(
        "column/layouts-differ",
        `${file.name} places its stations by other columns than ${files[0]!.name}; one way for all files was needed. Ask for the same roles with --column, or run the files one by one.`,
        {place: {file: file.name, row: 1}},
      );
    first ??= plan;
    notices.push(...plan.notices);
    const used = plan.choices.filter(({role}) => needed === undefined || needed.has(role));
    tables.push({table: file, choices: used});
    for (const {role, column, reason} of used)
      if (!choices.some((known) => known.role === role && known.column === column))
        choices.push({role, column, reason});
  }
  return {tables, notices, choices, layout: first!.layout, chainageGiven: first!.chainageGiven};
}

function requireStations(scan: Scan, files: readonly Table[]): void {
  if (scan.runs.some(({stations}) => stations > 0)) return;
  const names = files.map(({name}) => name).join(", ");
  throw new InputError(
    "survey/no-station",
    `${names}: no row has a position and a reading${scan.unnamed > 0 ? ` (${scan.unnamed} rows name no line)` : ""}; at least two were needed. Complete the rows, or name other columns with --column.`,
    {place: {file: files[0]!.name}},
  );
}

function scanNotices(
  scan: Scan,
  repeated: readonly string[],
  empty: readonly string[],
  files: readonly Table[],
): Notice[] {
  const place = {file: files[0]!.name};
  const notices: Notice[] = [];
  if (repeated.length > 0) {
    const some = repeated.slice(0, 5).map((id) => `"${id.slice(0, 60)}"`);
    notices.push(
      doubt(
        "line/repeated-identifier",
        `${repeated.length} identifiers stand for several lines apart from each other (${some.join(", ")}${repeated.length > some.length ? ", …" : ""}); the lines are called id.1, id.2 … in the order met. Join or rename them if that is not meant.`,
        place,
      ),
    );
  }
  if (scan.unnamed > 0)
    notices.push(
      doubt(
        "line/no-identifier",
        `${scan.unnamed} rows name no line and are left out. Fill in the identifiers.`,
        place,
      ),
    );
  if (scan.turns > 0)
    notices.push(
      remark(
        "line/turns-left-out",
        `${scan.turns} stations of turns and stops between lines are left out (heuristic of --split auto).`,
        place,
      ),
    );
  for (const role of empty)
    notices.push(remark("height/empty-column", `The column for ${role} holds no number and is left out.`, place));
  return notices;
}

/** The axes with their zero, and how each run is placed on one. */
async function placeRuns(
  plan: RunPlan,
  scan: Scan,
  frames: Frames | undefined,
  coordinates: readonly [string, string] | undefined,
  chainageGiven: boolean,
  heights: readonly string[],
  notices: Notice[],
): Promise<{axes: Axis[]; of(index: number): Placing}> {
  if (chainageGiven || frames === undefined || coordinates === undefined) {
    const axis: Axis = {
      group: "G1",
      azimuth: undefined,
      origin: undefined,
      system: "chainage of the data",
      lines: scan.runs.length,
    };
    return {axes: [axis], of: () => ({group: undefined, groupName: "G1", coordinates, frames})};
  }
  const placement = placeGroups(scan.runs, frames);
  notices.push(...placement.notices);
  const least = new Float64Array(placement.groups.length).fill(Infinity);
  let index = 0;
  for await (const run of lineRuns(plan)) {
    if (run.remnant) continue;
    const g = placement.groupOf[index++]!;
    const {axis, frame} = placement.groups[g]!;
    const complete = completeRun(run, heights);
    const [first, second] = coordinates.map((role) => complete.columns.get(role)!);
    for (let i = 0; i < first!.length; ++i)
      least[g] = Math.min(least[g]!, chainageAt(axis, ...frame.metric(first![i]!, second![i]!)));
  }
  const groups = placement.groups.map(
    (group, g): PlacedGroup => ({
      ...group,
      axis: Number.isFinite(least[g]!) ? movedAlong(group.axis, least[g]!) : group.axis,
    }),
  );
  return {
    axes: groups.map(({name, axis, frame, lines}) => ({
      group: name,
      azimuth: axis.azimuth,
      origin: axis.origin,
      system: frame.title,
      lines,
    })),
    of: (i) => {
      const group = groups[placement.groupOf[i]!]!;
      return {group, groupName: group.name, coordinates, frames};
    },
  };
}
