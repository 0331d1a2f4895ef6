/** Options of `groundward crossings`: those of a continuation that lead to a source, and how readings are compared. */
import {InputError} from "../../lib/errors.ts";
import {ASSUMED} from "./assumed.ts";
import {JOB} from "./continue-options.ts";
import {type Asked, isOn, type OptionGroup, oneOf} from "./entry.ts";
import {MEASURED} from "./measured.ts";
import {ANY_NUMBER, type Need, numberFor} from "./number.ts";
import {PRINTED, WRITTEN} from "./output.ts";

const LEVEL: Need = {...ANY_NUMBER, words: "a height in metres", example: "350"};

const COMPARED: OptionGroup = {
  heading: "How readings are compared",
  entries: [
    {
      name: "level",
      value: "Z",
      form: {number: LEVEL},
      commandLineOnly: true,
      help: "common level that all readings are carried to: elevation in metres, or metres above the ground where only the clearance is known",
      default: {
        value: "of each crossing the higher of its two sensors",
        reason: "nothing is then carried downward, which is what magnifies noise",
      },
    },
    {
      name: "as-measured",
      commandLineOnly: true,
      help: "compare at the heights flown only; no source is estimated, so that thousands of lines take seconds",
      default: {value: "off", reason: "lines at different heights differ where nothing is wrong with them"},
    },
  ],
};

const GOES: OptionGroup = {
  heading: WRITTEN.heading,
  entries: [
    {
      name: "out",
      value: "DIR",
      form: {path: true},
      commandLineOnly: true,
      help: "folder that receives crossings.csv, crossing_lines.csv, crossings.geojson and the record; made where it is missing",
      default: {value: "no files", reason: "the tables that are printed may be all that is wanted"},
    },
    ...WRITTEN.entries.filter(({name}) => name === "replace"),
    ...PRINTED.entries,
  ],
};

export const CROSSINGS_OPTIONS: readonly OptionGroup[] = [MEASURED, COMPARED, ASSUMED, GOES, JOB];

/** Names of options that say what was measured and assumed. A job file is written for `continue`: the rest of it is not meant for this. */
const SHARED: ReadonlySet<string> = new Set(
  [...MEASURED.entries, ...ASSUMED.entries, ...PRINTED.entries, {name: "survey"}].map(({name}) => name),
);

/** What a command line over a job file asks of the lines and their sources. */
export const sharedOptions = (asked: Asked): Asked => new Map([...asked].filter(([name]) => SHARED.has(name)));

export interface Comparison {
  /** m; undefined: of each crossing the higher of its two sensors. */
  readonly level: number | undefined;
  readonly asMeasured: boolean;
}

/**
 * @param typed the command line alone
 * @throws {InputError} `option/…`
 */
export function comparisonFrom(typed: Asked): Comparison {
  const text = oneOf(typed, "level");
  const level = text === undefined ? undefined : numberFor("--level", text, LEVEL);
  const asMeasured = isOn(typed, "as-measured");
  if (asMeasured && level !== undefined)
    throw new InputError(
      "option/level-unused",
      `--level ${text} asks for readings on a common level, and --as-measured for none. Leave one of the two out.`,
    );
  return {level, asMeasured};
}
