/**
 * The column names that are taken for a role without being asked. Spellings seen in
 * deliveries (common practice, no source); a name that could mean two things is not in the list.
 */
import type {Dimension} from "../quantities.ts";
import type {ROLES} from "./settings.ts";

export type Role = (typeof ROLES)[number];

/** A name taken apart: letters and digits in lower case, and the unit at its end, if any. */
export interface HeaderName {
  readonly key: string;
  readonly unit: string | undefined;
}

const METRES = ["m", "metre", "metres", "meter", "meters", "masl", "magl"];
const OTHER_LENGTHS = ["ft", "feet", "foot", "usft", "km", "kilometre", "kilometres", "kilometer", "kilometers"];
const FIELD_UNITS: Readonly<Record<string, string>> = {
  mgal: "mGal",
  mgals: "mGal",
  ugal: "uGal",
  gu: "gu",
  nt: "nT",
  pt: "pT",
};
const ANGLES = ["deg", "degrees", "dd", "wgs84"];

/** "Height (m)", "height_m" and "HEIGHT" have one key. */
export function headerName(name: string): HeaderName {
  const tokens = name
    .toLowerCase()
    .split(/[^\p{L}\p{N}]+/u)
    .filter((token) => token !== "");
  const last = tokens.at(-1);
  const isUnit =
    tokens.length > 1 &&
    last !== undefined &&
    (METRES.includes(last) || OTHER_LENGTHS.includes(last) || ANGLES.includes(last) || last in FIELD_UNITS);
  return isUnit ? {key: tokens.slice(0, -1).join(""), unit: last} : {key: tokens.join(""), unit: undefined};
}

/** A length in this unit would be taken for metres wrongly. */
export const isOtherLength = (unit: string | undefined): boolean => unit !== undefined && OTHER_LENGTHS.includes(unit);

/** The spelling `--unit` takes for the unit at the end of a column's name; undefined when it names none. */
export const fieldUnit = (unit: string | undefined): string | undefined =>
  unit === undefined ? undefined : FIELD_UNITS[unit];

export const ROLE_NAMES: Readonly<Record<Role, readonly string[]>> = {
  line: ["line", "lineid", "lineno", "linenumber", "linename", "flightline", "fltline", "profile", "profileid"],
  chainage: ["chainage", "distance", "dist", "distancealongline", "distancealongprofile"],
  x: ["x", "e", "easting", "eastings", "east", "xcoord", "xutm", "utmx", "utme", "utmeasting"],
  y: ["y", "n", "northing", "northings", "north", "ycoord", "yutm", "utmy", "utmn", "utmnorthing"],
  longitude: ["longitude", "lon", "long", "lng"],
  latitude: ["latitude", "lat"],
  elevation: ["elevation", "elev", "altitude", "alt", "sensorelevation", "gpsaltitude", "gpsalt"],
  clearance: ["clearance", "height", "agl", "heightagl", "heightaboveground", "terrainclearance", "sensorheight"],
  ground: ["ground", "groundelevation", "groundlevel", "terrain", "topography", "topo", "dtm", "dem"],
  time: ["time", "datetime", "timestamp", "utc", "utctime", "gpstime"],
  value: ["value", "anomaly", "reading"],
};

/** Taken for chainage only where no other position is given: it may also be a number painted on a peg. */
export const WEAK_CHAINAGE = "station";

/** Further names of `value`, by what the observable measures. */
export const VALUE_NAMES: Readonly<Partial<Record<Dimension, readonly string[]>>> = {
  gravity: [
    "gravity",
    "gz",
    "gravityanomaly",
    "bouguer",
    "bougueranomaly",
    "completebouguer",
    "freeair",
    "freeairanomaly",
    "faa",
    "gravitydisturbance",
    "residualgravity",
    "gravityresidual",
  ],
  field: [
    "bz",
    "magneticanomaly",
    "maganomaly",
    "magres",
    "magresidual",
    "residualmag",
    "tmiresidual",
    "residualtmi",
    "totalfieldanomaly",
  ],
};
