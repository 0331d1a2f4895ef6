/**
 * An option as data: help texts, the command line, the job file and its schema, and what `--explain` tells read
 * the same entries. What was asked is kept as text under the option's name until one function per stage turns
 * it into settings.
 */
import {InputError} from "../../lib/errors.ts";
import type {Form} from "./form.ts";

export interface OptionEntry {
  /** Without dashes. */
  readonly name: string;
  /** Placeholder of the value; absent for a switch. */
  readonly value?: string;
  /** Whether it may be given several times. */
  readonly repeated?: true;
  readonly help: string;
  /** What a value may be; any text where absent. */
  readonly form?: Form;
  /** Of a switch: off. */
  readonly default?: Default;
  /** Why there is no default: it must be given. */
  readonly required?: string;
  /** Says what to do with a job file, so cannot stand in one. */
  readonly commandLineOnly?: true;
}

/** What is in force where an option is not given. */
interface Default {
  /** As the option would take it, or in words where it depends on the survey. */
  readonly value: string;
  readonly reason: string;
  /** The value in words, once other options are known; undefined where they do not settle it. */
  inForce?(asked: Asked): string | undefined;
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

/** The help of an option with its default. */
export const helpOf = ({help, value, default: fallback, required}: OptionEntry): string =>
  required !== undefined
    ? `${help} (required)`
    : fallback === undefined || value === undefined
      ? help
      : `${help}; default: ${fallback.value}`;
