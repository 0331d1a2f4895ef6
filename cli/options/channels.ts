/** Options that say what each channel reads, and the direction of the Earth's field that some need. */
import type {ChannelSettings} from "../../lib/acquisition/settings.ts";
import {InputError} from "../../lib/errors.ts";
import {observableNamed} from "../../lib/potential/catalogue.ts";
import {unitFor} from "../../lib/quantities.ts";
import type {FieldDirectionSetting} from "../../lib/survey/field-direction.ts";
import {type Asked, allOf, oneOf} from "./entry.ts";
import {ANY_NUMBER, type Need, numberFor, POSITIVE} from "./number.ts";

export const CHANNEL_PATTERN = "value(?:\\.\\d+)?=.+";
export const INCLINATION: Need = {...ANY_NUMBER, words: "degrees from -90 to 90", example: "65", least: -90, most: 90};
export const DECLINATION: Need = {
  ...ANY_NUMBER,
  words: "degrees from -360 to 360",
  example: "3.5",
  least: -360,
  most: 360,
};
export const NOISE: Need = {...POSITIVE, words: "a standard deviation above 0, or the word record", example: "0.02"};

/** What an option says of each channel: KIND alone is for `value`, `value.2=KIND` for another. */
function byChannel(asked: Asked, name: string): ReadonlyMap<string, string> {
  const found = new Map<string, string>();
  for (const text of allOf(asked, name)) {
    const [, role = "value", rest = text] = /^(value(?:\.\d+)?)=(.*)$/.exec(text) ?? [];
    const earlier = found.get(role);
    if (earlier !== undefined && earlier !== rest)
      throw new InputError(
        "option/given-twice",
        `--${name} was given as "${earlier}" and as "${rest}" for ${role}, but takes one value a channel. Keep the one you mean.`,
      );
    found.set(role, rest);
  }
  return found;
}

/** The observable of the channel `value`, as it was asked. */
export const observableAsked = (asked: Asked): string | undefined => byChannel(asked, "observable").get("value");

/** Every channel, `value` first; none where no observable was named. */
export function channelsFrom(asked: Asked): readonly ChannelSettings[] {
  const kinds = byChannel(asked, "observable");
  const units = byChannel(asked, "unit");
  const noises = byChannel(asked, "noise");
  for (const [name, given] of [
    ["unit", units],
    ["noise", noises],
  ] as const)
    for (const role of given.keys())
      if (role !== "value" && !kinds.has(role))
        throw new InputError(
          "option/no-channel",
          `--${name} ${role}=${given.get(role)} belongs to a channel without an observable. Give --observable ${role}=KIND as well.`,
        );
  const noiseOf = (role: string): number | "record" | undefined => {
    const text = noises.get(role);
    return text === undefined || text === "record" ? text : numberFor("--noise", text, NOISE);
  };
  // Checked even where no observable was named.
  noiseOf("value");
  const roles = [...kinds.keys()].sort((a, b) => a.length - b.length || (a < b ? -1 : 1));
  const channels = roles.map((role): ChannelSettings => {
    const kind = observableNamed(kinds.get(role)!);
    const unit = units.get(role);
    if (unit !== undefined) unitFor(unit, kind.dimension);
    return {role, observable: kind.name, unit, noise: noiseOf(role)};
  });
  const method = channels[0] && observableNamed(channels[0].observable).source.method;
  for (const {role, observable} of channels)
    if (observableNamed(observable).source.method !== method)
      throw new InputError(
        "option/two-methods",
        `--observable ${role}=${observable} and the first channel measure different kinds of source. Gravity and magnetic readings take a run each.`,
      );
  return channels;
}

/** @throws {InputError} `option/direction`, `direction/date` is found when the field is asked for */
export function fieldDirectionFrom(asked: Asked): FieldDirectionSetting | undefined {
  const angle = (name: string, need: Need): number | undefined => {
    const text = oneOf(asked, name);
    return text === undefined ? undefined : numberFor(`--${name}`, text, need);
  };
  const inclination = angle("inclination", INCLINATION);
  const declination = angle("declination", DECLINATION);
  const date = oneOf(asked, "date");
  if (date !== undefined) {
    if (inclination !== undefined || declination !== undefined)
      throw new InputError(
        "option/direction",
        "--date and --inclination or --declination both say the direction of the field. Keep the one you mean.",
      );
    return {kind: "date", date};
  }
  if (inclination === undefined && declination === undefined) return undefined;
  if (inclination === undefined || declination === undefined)
    throw new InputError(
      "option/direction",
      "--inclination and --declination belong together, and one is missing. Give both, or --date.",
    );
  return {kind: "angles", inclination, declination};
}
