/**
 * An option as data: help texts, the command line and the record of a run read the same entries.
 * What was asked is kept as text under the option's name until one function per stage turns it into settings.
 */
import {InputError} from "../../lib/errors.ts";

export interface OptionEntry {
  /** Without dashes. */
  readonly name: string;
  /** Placeholder of the value; absent for a switch. */
  readonly value?: string;
  /** Whether it may be given several times. */
  readonly repeated?: true;
  readonly help: string;
}

export interface OptionGroup {
  readonly heading: string;
  readonly entries: readonly OptionEntry[];
}

/** Option name → its values in the order given; a switch that is on holds no value. */
export type Asked = ReadonlyMap<string, readonly string[]>;

export const isOn = (asked: Asked, name: string): boolean => asked.has(name);

/** Every value of an option that may be repeated. */
export const allOf = (asked: Asked, name: string): readonly string[] => asked.get(name) ?? [];

/**
 * The one value of an option; undefined when it was not given.
 * @throws {InputError} `option/given-twice` when two values differ
 */
export function oneOf(asked: Asked, name: string): string | undefined {
  const values = allOf(asked, name);
  const second = values.find((value) => value !== values[0]);
  if (second !== undefined)
    throw new InputError(
      "option/given-twice",
      `--${name} was given as "${values[0]}" and as "${second}", but takes one value. Keep the one you mean.`,
    );
  return values[0];
}
