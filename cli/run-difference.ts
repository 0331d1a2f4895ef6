/** The first thing in which the run of a folder and the one that is asked differ, in the words of the options. */
import {shown} from "./printable.ts";

/** The parts of a record that tell one run from another. */
export interface RunIdentity {
  readonly settings: unknown;
  readonly inputs: unknown;
}

type Fields = Readonly<Record<string, unknown>>;

/** Settings whose option is not simply their name with dashes. */
const OPTION: Readonly<Record<string, string>> = {
  columns: "--column",
  levels: "--level",
  levelQuantity: "--level-observable",
  strips: "--strip",
  fieldDirection: "--inclination, --declination or --date",
};

/** What a section of the settings is about. */
const SECTION: Readonly<Record<string, string>> = {
  acquisition: "what was measured",
  model: "what is assumed",
  wanted: "what is wanted",
  crossings: "how readings are compared",
};

/** @returns a clause without a full stop; undefined where the runs do not differ */
export function runDifference(there: RunIdentity, here: RunIdentity): string | undefined {
  if (same(there.settings, here.settings)) return same(there.inputs, here.inputs) ? undefined : inputs(there, here);
  const [before, now] = [fieldsOf(there.settings), fieldsOf(here.settings)];
  for (const name of namesOf(before, now)) {
    if (same(before[name], now[name])) continue;
    const words = SECTION[name];
    return words === undefined ? setting(name, before[name], now[name]) : section(words, before[name], now[name]);
  }
  return "other settings";
}

/** The first option of a section; the section in words where a record of another form has no options to name. */
function section(words: string, there: unknown, here: unknown): string {
  const [before, now] = [optionsOf(there), optionsOf(here)];
  const name = namesOf(before, now).find((key) => !same(before[key], now[key]));
  return name === undefined ? `${words} is not the same` : setting(name, before[name], now[name]);
}

function setting(name: string, there: unknown, here: unknown): string {
  const option = OPTION[name] ?? `--${name.replaceAll(/[A-Z]/g, (letter) => `-${letter.toLowerCase()}`)}`;
  // A list says one thing by each of its entries: those that both have are left out.
  if (Array.isArray(there) && Array.isArray(here)) {
    const only = (those: readonly unknown[], others: readonly unknown[]): readonly unknown[] =>
      those.filter((one) => !others.some((other) => same(one, other)));
    const [gone, come] = [only(there, here), only(here, there)];
    const drawn = [...gone, ...come].some((one) => fieldsOf(one)["area"] !== undefined);
    const own = drawn && name === "strips" ? "--strips" : option;
    // Of a list with more entries than these, "was X and is Y" would be untrue.
    if (gone.length > 0)
      return `${own} ${valueText(gone)} was given and ${come.length > 0 ? `is now ${valueText(come)}` : "is not any more"}`;
    if (come.length > 0) return `${own} ${valueText(come)} was not given and is now`;
  }
  return `${option} was ${valueText(there)} and is ${valueText(here)}`;
}

/** A section by option: those of the channel of readings stand beside the others. */
function optionsOf(part: unknown): Fields {
  const {channels, ...fields} = fieldsOf(part);
  const {role: _role, ...channel} = fieldsOf(Array.isArray(channels) ? channels[0] : undefined);
  return {...fields, ...channel};
}

function valueText(value: unknown): string {
  const texts = (Array.isArray(value) ? value : [value]).map(asTyped).filter((text) => text !== "");
  return texts.length === 0 ? "not given" : shown(texts.join(", "));
}

/** A value as an option takes it, from the form in which the record keeps it. */
function asTyped(value: unknown): string {
  if (value === null || value === undefined) return "";
  if (typeof value !== "object") return String(value);
  const {kind, elevation, depth, height, name, group, from, to, area, ...others} = value as Fields;
  if (kind === "elevation") return `${elevation}`;
  if (kind === "depth") return `depth-${depth}`;
  if (kind === "above-boundary") return `${height}`;
  if (kind === "above-ground") return `ground+${height}`;
  const named = typeof name === "string" ? `${name}=` : "";
  if (area !== undefined) return `${area}`;
  if (from !== undefined) return `${named}${typeof group === "string" ? `${group}/` : ""}${from}:${to}`;
  return Object.entries(others)
    .map(([key, entry]) => `${key}=${entry}`)
    .join(", ");
}

function inputs(there: RunIdentity, here: RunIdentity): string {
  const [before, now] = [digestsOf(there.inputs), digestsOf(here.inputs)];
  const names = (digests: readonly Fields[]): string => shown(digests.map(({file}) => String(file)).join(", "));
  if (names(before) !== names(now)) return `it was made from ${names(before)}, and this one is from ${names(now)}`;
  const changed = now.find((digest, i) => !same(digest, before[i]));
  return `${shown(String(changed?.["file"]))} has changed since`;
}

const digestsOf = (inputs: unknown): readonly Fields[] => (Array.isArray(inputs) ? inputs.map(fieldsOf) : []);
const same = (one: unknown, other: unknown): boolean => JSON.stringify(one) === JSON.stringify(other);
const namesOf = (one: Fields, other: Fields): readonly string[] => [
  ...new Set([...Object.keys(one), ...Object.keys(other)]),
];
const fieldsOf = (value: unknown): Fields =>
  typeof value === "object" && value !== null && !Array.isArray(value) ? (value as Fields) : {};
