/**
 * Coordinate systems given as PROJ strings.
 *
 * Every word is checked before proj4 sees it, because proj4 ignores what it does not know:
 * an unknown ellipsoid becomes WGS 84, a misspelt parameter its default.
 */
import {InputError} from "../errors.ts";
import {type CoordinateSystem, geographicDefinition, projectionDefinition} from "./crs-definition.ts";
import type {Datum} from "./datum.ts";
import {ELLIPSOIDS, type Ellipsoid, GRS80, WGS84} from "./ellipsoid.ts";
import {epsgDatum} from "./epsg-lookup.ts";

/** Projections of proj4 that were compared with PROJ on EPSG systems, and nothing else. */
const PROJECTIONS = new Set(
  "aea aeqd cass cea krovak laea lcc merc nzmg omerc poly somerc stere sterea tmerc utm".split(" "),
);
const GEOGRAPHIC = new Set(["longlat", "latlong", "lonlat", "latlon"]);
/** Parameters that hold one number. */
const NUMBERS = new Set("lat_0 lon_0 lat_1 lat_2 lat_ts lonc alpha gamma k k_0 x_0 y_0 zone".split(" "));
const FLAGS = new Set(["south", "no_off", "no_uoff"]);
/** Words that change nothing here. */
const IDLE = new Set(["no_defs", "type", "wktext"]);
/** Metres in PROJ's linear units that surveys use (its list of units, PROJ 9.1). */
const LINEAR_UNITS: ReadonlyMap<string, number> = new Map([
  ["m", 1],
  ["km", 1000],
  ["ft", 0.3048],
  ["us-ft", 1200 / 3937],
  ["ind-ft", 0.30479841],
  ["yd", 0.9144],
  ["ind-yd", 0.91439523],
]);
/** Prime meridians in degrees (PROJ's list, PROJ 9.1). */
const MERIDIANS: ReadonlyMap<string, number> = new Map([
  ["greenwich", 0],
  ["lisbon", -(9 + 7 / 60 + 54.862 / 3600)],
  ["paris", 2 + 20 / 60 + 14.025 / 3600],
  ["bogota", -(74 + 4 / 60 + 51.3 / 3600)],
  ["madrid", -(3 + 41 / 60 + 16.58 / 3600)],
  ["rome", 12 + 27 / 60 + 8.4 / 3600],
  ["bern", 7 + 26 / 60 + 22.5 / 3600],
  ["jakarta", 106 + 48 / 60 + 27.79 / 3600],
  ["ferro", -(17 + 40 / 60)],
  ["stockholm", 18 + 3 / 60 + 29.8 / 3600],
  ["athens", 23 + 42 / 60 + 58.815 / 3600],
  ["oslo", 10 + 43 / 60 + 22.5 / 3600],
]);
/** EPSG codes of the datums that a string may name. */
const DATUMS: ReadonlyMap<string, number> = new Map([
  ["WGS84", 6326],
  ["NAD83", 6269],
]);

const refuse = (found: string, needed: string): InputError =>
  new InputError("crs/bad-proj-string", `PROJ string: ${found}. ${needed}`);

/** A number, or a fraction such as 1200/3937; not the sexagesimal forms, which proj4 would cut short. */
function numberOf(key: string, text: string): number {
  const [top, bottom] = text.split("/");
  const value = text.trim() === "" ? Number.NaN : Number(top) / (bottom === undefined ? 1 : Number(bottom));
  if (!Number.isFinite(value))
    throw refuse(`+${key}=${text} is no number`, "Write decimal degrees, metres or a plain factor.");
  return value;
}

function words(text: string): ReadonlyMap<string, string> {
  const found = new Map<string, string>();
  for (const word of text.trim().split(/\s+/)) {
    const match = /^\+([A-Za-z_0-9]+)(?:=(\S*))?$/.exec(word);
    if (match === null) throw refuse(`"${word.slice(0, 40)}" is not of the form +name=value`, "Mend that word.");
    const key = match[1]!;
    if (found.has(key)) throw refuse(`+${key} stands twice`, "Keep one.");
    found.set(key, match[2] ?? "");
  }
  return found;
}

function ellipsoidOf(given: ReadonlyMap<string, string>): Ellipsoid | undefined {
  const at = (key: string): number | undefined => (given.has(key) ? numberOf(key, given.get(key)!) : undefined);
  const radius = at("R");
  const a = radius ?? at("a");
  const b = radius ?? at("b");
  const rf = at("rf") ?? (given.has("f") ? 1 / at("f")! : undefined);
  const named = given.get("ellps");
  if ([a !== undefined, named !== undefined].filter(Boolean).length > 1)
    throw refuse("both +ellps and the ellipsoid's axes are given", "Keep one of them.");
  if (named !== undefined) {
    const found = ELLIPSOIDS.get(named);
    if (found === undefined)
      throw refuse(`+ellps=${named} is not an ellipsoid known here`, "Give its axes in numbers: +a=… +rf=….");
    return found;
  }
  if (a === undefined) return undefined;
  if (!(a > 6.3e6 && a < 6.45e6)) throw refuse(`+a=${a} is no radius of the Earth in metres`, "Correct it.");
  if (rf !== undefined) {
    if (!(rf > 150)) throw refuse(`+rf=${rf} is no inverse flattening of the Earth`, "Correct it.");
    return {semiMajorAxis: a, inverseFlattening: rf};
  }
  if (b === undefined) throw refuse("+a stands without +rf or +b", "Add one of them.");
  if (!(b > 6.3e6 && b <= a)) throw refuse(`+b=${b} is no polar radius for +a=${a}`, "Correct it.");
  return {semiMajorAxis: a, inverseFlattening: a === b ? 0 : a / (a - b)};
}

