/**
 * Which column of a table stands for which role: those asked for, then those whose
 * name says so. Nothing is guessed: two columns for one role, or none, is refused.
 */
import {InputError} from "../errors.ts";
import {type DecimalMark, parseCell} from "../formats/number-cell.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import type {RoleChoice} from "../survey/survey.ts";
import {askedColumns, listed, ownHeights} from "./asked-columns.ts";
import type {ChannelPlan} from "./channel-plan.ts";
import {fieldName} from "./field-name.ts";
import {fieldUnit, isOtherLength, ROLE_NAMES, type Role, VALUE_NAMES, WEAK_CHAINAGE} from "./header-names.ts";
import {type AcquisitionSettings, ROLES} from "./settings.ts";

export interface ColumnChoice extends RoleChoice {
  /** Position in the header, from zero. */
  readonly index: number;
}

/** What the stations are placed by. */
export type Layout = "planar" | "geographic" | "chainage";

export interface ColumnPlan {
  readonly choices: readonly ColumnChoice[];
  /** The coordinates; with `chainageGiven` they are delivered only. */
  readonly layout: Layout;
  readonly chainageGiven: boolean;
  readonly notices: readonly Notice[];
}

/** What of a table the choice looks at. */
export interface TableHead {
  readonly name: string;
  readonly header: readonly string[];
  /** What a definition beside the table says of each column. */
  readonly longNames?: readonly (string | undefined)[];
  readonly units?: readonly (string | undefined)[];
  readonly decimal: DecimalMark;
  /** Some rows, to see which columns hold numbers. */
  readonly sample: readonly (readonly string[])[];
}

/**
 * @param geographicSystem whether `--crs` names a system of longitude and latitude; undefined without `--crs`
 * @param needed roles that an earlier file of the survey was read with; absent for the first file
 * @throws {InputError} `column/unknown-role`, `column/unknown`, `column/two-roles`, `column/ambiguous`,
 *   `column/missing`, `column/two-positions`, `height/two-sources`
 */
