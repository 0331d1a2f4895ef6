/** Entries → options of a command line, and the command line → what was asked. */
import {type Command, Option} from "commander";
import {InputError} from "../../lib/errors.ts";
import {type Asked, helpOf, type OptionGroup} from "./entry.ts";

/** Puts the entries on `command`, under their headings, in their order. */
export function declare(command: Command, groups: readonly OptionGroup[]): Command {
  for (const {heading, entries} of groups)
    for (const entry of entries) {
      const {name, value, repeated} = entry;
      const help = helpOf(entry);
      const option = new Option(
        value === undefined ? `--${name}` : `--${name} <${value}>`,
        repeated ? `${help}. May be repeated` : help,
      ).helpGroup(`${heading}:`);
      if (value !== undefined)
        option.argParser((text: string, earlier?: readonly string[]) => [...(earlier ?? []), text]);
      command.addOption(option);
    }
  return command;
}

/**
 * What the parsed `command` was asked.
 * @throws {InputError} `option/missing-value` where the next option stands in place of a value
 */
export function askedOf(command: Command): Asked {
  const asked = new Map<string, readonly string[]>();
  for (const option of command.options) {
    const name = option.long!.slice(2);
    const value: unknown = command.getOptionValue(option.attributeName());
    if (value === undefined) continue;
    const texts = Array.isArray(value) ? (value as readonly string[]) : [];
    for (const text of texts)
      if (text === "" || command.options.some((other) => text === other.long || text.startsWith(`${other.long}=`)))
        throw new InputError(
          "option/missing-value",
          `--${name} has no value${text === "" ? "" : `: ${text} follows it`}. Write it as ${option.flags}.`,
        );
    asked.set(name, texts);
  }
  return asked;
}