const sameFigure = (one: Ellipsoid, other: Ellipsoid): boolean =>
  one.semiMajorAxis === other.semiMajorAxis && one.inverseFlattening === other.inverseFlattening;

function datumOf(given: ReadonlyMap<string, string>): Datum {
  const meridian = given.get("pm") ?? "greenwich";
  const primeMeridian = MERIDIANS.get(meridian) ?? numberOf("pm", meridian);
  const named = given.get("datum");
  if (named !== undefined) {
    const code = DATUMS.get(named);
    if (code === undefined)
      throw refuse(
        `+datum=${named} hides a shift in a name`,
        "Give the ellipsoid and the shift in numbers: +ellps=… +towgs84=dx,dy,dz.",
      );
    if (given.has("ellps") || given.has("a") || given.has("R") || given.has("towgs84"))
      throw refuse("+datum stands beside an ellipsoid or a shift", "Keep one of them.");
    const datum = epsgDatum(code);
    return primeMeridian === 0 ? datum : {...datum, id: `${datum.id} from ${primeMeridian}`, primeMeridian};
  }
  const ellipsoid = ellipsoidOf(given);
  if (ellipsoid === undefined) throw refuse("there is no ellipsoid", "Add +ellps=…, +datum=WGS84 or +a=… +rf=….");
  const figure = `a = ${ellipsoid.semiMajorAxis} m, 1/f = ${ellipsoid.inverseFlattening}`;
  const shift = given
    .get("towgs84")
    ?.split(",")
    .map((part) => numberOf("towgs84", part));
  if (shift === undefined)
    return {
      id: `unnamed: ${figure}, ${primeMeridian}`,
      name: `unnamed (${figure})`,
      ellipsoid,
      primeMeridian,
      // Common practice, no source: a bare GRS 80 or WGS 84 ellipsoid means one of the datums that use it.
      nearWgs84: sameFigure(ellipsoid, GRS80) || sameFigure(ellipsoid, WGS84),
    };
  if (shift.length !== 3 && shift.length !== 7)
    throw refuse(`+towgs84 has ${shift.length} numbers`, "Give three (metres) or seven (metres, arc-seconds, ppm).");
  return {
    id: `shifted: ${figure}, ${primeMeridian}, ${shift.join(",")}`,
    name: `with the shift ${shift.join(",")} to WGS 84`,
    ellipsoid,
    primeMeridian,
    nearWgs84: false,
    toWgs84: shift,
  };
}

/** Metres in the string's unit. */
function unitOf(given: ReadonlyMap<string, string>): number {
  const named = given.get("units");
  const factor = given.get("to_meter");
  if (named !== undefined && factor !== undefined) throw refuse("both +units and +to_meter are given", "Keep one.");
  if (factor !== undefined) {
    const value = numberOf("to_meter", factor);
    if (!(value > 0)) throw refuse(`+to_meter=${factor} is not above zero`, "Correct it.");
    return value;
  }
  const value = LINEAR_UNITS.get(named ?? "m");
  if (value === undefined)
    throw refuse(`+units=${named} is not a unit known here`, "Give its length in metres: +to_meter=….");
  return value;
}

/**
 * Reads a PROJ string.
 * @throws {InputError} `crs/bad-proj-string` for a word that is unknown, doubled, no number, or would hide a datum shift
 */
export function projStringSystem(text: string): CoordinateSystem {
  const given = words(text);
  const projection = given.get("proj");
  if (projection === undefined) throw refuse("there is no +proj", "Add the projection, +proj=utm for example.");
  const geographic = GEOGRAPHIC.has(projection);
  if (!geographic && !PROJECTIONS.has(projection))
    throw refuse(
      `+proj=${projection} is not a projection that was checked here`,
      `Use one of ${[...PROJECTIONS].join(", ")} or longlat.`,
    );
  const shape = new Set(["proj", "ellps", "datum", "a", "b", "rf", "f", "R", "pm", "towgs84", "units", "to_meter"]);
  const kept = [projection];
  for (const [key, value] of given) {
    if (shape.has(key) || IDLE.has(key)) continue;
    if (NUMBERS.has(key)) kept.push(`${key}=${numberOf(key, value)}`);
    else if (FLAGS.has(key)) kept.push(key);
    else
      throw refuse(
        `+${key} is not understood here`,
        "Remove it if it changes nothing; grid shifts, other axis orders and heights are not supported.",
      );
  }
  const datum = datumOf(given);
  if (geographic)
    return {
      name: "PROJ string",
      title: `longitude and latitude, datum ${datum.name}`,
      kind: "geographic",
      datum,
      definition: geographicDefinition(datum),
      notices: [],
    };
  const zone = given.get("zone");
  if (projection === "utm" && !(Number.isInteger(Number(zone)) && Number(zone) >= 1 && Number(zone) <= 60))
    throw refuse(`+zone=${zone ?? ""} is no UTM zone`, "Give a whole number from 1 to 60.");
  const metresPerUnit = unitOf(given);
  if (metresPerUnit !== 1) kept.push(`to_meter=${metresPerUnit}`);
  return {
    name: "PROJ string",
    title: text,
    kind: "projected",
    metresPerUnit,
    datum,
    definition: projectionDefinition(kept, datum),
    notices: [],
  };
}
