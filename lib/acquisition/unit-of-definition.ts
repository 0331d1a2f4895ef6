/** The units that a definition gives its fields, held against the settings and the roles that the fields take. */
import {InputError, type Place} from "../errors.ts";
import {coordinateSystem} from "../geometry/coordinate-system.ts";
import {doubt, type Notice, remark} from "../notice.ts";
import {observableNamed} from "../potential/catalogue.ts";
import {DELIVERY_UNIT, UNITS} from "../quantities.ts";
import type {ColumnChoice} from "./choose-columns.ts";
import {definedUnit} from "./definition-units.ts";
import type {AcquisitionSettings, ChannelSettings} from "./settings.ts";

const LENGTHS = ["chainage", "x", "y", "elevation", "clearance", "ground"];

export interface UnitOfDefinition {
  readonly symbol: string;
  /** The definition that gave it. */
  readonly file: string;
}

/**
 * Notes in `units` the unit of a channel, unless the user gave it.
 * @throws {InputError} `unit/conflict`, `unit/files-differ`, `unit/not-understood`, `unit/wrong-dimension`
 */
export function readingUnit(
  channel: ChannelSettings,
  text: string | undefined,
  units: Map<string, UnitOfDefinition>,
  place: Place,
): Notice[] {
  const {dimension} = observableNamed(channel.observable);
  const field = `${place.file}: field "${place.column}"`;
  const flag = channel.role === "value" ? "--unit" : `--unit ${channel.role}=`;
  const earlier = units.get(channel.role);
  if (text === undefined) {
    const taken = channel.unit ?? earlier?.symbol;
    if (taken !== undefined) return [];
    const usual = DELIVERY_UNIT[dimension].symbol;
    const hint = dimension === "gravity" ? " Gravity in this form is often in um/s2, a tenth of a mGal." : "";
    return [
      doubt("unit/not-defined", `${field} has no UNIT and is read in ${usual}.${hint} Give ${flag} to be sure.`, place),
    ];
  }
  const symbol = definedUnit(text);
  if (symbol === undefined) {
    if (channel.unit !== undefined)
      return [
        doubt(
          "unit/not-understood",
          `${field} has UNIT=${shortened(text)}, which is not a unit known here; it is read in ${channel.unit}, as asked.`,
          place,
        ),
      ];
    throw new InputError(
      "unit/not-understood",
      `${field} has UNIT=${shortened(text)}, which is not a unit known here. Say which it is with ${flag}.`,
      {place},
    );
  }
  const unit = UNITS.find((candidate) => candidate.symbol === symbol);
  if (unit?.dimension !== dimension)
    throw new InputError(
      "unit/wrong-dimension",
      `${field} has UNIT=${shortened(text)}, but ${channel.observable} is of kind ${dimension}. Correct --observable, or name another field with --column ${channel.role}=NAME.`,
      {place},
    );
  const given = UNITS.find((candidate) => candidate.symbol === (channel.unit ?? earlier?.symbol));
  if (given !== undefined && given.factor !== unit.factor) {
    if (channel.unit !== undefined)
      throw new InputError(
        "unit/conflict",
        `${field} has UNIT=${shortened(text)}, but ${channel.unit} was asked for; one of them is wrong, and answers would be off by ${(given.factor / unit.factor).toPrecision(3)} times. Leave ${flag} out to take the definition's, or correct the definition.`,
        {place},
      );
    throw new InputError(
      "unit/files-differ",
      `${field} has UNIT=${shortened(text)}, but ${earlier!.file} has ${earlier!.symbol}; one unit for all files was needed. Run them one by one.`,
      {place},
    );
  }
  if (channel.unit !== undefined || earlier !== undefined) return [];
  units.set(channel.role, {symbol, file: place.file});
  return [
    remark(
      "unit/from-definition",
      `${field} is read in ${symbol}, its UNIT; a noise that is given is in it, too.`,
      place,
    ),
  ];
}

/**
 * Places are in metres or degrees; x, y also in the unit of their coordinate system.
 * @throws {InputError} `unit/not-metres`, `unit/not-degrees`
 */
export function placeUnit(
  {role}: ColumnChoice,
  text: string | undefined,
  {crs}: AcquisitionSettings,
  place: Place,
): Notice[] {
  if (text === undefined) return [];
  const angle = role === "longitude" || role === "latitude";
  if (!angle && !LENGTHS.includes(role)) return [];
  const symbol = definedUnit(text);
  const needed = angle ? "degrees" : "metres";
  const field = `${place.file}: field "${place.column}"`;
  if (symbol === undefined)
    return [
      doubt(
        "unit/not-understood",
        `${field} has UNIT=${shortened(text)}, which is not a unit known here; as ${role} it is taken in ${needed}.`,
        place,
      ),
    ];
  if (symbol === (angle ? "deg" : "m")) return [];
  if ((role === "x" || role === "y") && crs !== undefined) {
    const system = coordinateSystem(crs);
    if (symbol !== "deg" && system.kind === "projected" && system.metresPerUnit !== 1) return [];
  }
  throw new InputError(
    angle ? "unit/not-degrees" : "unit/not-metres",
    `${field} has UNIT=${shortened(text)}, but ${role} in ${needed} was needed. Convert it, or name another field with --column ${role}=NAME.`,
    {place},
  );
}

/** A message stays a message, whatever stands in the file. */
const shortened = (text: string): string => (text.length > 60 ? `${text.slice(0, 60)}…` : text);
