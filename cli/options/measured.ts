/** Options that say what was measured, and how they become settings. */

import {nearestName} from "../../lib/acquisition/nearest-name.ts";
import {type AcquisitionSettings, type ChannelSettings, ROLES} from "../../lib/acquisition/settings.ts";
import {InputError} from "../../lib/errors.ts";
import {OBSERVABLES, observableNamed} from "../../lib/potential/catalogue.ts";
import {UNITS, unitFor} from "../../lib/quantities.ts";
import {shown} from "../printable.ts";
import {type Asked, allOf, type OptionGroup, oneOf} from "./entry.ts";
import {ANY_NUMBER, NOT_NEGATIVE, numberFor, POSITIVE} from "./number.ts";

const observables = OBSERVABLES.map(({name, summary}) => `${name}: ${summary}`).join("; ");
const units = OBSERVABLES.map(
  ({name, dimension}) =>
    `${name}: ${UNITS.filter((unit) => unit.dimension === dimension)
      .map((unit) => unit.symbol)
      .join(" ")}`,
).join("; ");

export const MEASURED: OptionGroup = {
  heading: "What was measured",
  entries: [
    {
      name: "column",
      value: "ROLE=NAME",
      repeated: true,
      help: `column NAME of the file holds ROLE, one of ${ROLES.join(", ")}. elevation: sensor above the height datum; clearance: sensor above the ground; ground: elevation of the ground. Usual headers are recognised without it, and the choice is printed`,
    },
    {name: "clearance", value: "H", help: "the sensor flew a constant H metres above the ground"},
    {name: "elevation", value: "Z", help: "the sensor was at a constant elevation of Z metres"},
    {
      name: "sensor-offset",
      value: "DZ",
      help: "metres added to elevation or clearance; negative for a sensor slung below the point that was recorded",
    },
    {name: "elevation-datum", value: "NAME", help: "height datum of the elevation, any name"},
    {
      name: "ground-datum",
      value: "NAME",
      help: "height datum of the ground; one that differs from the elevation's needs --geoid-offset",
    },
    {name: "geoid-offset", value: "N", help: "metres added to the ground to bring it to the datum of the elevation"},
    {name: "crs", value: "EPSG:n", help: "coordinate system of the coordinates in the file"},
    {
      name: "out-crs",
      value: "EPSG:n",
      help: "coordinate system of the x, y that are delivered; default: that of the file",
    },
    {
      name: "split",
      value: "column|auto",
      help: "how a table falls into lines: by its line column (default where there is one) or by heading, speed and gaps",
    },
    {name: "profiles", value: "rows|columns", help: "which way the lines of a grid run; default rows"},
    {name: "observable", value: "KIND", help: `what the values are, as anomalies. ${observables}`},
    {name: "unit", value: "U", help: `unit of the values and of --noise; default: the first named. ${units}`},
    {
      name: "noise",
      value: "S|record",
      help: "standard deviation of the noise; record: from fourth differences of the line itself, the default for lines, not possible for a grid",
    },
    {name: "processing", value: "TEXT", help: "what was already done to the data; carried into record and report"},
  ],
};

function columnsFrom(asked: Asked): ReadonlyMap<string, string> {
  const columns = new Map<string, string>();
  for (const text of allOf(asked, "column")) {
    const cut = text.indexOf("=");
    const role = text.slice(0, cut);
    const name = text.slice(cut + 1);
    if (cut < 1 || name === "")
      throw new InputError(
        "option/not-a-pair",
        `--column ${shown(text)} is not ROLE=NAME. Give a role and the header of its column, for example --column value=residual.`,
      );
    if (!(ROLES as readonly string[]).includes(role))
      throw new InputError(
        "option/unknown-role",
        `--column ${shown(text)} names no role known here. Nearest is ${nearestName(role, ROLES)}; the roles are ${ROLES.join(", ")}.`,
      );
    const earlier = columns.get(role);
    if (earlier !== undefined && earlier !== name)
      throw new InputError(
        "option/two-columns",
        `--column gives two columns for the role ${role}: ${shown(earlier)} and ${shown(name)}. Keep the one you mean.`,
      );
    columns.set(role, name);
  }
  return columns;
}

/** One of the words that an option knows. */
function wordFor<W extends string>(asked: Asked, name: string, words: readonly W[]): W | undefined {
  const text = oneOf(asked, name);
  if (text === undefined) return undefined;
  const found = words.find((word) => word === text);
  if (found === undefined)
    throw new InputError("option/unknown-word", `--${name} ${shown(text)} is not known. Give ${words.join(" or ")}.`);
  return found;
}

/** The channel `value`; undefined where no observable was named. */
function channelFrom(asked: Asked): ChannelSettings | undefined {
  const observable = oneOf(asked, "observable");
  const unit = oneOf(asked, "unit");
  const noise = oneOf(asked, "noise");
  if (observable === undefined) return undefined;
  if (observable.includes("="))
    throw new InputError(
      "option/one-channel",
      `--observable ${shown(observable)} names a channel, but one channel of readings is used. Give the kind alone, for example --observable ${OBSERVABLES[0]!.name}.`,
    );
  const kind = observableNamed(observable);
  if (unit !== undefined) unitFor(unit, kind.dimension);
  return {
    role: "value",
    observable,
    unit,
    noise:
      noise === undefined || noise === "record"
        ? noise
        : numberFor("--noise", noise, {
            ...POSITIVE,
            words: "a standard deviation above 0, or the word record",
            example: "0.02",
          }),
  };
}

/**
 * @throws {InputError} `option/…`, `observable/unknown`, `unit/…`
 */
export function acquisitionFrom(asked: Asked): AcquisitionSettings {
  const number = (name: string, need = ANY_NUMBER): number | undefined => {
    const text = oneOf(asked, name);
    return text === undefined ? undefined : numberFor(`--${name}`, text, need);
  };
  const channel = channelFrom(asked);
  return {
    columns: columnsFrom(asked),
    clearance: number("clearance", NOT_NEGATIVE),
    elevation: number("elevation"),
    sensorOffset: number("sensor-offset", {...ANY_NUMBER, example: "-3"}) ?? 0,
    elevationDatum: oneOf(asked, "elevation-datum"),
    groundDatum: oneOf(asked, "ground-datum"),
    geoidOffset: number("geoid-offset"),
    crs: oneOf(asked, "crs"),
    outCrs: oneOf(asked, "out-crs"),
    split: wordFor(asked, "split", ["column", "auto"]),
    channels: channel === undefined ? [] : [channel],
    profiles: wordFor(asked, "profiles", ["rows", "columns"]) ?? "rows",
  };
}
