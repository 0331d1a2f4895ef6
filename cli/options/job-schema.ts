/** The JSON Schema (draft 2020-12) of a job file, from the entries that the command line has. */
import type {OptionEntry} from "./entry.ts";
import type {Form} from "./form.ts";
import {INTERVAL_PATTERN} from "./interval-text.ts";
import {MAP_PATH_PATTERN} from "./map-file.ts";
import {type Need, NUMBER_PATTERN} from "./number.ts";

type Schema = Readonly<Record<string, unknown>>;

/** @returns plain data, in the order of the entries */
export function jobSchema(entries: readonly OptionEntry[]): Schema {
  return {
    $schema: "https://json-schema.org/draft/2020-12/schema",
    title: "Job file of groundward continue",
    description:
      "Keys are the names of options, without dashes in front, and survey, the files to read. Whether options fit each other is told by groundward continue --explain.",
    type: "object",
    properties: Object.fromEntries(
      entries.map((entry) => [entry.name, {description: description(entry), ...valueSchema(entry)}]),
    ),
    additionalProperties: false,
  };
}

function description({help, default: fallback, required}: OptionEntry): string {
  if (required !== undefined) return `${help}. Has no default: ${required}.`;
  return fallback === undefined ? `${help}.` : `${help}. Default: ${fallback.value}. Why: ${fallback.reason}.`;
}

function valueSchema({value, repeated, form = {}}: OptionEntry): Schema {
  if (value === undefined) return {type: "boolean"};
  const ways = waysOf(form);
  return anyOf(repeated ? [...ways, {type: "array", items: anyOf(listed(form, ways)), minItems: 1}] : ways);
}

/** Tables of names and values stand alone, not in a list. */
const listed = ({pairs}: Form, ways: readonly Schema[]): readonly Schema[] =>
  pairs === undefined ? ways : ways.filter(({type}) => type === "string");

const anyOf = (ways: readonly Schema[]): Schema => (ways.length === 1 ? ways[0]! : {anyOf: ways});
const text = (pattern: string): Schema => ({type: "string", pattern: `^(${pattern})$`});

/** One schema for each way in which a value can be given. */
function waysOf({number, words, pattern, interval, mapFile, pairs}: Form): readonly Schema[] {
  const ways: Schema[] = [];
  if (number !== undefined) ways.push({type: "number", ...limits(number)}, text(NUMBER_PATTERN));
  if (words !== undefined) ways.push({enum: words});
  if (pattern !== undefined) ways.push(text(pattern));
  if (interval) ways.push(text(INTERVAL_PATTERN), {type: "array", items: {type: "number"}, minItems: 2, maxItems: 2});
  if (mapFile) ways.push(text(MAP_PATH_PATTERN));
  if (pairs !== undefined) {
    const name = pairs.names === undefined ? ".*\\S.*" : pairs.names.join("|");
    ways.push(
      {
        type: "object",
        propertyNames: {pattern: `^(${name})$`},
        additionalProperties: anyOf(waysOf(pairs.of)),
        minProperties: 1,
      },
      text(`(${name})=(${pairs.of.interval ? INTERVAL_PATTERN : ".+"})`),
    );
  }
  return ways.length > 0 ? ways : [{type: "string", minLength: 1}];
}

function limits({above, least, below, most, whole}: Need): Schema {
  const all = {exclusiveMinimum: above, minimum: least, exclusiveMaximum: below, maximum: most};
  return {
    ...Object.fromEntries(Object.entries(all).filter(([, limit]) => limit !== undefined)),
    ...(whole ? {multipleOf: 1} : {}),
  };
}
