/** A job file: options of `continue` and the files of the survey, as keys of TOML. */
import {nearestName} from "../lib/acquisition/nearest-name.ts";
import {InputError, type Place} from "../lib/errors.ts";
import type {TomlValue} from "../lib/formats/toml.ts";
import type {FileDigest} from "../lib/products/record.ts";
import {digestOf, withInputs} from "./inputs.ts";
import type {Host} from "./nouns.ts";
import {CONTINUE_OPTIONS, JOB_ENTRIES} from "./options/continue-options.ts";
import type {Asked, OptionEntry} from "./options/entry.ts";
import {foundText, textsOf} from "./options/form.ts";
import {isMapPath} from "./options/map-file.ts";
import {shown} from "./printable.ts";

export interface Job {
  /** Without folders. */
  readonly name: string;
  /** As a command line would have asked it, `survey` among the names; paths start from where the program runs. */
  readonly asked: Asked;
  /** Every key of the file, a switch that is off among them. */
  readonly keys: ReadonlySet<string>;
  readonly digest: FileDigest;
  placeOf(key: string): Place;
}

/**
 * @param path as the command line names it
 * @throws {InputError} `toml/…`; `job/unknown-key`, `job/wrong-type`, `job/command-line-only` with file, row and column
 */
export async function readJob(host: Host, path: string): Promise<Job> {
  // Loaded here: a run without a job file needs no parser.
  const {readToml} = await import("../lib/formats/toml.ts");
  return withInputs(host, [path], async ([file]) => {
    const {values, placeOf} = await readToml(file!);
    const asked = new Map<string, readonly string[]>();
    for (const [key, value] of Object.entries(values)) {
      const entry = JOB_ENTRIES.find(({name}) => name === key);
      if (entry === undefined) throw unknownKey(key, value, placeOf([key]));
      const texts = entry.value === undefined ? switchFrom(entry, value, placeOf) : textsFrom(entry, value, placeOf);
      if (texts !== undefined)
        asked.set(
          key,
          texts.map((text) => (isPath(entry, text) ? host.beside(path, text) : text)),
        );
    }
    return {
      name: file!.name,
      asked,
      keys: new Set(Object.keys(values)),
      digest: await digestOf(file!),
      placeOf: (key) => placeOf([key]),
    };
  });
}

const isPath = ({form}: OptionEntry, text: string): boolean =>
  form?.path === true || (form?.mapFile === true && isMapPath(text));

const KEYS = JOB_ENTRIES.map(({name}) => name);
type PlaceOf = (path: readonly string[]) => Place;

function unknownKey(key: string, value: TomlValue, place: Place): InputError {
  if (CONTINUE_OPTIONS.some(({entries}) => entries.some(({name}) => name === key)))
    return new InputError(
      "job/command-line-only",
      `${shown(key)} cannot stand in a job file. Give it on the command line, as --${key}.`,
      {place},
    );
  const bare = key.replace(/^-+/, "");
  const nearest = nearestName(bare, KEYS);
  const cure =
    typeof value === "object" && !Array.isArray(value)
      ? "Keys stand at the top of the file, in no section."
      : "Keys are the names of the options of groundward continue, without dashes in front.";
  return new InputError("job/unknown-key", `${shown(key)} is no key here. Nearest is ${nearest}. ${cure}`, {place});
}

/** Undefined for a switch that is off. */
function switchFrom({name}: OptionEntry, value: TomlValue, placeOf: PlaceOf): readonly string[] | undefined {
  if (typeof value !== "boolean") throw wrongType([name], value, "true or false", placeOf);
  return value ? [] : undefined;
}

function textsFrom({name, form = {}, repeated}: OptionEntry, value: TomlValue, placeOf: PlaceOf): readonly string[] {
  const texts = textsOf(value, form, repeated === true);
  if (!("below" in texts)) return texts;
  throw wrongType([name, ...texts.below], texts.found, texts.needed, placeOf);
}

function wrongType(path: readonly string[], value: TomlValue, needed: string, placeOf: PlaceOf): InputError {
  const inner = path.length > 1 && KEYS.includes(path.at(-1)!) ? path.at(-1)! : undefined;
  const cure =
    inner === undefined
      ? ""
      : ` If the option ${inner} is meant, move it above the first section: what follows [${path[0]}] belongs to it.`;
  return new InputError(
    "job/wrong-type",
    `${shown(path.join("."))} is ${foundText(value)}; ${needed} was needed.${cure}`,
    {place: placeOf(path)},
  );
}
