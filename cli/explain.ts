/** Every setting in force, where it came from, and why its default is what it is. Nothing is run. */
import type {Host} from "./nouns.ts";
import {modelFrom} from "./options/assumed.ts";
import {batchFrom} from "./options/batch.ts";
import {observableAsked} from "./options/channels.ts";
import {JOB_ENTRIES} from "./options/continue-options.ts";
import {type Asked, allOf, type OptionEntry, oneOf} from "./options/entry.ts";
import {acquisitionFrom} from "./options/measured.ts";
import {settingsFrom} from "./options/settings.ts";
import {wantedFrom} from "./options/wanted.ts";
import {paragraph} from "./paragraph.ts";
import {printable} from "./printable.ts";
import {type Request, settled} from "./request.ts";

interface Explained {
  readonly name: string;
  /** As the option takes it; null where it must be given and was not. */
  readonly value: string | boolean | readonly string[] | null;
  readonly from: "default" | "file" | "option";
  /** Of the key in the job file. */
  readonly row: number | undefined;
  /** Null where there is none. */
  readonly default: string | boolean | null;
  readonly why: string;
}

/**
 * @returns the exit status
 * @throws {InputError} where settings are refused, as a run would; what is missing is told and not refused
 */
export function explain(request: Request, host: Host): number {
  settled(request, refuseBadSettings);
  const settings = JOB_ENTRIES.map((entry) => explained(entry, request));
  const job = request.job?.name ?? null;
  host.out.write(request.form.json ? `${JSON.stringify({job, settings}, undefined, 2)}\n` : explanation(job, settings));
  return 0;
}

function refuseBadSettings(asked: Asked): void {
  batchFrom(asked);
  if (observableAsked(asked) !== undefined) settingsFrom(asked);
  else {
    // Without an observable the bound alone has no unit to be read in.
    acquisitionFrom(asked);
    modelFrom(asked);
    wantedFrom(asked);
  }
  oneOf(asked, "out");
}

function explained(entry: OptionEntry, {asked, typed, job}: Request): Explained {
  const {name, value: placeholder, repeated, default: fallback, required} = entry;
  const from = typed.has(name) ? "option" : job?.keys.has(name) ? "file" : "default";
  const texts = allOf(asked, name);
  const standing =
    placeholder === undefined ? false : fallback === undefined ? null : (fallback.inForce?.(asked) ?? fallback.value);
  const value = placeholder === undefined ? asked.has(name) : repeated ? texts : texts[0]!;
  return {
    name,
    value: from === "default" ? standing : value,
    from,
    row: from === "file" ? job?.placeOf(name).row : undefined,
    default: standing,
    why: required ?? fallback?.reason ?? "",
  };
}

const WIDTH = 100;
const onOrOff = (value: string | boolean): string => (typeof value === "string" ? value : value ? "on" : "off");

/** A table of three columns, the last of them broken into lines. */
function explanation(job: string | null, settings: readonly Explained[]): string {
  const origins = settings.map(({from, row}) => (row === undefined ? from : `${from}, row ${row}`));
  const widest = (texts: readonly string[]): number => Math.max(...texts.map((text) => text.length)) + 2;
  const [first, second] = [widest(settings.map(({name}) => name)), widest(origins)];
  const indent = " ".repeat(first + second);
  const row = (name: string, origin: string, text: string): string =>
    paragraph(name.padEnd(first) + origin.padEnd(second), printable(text), WIDTH, indent);
  const rule = (width: number): string => "-".repeat(width - 2);
  const parts = [
    job === null ? "" : `Settings in the file: ${printable(job, 60)}\n\n`,
    row("setting", "from", "value, and why the default is what it is"),
    row(rule(first), rule(second), rule(WIDTH - first - second + 2)),
  ];
  settings.forEach(({name, value, from, default: standing, why}, i) => {
    const values = value === null ? ["must be given"] : Array.isArray(value) ? value : [value as string | boolean];
    values.forEach((one, n) => {
      parts.push(row(n === 0 ? name : "", n === 0 ? origins[i]! : "", onOrOff(one)));
    });
    const instead =
      standing === null ? "no default: " : from === "default" ? "why: " : `default: ${onOrOff(standing)}; why: `;
    parts.push(row("", "", `(${instead}${why})`));
  });
  return parts.join("");
}
