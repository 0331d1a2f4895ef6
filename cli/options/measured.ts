/** Options that say what was measured, and how they become settings. */

import {nearestName} from "../../lib/acquisition/nearest-name.ts";
import {DEFAULT_SAMPLING, SAMPLINGS} from "../../lib/acquisition/sampling.ts";
import {type AcquisitionSettings, ROLES} from "../../lib/acquisition/settings.ts";
import {InputError} from "../../lib/errors.ts";
import {OBSERVABLES} from "../../lib/potential/catalogue.ts";
import {DELIVERY_UNIT, UNITS} from "../../lib/quantities.ts";
import {shown} from "../printable.ts";
import {CHANNEL_PATTERN, channelsFrom, DECLINATION, INCLINATION, NOISE, observableAsked} from "./channels.ts";
import {type Asked, allOf, type OptionGroup, oneOf} from "./entry.ts";
import {isMapPath, type MapFiles, mapFileAt} from "./map-file.ts";
import {ANY_NUMBER, type Need, NOT_NEGATIVE, numberFor} from "./number.ts";

const observables = OBSERVABLES.map(({name, summary}) => `${name}: ${summary}`).join("; ");
const units = OBSERVABLES.map(
  ({name, dimension}) =>
    `${name}: ${UNITS.filter((unit) => unit.dimension === dimension)
      .map((unit) => unit.symbol)
      .join(" ")}`,
).join("; ");

const DEFAULT_OFFSET = "0";
const DEFAULT_NOISE_LENGTH = "0";
const DEFAULT_PROFILES = "rows";
const SPLITS = ["column", "auto"] as const;
const PROFILES = ["rows", "columns"] as const;
const SAMPLING_NAMES = SAMPLINGS.map(({name}) => name);
const EVERY: Need = {words: "a whole number, 1 or above", example: "10", least: 1, whole: true};
const OFFSET: Need = {...ANY_NUMBER, example: "-3"};

const NO_DATUM = {value: "not stated", reason: "elevation and ground then count as heights above one datum"};
/** A constant height or the column. */
const FROM_COLUMN = {
  value: "the column of the file",
  reason: "heights change from station to station; a constant is taken only where it is given",
};

