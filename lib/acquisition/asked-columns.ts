/** The columns that the user names for roles. */
import {InputError} from "../errors.ts";
import type {ChannelPlan} from "./channel-plan.ts";
import {nearestName} from "./nearest-name.ts";
import {type AcquisitionSettings, ROLES} from "./settings.ts";

/**
 * Role → position of the column that the user named, from zero.
 * @throws {InputError} `column/unknown-role`, `column/unknown`, `column/two-roles`
 */
export function askedColumns(
  head: {readonly name: string; readonly header: readonly string[]},
  settings: AcquisitionSettings,
  channels: readonly ChannelPlan[],
): Map<string, number> {
  const file = head.name;
  const roles: string[] = [
    ...ROLES.filter((role) => role !== "value"),
    ...channels.flatMap(({role}) => [role, ...ownHeights(role)]),
  ];
  const asked = new Map<string, number>();
  for (const [role, name] of settings.columns) {
    if (!roles.includes(role)) {
      const second = /^(value|elevation|clearance)\.\d+$/.test(role);
      const cure = role.startsWith("value.")
        ? `Say what it measures with --observable ${role}=KIND.`
        : second
          ? `It belongs to a channel that was not asked for; give --observable value${role.slice(role.indexOf("."))}=KIND.`
          : `Did you mean ${nearestName(role, roles)}?`;
      throw new InputError(
        "column/unknown-role",
        `"${role}" in --column ${role}=${name} is no role of this survey; the roles are ${roles.join(", ")}. ${cure}`,
      );
    }
    let index = head.header.indexOf(name);
    if (index < 0) {
      const alike = head.header.flatMap((column, i) => (column.toLowerCase() === name.toLowerCase() ? [i] : []));
      if (alike.length === 1) index = alike[0]!;
    }
    if (index < 0)
      throw new InputError(
        "column/unknown",
        `${file} has no column "${name}", asked for as ${role}; did you mean "${shortened(nearestName(name, head.header) ?? "")}"? Columns there: ${listed(head.header)}.`,
        {place: {file, row: 1}},
      );
    for (const [other, taken] of asked)
      if (taken === index)
        throw new InputError(
          "column/two-roles",
          `${file}: column "${head.header[index]}" was asked for both as ${other} and as ${role}; a column has one role. Correct --column.`,
          {place: {file, row: 1, column: head.header[index]!}},
        );
    asked.set(role, index);
  }
  return asked;
}

/** Roles of the height of a channel's own sensor: none for the first, whose height is the stations'. */
export function ownHeights(role: string): readonly string[] {
  const number = role.slice("value".length);
  return number === "" ? [] : [`elevation${number}`, `clearance${number}`];
}

/** A message stays a message, whatever stands in the header. */
const shortened = (name: string): string => (name.length > 60 ? `${name.slice(0, 60)}…` : name);
const MOST_LISTED = 40;
/** The names of columns for a message. */
export const listed = (names: readonly string[]): string =>
  names.slice(0, MOST_LISTED).map(shortened).join(", ") +
  (names.length > MOST_LISTED ? ` and ${names.length - MOST_LISTED} more` : "");
