/**
 * What a value may be, as data: the job file reads its values by it and the schema spells it out.
 * Limits that need more than one option are checked where options become settings.
 */
import type {TomlValue} from "../../lib/formats/toml.ts";
import type {Need} from "./number.ts";

/** Any of the ways given will do; with none of them, any text. */
export interface Form {
  readonly number?: Need;
  readonly words?: readonly string[];
  /** Source of a regular expression that the whole text matches. */
  readonly pattern?: string;
  /** `A:B` as text, or a list of two numbers. */
  readonly interval?: true;
  /** The path of a GeoJSON file, told by its ending. */
  readonly mapFile?: true;
  /** `NAME=VALUE` as text, or a table of names and values of this form. */
  readonly pairs?: {readonly names?: readonly string[]; readonly of: Form};
  /** The path of a file or folder; in a job file from the folder of that file. */
  readonly path?: true;
}

/** What was found in place of a value, below which names of a table, and what was needed. */
export interface Mismatch {
  readonly below: readonly string[];
  readonly found: TomlValue;
  readonly needed: string;
}

const isNumber = (value: TomlValue): value is number => typeof value === "number";
const isList = (value: TomlValue): value is readonly TomlValue[] => Array.isArray(value);
const isTable = (value: TomlValue): value is {readonly [name: string]: TomlValue} =>
  typeof value === "object" && !isList(value);
const isPair = (value: TomlValue): value is readonly number[] =>
  isList(value) && value.length === 2 && value.every(isNumber);

/** One value as text; undefined where the form has no room for it. */
function textOf(value: TomlValue, form: Form): string | undefined {
  if (typeof value === "string") return value === "" ? undefined : value;
  if (isNumber(value)) return form.number === undefined ? undefined : `${value}`;
  return form.interval && isPair(value) ? value.join(":") : undefined;
}

/**
 * A value of a job file as the texts that stand for it on a command line.
 * @param repeated whether a list of values will do
 */
export function textsOf(value: TomlValue, form: Form, repeated: boolean): readonly string[] | Mismatch {
  if (form.pairs && isTable(value)) {
    const texts: string[] = [];
    for (const [name, part] of Object.entries(value)) {
      const text = textOf(part, form.pairs.of);
      if (text === undefined) return {below: [name], found: part, needed: neededFor(form.pairs.of, false)};
      texts.push(`${name}=${text}`);
    }
    if (texts.length > 0) return texts;
  }
  const list = repeated && isList(value) && !(form.interval && isPair(value)) ? value : [value];
  const texts = list.map((part) => textOf(part, form));
  const known = texts.filter((text) => text !== undefined);
  if (known.length === texts.length && known.length > 0) return known;
  const found = list.length === 0 ? value : list[texts.indexOf(undefined)]!;
  return {below: [], found, needed: neededFor(form, repeated)};
}

/** What would do, in words. */
function neededFor(form: Form, repeated: boolean): string {
  const ways: string[] = [];
  if (form.number) ways.push(`${form.number.words} (${form.number.example})`);
  if (form.words) ways.push(`one of ${form.words.map((word) => `"${word}"`).join(", ")}`);
  if (form.interval) ways.push('an interval ("400:900" or [400, 900])');
  if (form.pairs) ways.push("a table of NAME = VALUE");
  if (form.mapFile) ways.push('a GeoJSON file ("zones.geojson")');
  if (form.pattern || ways.length === 0) ways.push("a text in quotes");
  return `${ways.join(" or ")}${repeated ? ", or a list of such" : ""}`;
}

/** A value for a message. */
export function foundText(value: TomlValue): string {
  if (value === "") return "an empty text";
  if (isList(value)) return value.length === 0 ? "an empty list" : "a list";
  if (isTable(value)) return Object.keys(value).length === 0 ? "an empty table" : "a table";
  return typeof value === "string" ? "a text" : `${value}`;
}