export const MEASURED: OptionGroup = {
  heading: "What was measured",
  entries: [
    {
      name: "column",
      value: "ROLE=NAME",
      repeated: true,
      form: {pairs: {names: ROLES, of: {}}},
      help: `column NAME of the file holds ROLE, one of ${ROLES.join(", ")}. elevation: sensor above the height datum; clearance: sensor above the ground; ground: elevation of the ground. Usual headers are recognised without it, and the choice is printed`,
      default: {
        value: "usual headers are recognised",
        reason: "a name that could mean two things is never taken, and what was taken is printed",
      },
    },
    {
      name: "clearance",
      value: "H",
      form: {number: NOT_NEGATIVE},
      help: "the sensor flew a constant H metres above the ground",
      default: FROM_COLUMN,
    },
    {
      name: "elevation",
      value: "Z",
      form: {number: ANY_NUMBER},
      help: "the sensor was at a constant elevation of Z metres",
      default: FROM_COLUMN,
    },
    {
      name: "sensor-offset",
      value: "DZ",
      form: {number: OFFSET},
      help: "metres added to elevation or clearance; negative for a sensor slung below the point that was recorded",
      default: {value: DEFAULT_OFFSET, reason: "heights are taken as those of the sensor itself"},
    },
    {
      name: "elevation-datum",
      value: "NAME",
      help: "height datum of the elevation, any name",
      default: NO_DATUM,
    },
    {
      name: "ground-datum",
      value: "NAME",
      help: "height datum of the ground; one that differs from the elevation's needs --geoid-offset",
      default: NO_DATUM,
    },
    {
      name: "geoid-offset",
      value: "N",
      form: {number: ANY_NUMBER},
      help: "metres added to the ground to bring it to the datum of the elevation",
      default: {value: "nothing is added", reason: "two datums of different names are refused without it"},
    },
    {
      name: "crs",
      value: "EPSG:n",
      help: "coordinate system of the coordinates in the file",
      default: {
        value: "the one a grid names; of a table, x, y are metres of a flat map, longitude and latitude WGS 84",
        reason: "a table cannot name its system, so that what was taken is remarked on",
      },
    },
    {
      name: "out-crs",
      value: "EPSG:n",
      help: "coordinate system of the x, y that are delivered",
      default: {value: "that of the file", reason: "answers then lie on the map that the readings came from"},
    },
    {
      name: "split",
      value: "column|auto",
      form: {words: SPLITS},
      help: "how a table falls into lines: by its line column or by heading, speed and gaps",
      default: {
        value: "column where the file has one, else all stations are one line",
        reason: "who flew the lines knows best where they end; auto rests on heuristics",
      },
    },
    {
      name: "profiles",
      value: "rows|columns|FILE.geojson",
      form: {words: PROFILES, mapFile: true},
      help: "which way the lines of a grid run, or the transects across it that are lines (LineStrings, named by their property name), read at the pixel spacing",
      default: {
        value: DEFAULT_PROFILES,
        reason: "a convention; where sources run along the rows, columns cross them and are the better choice",
      },
    },
    {
      name: "every",
      value: "N",
      form: {number: EVERY},
      help: "of a grid the 1st, N+1st, 2N+1st … row or column, each a line of its own with its own answers in tables",
      default: {value: "all, with answers as grids", reason: "neighbouring rows share their bound"},
    },
    {
      name: "sampling",
      value: "bilinear|cubic",
      form: {words: SAMPLING_NAMES},
      help: `how transects are read between pixels. ${SAMPLINGS.map(({name, summary}) => `${name}: ${summary}`).join("; ")}. A reading that touches a pixel without a value is left out`,
      default: {value: DEFAULT_SAMPLING, reason: "it touches the fewest pixels and overshoots nowhere"},
    },
    {
      name: "observable",
      value: "KIND",
      repeated: true,
      form: {words: OBSERVABLES.map(({name}) => name), pattern: CHANNEL_PATTERN},
      help: `what the values are, as anomalies; value.2=KIND for a second channel, and so on. ${observables}`,
      required: "nothing in a file says reliably what its values are, and a wrong guess gives a wrong source",
    },
    {
      name: "unit",
      value: "U",
      repeated: true,
      form: {words: UNITS.map(({symbol}) => symbol), pattern: CHANNEL_PATTERN},
      help: `unit of the values and of --noise. ${units}`,
      default: {
        value: "the first named for the observable",
        reason: "it is the unit in which answers are given",
        inForce: (asked) => {
          const observable = OBSERVABLES.find(({name}) => name === observableAsked(asked));
          return observable && DELIVERY_UNIT[observable.dimension].symbol;
        },
      },
    },
    {
      name: "noise",
      value: "S|record",
      repeated: true,
      form: {number: NOISE, words: ["record"], pattern: CHANNEL_PATTERN},
      help: "standard deviation of the noise; record: from fourth differences of the line itself, not possible for a grid",
      default: {
        value: "record for lines; a grid needs a number",
        reason:
          "fourth differences remove any cubic and leave white noise (a doubt is raised where it is not white); a grid is smooth by construction and shows none",
      },
    },
    {
      name: "noise-length",
      value: "L",
      form: {number: NOT_NEGATIVE},
      help: "metres over which the noise of each channel is correlated along the line: neighbours D metres apart by exp(-D/L), as of drift, swell or a slow loop of the compensation; 0 is white. --noise stays the standard deviation of one reading",
      default: {
        value: DEFAULT_NOISE_LENGTH,
        reason:
          "white noise needs no further number, and the readings themselves hardly tell correlated noise from a source; a doubt is raised where residuals are not white, with an estimate of L",
      },
    },
    {
      name: "inclination",
      value: "I",
      form: {number: INCLINATION},
      help: "of the Earth's field, degrees below the horizon, for observables that need its direction; with --declination",
      default: {value: "none", reason: "only total-field kinds and the reduction to the pole need it"},
    },
    {
      name: "declination",
      value: "D",
      form: {number: DECLINATION},
      help: "of the Earth's field, degrees clockwise from true north",
      default: {value: "none", reason: "as for the inclination"},
    },
    {
      name: "date",
      value: "YYYY-MM-DD",
      help: "day of the survey: the direction of the field at the middle of each line by the World Magnetic Model, in place of --inclination and --declination",
      default: {value: "none", reason: "a day cannot be guessed"},
    },
    {
      name: "processing",
      value: "TEXT",
      help: "what was already done to the data; carried into record and report",
      default: {value: "nothing was stated", reason: "it cannot be seen in the data"},
    },
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
    if (!(ROLES as readonly string[]).includes(role) && !/^(value|elevation|clearance)\.\d+$/.test(role))
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
function wordFor<W extends string>(
  asked: Asked,
  name: string,
  words: readonly W[],
  ...besides: readonly string[]
): W | undefined {
  const text = oneOf(asked, name);
  if (text === undefined) return undefined;
  const found = words.find((word) => word === text);
  if (found === undefined)
    throw new InputError(
      "option/unknown-word",
      `--${name} ${shown(text)} is not known. Give ${[...words, ...besides].join(" or ")}.`,
    );
  return found;
}

function profilesFrom(asked: Asked, maps: MapFiles | undefined): AcquisitionSettings["profiles"] {
  const text = oneOf(asked, "profiles");
  const file = text !== undefined && isMapPath(text);
  if (file) return mapFileAt("--profiles", text, maps) ?? DEFAULT_PROFILES;
  return wordFor(asked, "profiles", PROFILES, "a GeoJSON file (.geojson, .json)") ?? DEFAULT_PROFILES;
}

/**
 * @param maps files of transects by their paths; undefined: they are left out
 * @throws {InputError} `option/…`, `observable/unknown`, `unit/…`
 */
export function acquisitionFrom(asked: Asked, maps?: MapFiles): AcquisitionSettings {
  const number = (name: string, need = ANY_NUMBER): number | undefined => {
    const text = oneOf(asked, name);
    return text === undefined ? undefined : numberFor(`--${name}`, text, need);
  };
  return {
    columns: columnsFrom(asked),
    clearance: number("clearance", NOT_NEGATIVE),
    elevation: number("elevation"),
    sensorOffset: number("sensor-offset", OFFSET) ?? Number(DEFAULT_OFFSET),
    elevationDatum: oneOf(asked, "elevation-datum"),
    groundDatum: oneOf(asked, "ground-datum"),
    geoidOffset: number("geoid-offset"),
    crs: oneOf(asked, "crs"),
    outCrs: oneOf(asked, "out-crs"),
    split: wordFor(asked, "split", SPLITS),
    channels: channelsFrom(asked),
    noiseLength: number("noise-length", NOT_NEGATIVE) ?? Number(DEFAULT_NOISE_LENGTH),
    profiles: profilesFrom(asked, maps),
    every: number("every", EVERY),
    sampling: wordFor(asked, "sampling", SAMPLING_NAMES),
  };
}