export function chooseColumns(
  head: TableHead,
  settings: AcquisitionSettings,
  channels: readonly ChannelPlan[],
  geographicSystem: boolean | undefined,
  needed?: ReadonlySet<string>,
): ColumnPlan {
  const file = head.name;
  const asked = askedColumns(head, settings, channels);
  const names = head.header.map((name, i) => fieldName(name, head.longNames?.[i], head.units?.[i]));
  const candidates = new Map<string, number[]>();
  const askedIndices = new Set(asked.values());
  for (const role of ROLES)
    candidates.set(
      role,
      names.flatMap(({key, unit}, i) =>
        ROLE_NAMES[role].includes(key) && !askedIndices.has(i) && !(isLength(role) && isOtherLength(unit)) ? [i] : [],
      ),
    );
  const choices: ColumnChoice[] = [];
  const notices: Notice[] = [];
  const has = (role: string) => asked.has(role) || (candidates.get(role)?.length ?? 0) > 0;
  const missing = (role: string, why: string) =>
    new InputError(
      "column/missing",
      `${file} has no column for ${role} (${why}). Columns there: ${listed(head.header)}. Name it with --column ${role}=NAME.`,
      {place: {file, row: 1}},
    );
  const take = (role: string): void => {
    const index = asked.get(role);
    const found = candidates.get(role) ?? [];
    if (index !== undefined) choices.push({role, column: head.header[index]!, index, reason: "asked"});
    else if (found.length > 1)
      throw new InputError(
        "column/ambiguous",
        `${file}: ${found.length} columns could stand for ${role}: ${found.map((i) => head.header[i]).join(", ")}; one was needed. Say which with --column ${role}=${head.header[found[0]!]}.`,
        {place: {file, row: 1}},
      );
    else if (found.length === 1)
      choices.push({role, column: head.header[found[0]!]!, index: found[0]!, reason: "recognised"});
    else throw missing(role, "the survey needs it");
  };

  const position = choosePosition();
  const chainageGiven = takesChainage();
  if (position === undefined && !chainageGiven)
    throw missing(
      "chainage",
      "nor a whole pair x, y or longitude, latitude, of which one way to place the stations was needed",
    );
  if (chainageGiven) take("chainage");
  if (position === "planar") for (const role of ["x", "y"]) take(role);
  if (position === "geographic") for (const role of ["longitude", "latitude"]) take(role);
  if (settings.split === "column" || (settings.split === undefined && has("line"))) take("line");
  if (settings.split === "auto" && has("time")) take("time");
  for (const role of ["elevation", "clearance", "ground"] as const) if (takesHeight(role)) take(role);
  for (const channel of channels) {
    takeValue(channel);
    for (const role of ownHeights(channel.role)) takeOwnHeight(role);
  }
  if (needed !== undefined)
    for (const role of needed)
      if (!choices.some((choice) => choice.role === role)) throw missing(role, "another file of the survey has one");
  const lengths = choices.filter(({role, index}) => isLength(role) && isOtherLength(names[index]!.unit));
  for (const {role, column} of lengths)
    notices.push(
      doubt(
        "column/not-metres",
        `${file}: column "${column}" was asked for as ${role}; its name speaks of another unit, and it is taken in metres. Convert it to metres if it is not.`,
        {file, column},
      ),
    );
  return {choices, layout: position ?? "chainage", chainageGiven, notices};

  function choosePosition(): "planar" | "geographic" | undefined {
    const planarAsked = asked.has("x") || asked.has("y");
    const geographicAsked = asked.has("longitude") || asked.has("latitude");
    if (planarAsked && geographicAsked)
      throw new InputError(
        "column/two-positions",
        `${file}: columns were asked for both as x, y and as longitude, latitude; one pair was needed. Leave one pair out of --column.`,
        {place: {file, row: 1}},
      );
    if (planarAsked) return "planar";
    if (geographicAsked) return "geographic";
    const planar = has("x") && has("y");
    const geographic = has("longitude") && has("latitude");
    if (planar && geographic) {
      const taken = geographicSystem === true ? "geographic" : "planar";
      const [used, other] = taken === "planar" ? ["x, y", "longitude, latitude"] : ["longitude, latitude", "x, y"];
      notices.push(
        remark(
          "column/two-positions",
          `${file} has both x, y and longitude, latitude; ${used} are used. Ask for ${other} with --column to use those.`,
          {file, row: 1},
        ),
      );
      return taken;
    }
    return planar ? "planar" : geographic ? "geographic" : undefined;
  }

  function takesChainage(): boolean {
    if (has("chainage")) return true;
    if (position !== undefined) return false;
    const weak = names.flatMap(({key, unit}, i) =>
      key === WEAK_CHAINAGE && !askedIndices.has(i) && !isOtherLength(unit) ? [i] : [],
    );
    candidates.set("chainage", weak);
    return weak.length > 0;
  }

  function takesHeight(role: "elevation" | "clearance" | "ground"): boolean {
    const constant = role === "ground" ? undefined : settings[role];
    if (constant === undefined) return has(role);
    if (asked.has(role))
      throw new InputError(
        "height/two-sources",
        `${role} was given both as a constant (--${role} ${constant}) and as a column (--column ${role}=${settings.columns.get(role)}); one was needed. Leave one out.`,
        {place: {file, row: 1}},
      );
    for (const i of candidates.get(role) ?? [])
      notices.push(
        remark(
          "height/constant-used",
          `${file}: the constant --${role} ${constant} is used, not the column "${head.header[i]}".`,
          {file, column: head.header[i]!},
        ),
      );
    return false;
  }

  /** A column asked for or named as the role is spelt, where the stations have that kind of height in a column too. */
  function takeOwnHeight(role: string): void {
    const named = head.header.findIndex((name) => name.trim().toLowerCase() === role);
    if (!asked.has(role) && named < 0) return;
    const kind = role.slice(0, role.indexOf("."));
    if (!choices.some((choice) => choice.role === kind))
      throw new InputError(
        "height/sensor-alone",
        `${file}: ${role} says where a second sensor is, but the first has no column for ${kind}, so the distance between them is not known. Give --column ${kind}=NAME as well.`,
        {place: {file, row: 1}},
      );
    if (!asked.has(role)) candidates.set(role, [named]);
    take(role);
  }

  function takeValue(channel: ChannelPlan): void {
    const {role} = channel;
    const taken = new Set([...choices.map((choice) => choice.index), ...asked.values()]);
    if (!asked.has(role)) {
      const wanted =
        role === "value" ? [...ROLE_NAMES.value, ...(VALUE_NAMES[channel.observable.dimension] ?? [])] : [];
      let found = names.flatMap(({key}, i) =>
        !taken.has(i) && (wanted.includes(key) || head.header[i]!.trim().toLowerCase() === role) ? [i] : [],
      );
      if (found.length === 0 && role === "value") found = otherNumbers(taken);
      if (found.length === 0) throw missing(role, "no name in the header says that it holds the readings");
      candidates.set(role, found);
    }
    take(role);
    const {column, index} = choices.at(-1)!;
    const written = fieldUnit(names[index]!.unit);
    if (written !== undefined && written !== channel.unit.symbol)
      notices.push(
        doubt(
          "column/unit",
          `${file}: column "${column}" is named as if in ${written}, but it is read in ${channel.unit.symbol}. Give --unit ${written} if the name is right.`,
          {file, column},
        ),
      );
  }

  /** The columns of numbers that have no other role; only a single one can be taken without asking. */
  function otherNumbers(taken: ReadonlySet<number>): number[] {
    const otherRole = new Set([...candidates.values()].flat());
    const numbers = head.header.flatMap((_, i) =>
      !taken.has(i) && !otherRole.has(i) && holdsNumbers(head, i) ? [i] : [],
    );
    if (numbers.length > 1)
      throw new InputError(
        "column/ambiguous",
        `${file}: no name in the header says which column holds the readings, and ${numbers.length} hold numbers: ${listed(numbers.map((i) => head.header[i]!))}. Say which with --column value=NAME.`,
        {place: {file, row: 1}},
      );
    return numbers;
  }
}

const isLength = (role: string): boolean => ["chainage", "x", "y", "elevation", "clearance", "ground"].includes(role);

/** Every cell of the sample a number or "no value", and one of them a number. */
function holdsNumbers(head: TableHead, column: number): boolean {
  let some = false;
  for (const cells of head.sample) {
    const value = parseCell(cells[column]!, head.decimal);
    if (value === undefined) return false;
    if (!Number.isNaN(value)) some = true;
  }
  return some;
}

/** The role of a choice, for those that must be numbers. */
export const isText = (role: string): boolean => role === ("line" satisfies Role) || role === ("time" satisfies Role);
