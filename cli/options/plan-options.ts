/** The options of `plan`, and how they become its settings. */
import {InputError} from "../../lib/errors.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {OBSERVABLES, observableNamed} from "../../lib/potential/catalogue.ts";
import {effectiveDirection} from "../../lib/potential/effective-direction.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {DELIVERY_UNIT, type Dimension, unitFor} from "../../lib/quantities.ts";
import type {PlanSettings} from "../../lib/study/planned-work.ts";
import {ASSUMED, modelFrom} from "./assumed.ts";
import {DECLINATION, fieldDirectionFrom, INCLINATION} from "./channels.ts";
import {type Asked, allOf, type OptionEntry, type OptionGroup, oneOf} from "./entry.ts";
import {ANY_NUMBER, type Need, NOT_NEGATIVE, numberFor, POSITIVE} from "./number.ts";
import {WRITTEN} from "./output.ts";
import {WANTED, wantedFrom} from "./wanted.ts";

const ASK = "there is no survey to take it from";
const DEFAULT_WIDTH = "1";
/** In heights: on a longer line the middle hardly learns more. A heuristic. */
const LENGTH_HEIGHTS = 24;
const DEFAULT_SEPARATION = "1";
const METRES: Need = {...POSITIVE, words: "metres above 0", example: "20"};
const NOISE: Need = {...POSITIVE, words: "a standard deviation above 0", example: "0.5"};
const LEVEL: Need = {...NOT_NEGATIVE, words: "a height in metres, 0 or above", example: "10"};
const STRENGTH: Need = {...ANY_NUMBER, words: "a strength", example: "50"};
const AZIMUTH: Need = {...ANY_NUMBER, words: "degrees from -360 to 360", example: "90", least: -360, most: 360};

const same = (group: OptionGroup, name: string): OptionEntry => group.entries.find((entry) => entry.name === name)!;
const of = (group: OptionGroup, ...names: string[]): OptionEntry[] => names.map((name) => same(group, name));

const NO_DIRECTION = {value: "not known", reason: "only total-field-anomaly and its gradient need it"};

export const PLAN_OPTIONS: readonly OptionGroup[] = [
  {
    heading: "What would be flown (every combination is worked out)",
    entries: [
      {
        name: "observable",
        value: "KIND",
        repeated: true,
        help: `what the sensor reads, one of ${OBSERVABLES.map(({name}) => name).join(", ")}; several must share a unit`,
        required: ASK,
      },
      {name: "clearance", value: "H", repeated: true, help: "height of the sensor above the ground, m", required: ASK},
      {name: "spacing", value: "D", repeated: true, help: "distance between stations, m", required: ASK},
      {
        name: "noise",
        value: "S",
        repeated: true,
        help: "standard deviation of the noise, in the unit of the observable",
        required: ASK,
      },
      {
        name: "unit",
        value: "UNIT",
        help: "unit of --noise",
        default: {value: "that of the observable: mGal, E, nT or nT/m", reason: "the units that answers are given in"},
      },
      {
        name: "length",
        value: "L",
        help: "length of the line, m",
        default: {
          value: `${LENGTH_HEIGHTS} times the greatest height, and the widest strip`,
          reason:
            "on a longer line its middle hardly learns more; one length for all combinations keeps them comparable",
        },
      },
      {
        name: "inclination",
        value: "I",
        help: "of the Earth's field, degrees, positive down; with --declination",
        default: NO_DIRECTION,
      },
      {
        name: "declination",
        value: "D",
        help: "of the Earth's field, degrees clockwise from true north; with --inclination",
        default: NO_DIRECTION,
      },
      {name: "azimuth", value: "A", help: "of the line, degrees clockwise from true north", default: NO_DIRECTION},
    ],
  },
  {
    heading: "What more could be flown",
    entries: [
      {
        name: "gradient-noise",
        value: "S",
        help: "noise of a vertical-gradient sensor at the same stations, E or nT/m",
        default: {
          value: "√2 times the noise over --separation",
          reason: "a pair of the same sensors, each with its own noise",
        },
      },
      {
        name: "separation",
        value: "D",
        help: "distance between the sensors of such a pair, m",
        default: {value: DEFAULT_SEPARATION, reason: "what a pole or a bird carries"},
      },
      {
        name: "second-clearance",
        value: "H",
        help: "clearance of a second pass over the same stations, m",
        default: {value: "half of the first", reason: "what a lower pass would bring is the usual question"},
      },
    ],
  },
  {
    heading: "What is assumed",
    entries: [
      {
        name: "bound",
        value: "rms:V|norm:V",
        repeated: true,
        help: "bound on the sources: root-mean-square of the boundary field over the source zone, V in mGal or nT, or its L2 norm in mGal·√m or nT·√m",
        required: "a plan without a bound promises nothing, and rules need readings",
      },
      {
        name: "boundary",
        value: "depth-D",
        help: "boundary with every source at or below it: flat, D metres below the ground",
        default: {value: "depth-0", reason: "no source stands above the ground"},
      },
      {
        ...same(ASSUMED, "support"),
        value: "A:B",
        help: "source zone, metres from the first station",
      },
      ...of(ASSUMED, "regional"),
    ],
  },
  {
    heading: "What is wanted",
    entries: [
      {
        name: "strip-width",
        value: "W",
        repeated: true,
        help: "mean and total over a strip W metres wide, in the middle and at the end of the line",
        default: {value: `${DEFAULT_WIDTH} times the greatest height`, reason: "about what that height can resolve"},
      },
      {
        name: "level",
        value: "L",
        repeated: true,
        help: "field L metres above the boundary, over the middle of the line; 0 is the boundary itself",
        default: {value: "no level", reason: "which levels matter is for the user to say"},
      },
      {
        name: "strip-strength",
        value: "V",
        help: "mean of a strip, kg/m2 or A/m: tells the highest clearance at which it can be told from nothing, where V is at least two half-widths; its interval is then free of zero in at least --confidence of all surveys, and over a strip of mean zero in at most the rest",
        default: {value: "not asked", reason: "what matters is for the user to say"},
      },
      ...of(WANTED, "confidence"),
    ],
  },
  {
    ...WRITTEN,
    entries: WRITTEN.entries.map((entry) =>
      entry.name === "out"
        ? {
            name: "out",
            value: "DIR",
            help: "folder that receives plan.csv, plan.html and record.json",
            default: {value: "nothing is written", reason: "the tables are printed"},
          }
        : entry,
    ),
  },
];

/** The values of a repeated option, each once. */
function numbers(asked: Asked, name: string, need: Need): readonly number[] {
  return [...new Set(allOf(asked, name).map((text) => numberFor(`--${name}`, text, need)))];
}

function needed(asked: Asked, name: string, need: Need): readonly number[] {
  const values = numbers(asked, name, need);
  if (values.length === 0) missing(name, need.example);
  return values;
}

function missing(name: string, example: string): never {
  throw new InputError("option/missing", `--${name} is missing. Give it, for example --${name} ${example}.`);
}

function observablesFrom(asked: Asked): readonly Observable[] {
  const names = [...new Set(allOf(asked, "observable"))];
  if (names.length === 0) missing("observable", "gravity");
  const observables = names.map(observableNamed);
  const other = observables.find(({dimension}) => dimension !== observables[0]!.dimension);
  if (other !== undefined)
    throw new InputError(
      "plan/two-units",
      `${observables[0]!.name} and ${other.name} are read in different units, and --noise is one of them. Plan them one by one.`,
    );
  return observables;
}

function depthFrom(asked: Asked): number {
  const boundary = modelFrom(new Map([["boundary", allOf(asked, "boundary")]])).boundary ?? {kind: "depth", depth: 0};
  if (boundary.kind !== "depth")
    throw new InputError(
      "plan/boundary",
      `--boundary ${oneOf(asked, "boundary")} needs ground that is known, and a plan has none. Give a depth below flat ground, for example --boundary depth-2.`,
    );
  return boundary.depth;
}

function directionFrom(asked: Asked, observables: readonly Observable[]): PlanSettings["direction"] {
  const field = fieldDirectionFrom(asked);
  const [azimuth] = oneOf(asked, "azimuth") === undefined ? [] : numbers(asked, "azimuth", AZIMUTH);
  const needing = observables.find(({needsDirection}) => needsDirection);
  if (needing === undefined) return undefined;
  if (field?.kind !== "angles" || azimuth === undefined)
    throw new InputError(
      "plan/no-direction",
      `${needing.name} needs the direction of the Earth's field and of the line. Give --inclination, --declination and --azimuth, for example --inclination ${INCLINATION.example} --declination ${DECLINATION.example} --azimuth 90.`,
    );
  return effectiveDirection(field.inclination, field.declination, azimuth);
}

/** @throws {InputError} `option/…`, `plan/…`, `observable/unknown`, `unit/…`, `bound/…` */
export function planSettingsFrom(asked: Asked): PlanSettings {
  const observables = observablesFrom(asked);
  const {dimension, source} = observables[0]!;
  const one = (name: string, need: Need): number | undefined => {
    const text = oneOf(asked, name);
    return text === undefined ? undefined : numberFor(`--${name}`, text, need);
  };
  const unitText = oneOf(asked, "unit");
  const unit = unitText === undefined ? DELIVERY_UNIT[dimension] : unitFor(unitText, dimension);
  const gradientOf: Dimension = source.method === "gravity" ? "gravity-gradient" : "field-gradient";
  const gradientNoise = one("gradient-noise", NOISE);
  const strength = one("strip-strength", STRENGTH);
  if (strength === 0)
    throw new InputError(
      "option/out-of-range",
      `--strip-strength "0" is nothing to tell from nothing. Give the mean of a strip, for example --strip-strength 50.`,
    );
  const clearances = needed(asked, "clearance", METRES);
  const boundaryDepth = depthFrom(asked);
  const highest = Math.max(...clearances) + boundaryDepth;
  const asWidths = numbers(asked, "strip-width", METRES);
  const stripWidths = asWidths.length > 0 ? asWidths : [Number(DEFAULT_WIDTH) * highest];
  const bounds = [...new Set(allOf(asked, "bound"))];
  if (bounds.length === 0)
    throw new InputError(
      "option/missing",
      "--bound is missing, and a plan without a bound on the sources promises nothing. Give a strength that they cannot exceed, for example --bound rms:30.",
    );
  const length = one("length", METRES) ?? LENGTH_HEIGHTS * highest + Math.max(...stripWidths);
  const wide = stripWidths.find((width) => width > length);
  if (wide !== undefined)
    throw new InputError(
      "plan/strip-beyond-line",
      `--strip-width ${wide} is longer than the line, ${length} m. Give a narrower strip or a greater --length.`,
    );
  const spacings = needed(asked, "spacing", METRES);
  const sparse = spacings.find((spacing) => length / spacing < 3);
  if (sparse !== undefined)
    throw new InputError(
      "plan/too-few-stations",
      `--spacing ${sparse} leaves fewer than four stations on a line of ${length} m. Give a smaller spacing or a greater --length.`,
    );
  const model = modelFrom(
    new Map(["support", "regional"].filter((name) => asked.has(name)).map((name) => [name, allOf(asked, name)])),
  );
  const stray = allOf(asked, "support").find((text) => !/^[^/:]+:[^/:]+$/.test(text));
  if (stray !== undefined)
    throw new InputError(
      "option/not-an-interval",
      `--support ${stray} is not an interval from the first station on. Give A:B in metres, for example --support -100:500.`,
    );
  const {confidence} = wantedFrom(new Map(asked.has("confidence") ? [["confidence", allOf(asked, "confidence")]] : []));
  return {
    observables,
    direction: directionFrom(asked, observables),
    clearances,
    spacings,
    noises: needed(asked, "noise", NOISE).map((value) => value * unit.factor),
    bounds: bounds.map((text) => boundRuleNamed(text, DELIVERY_UNIT[source.fieldDimension].factor)),
    stripWidths,
    levels: numbers(asked, "level", LEVEL),
    length,
    boundaryDepth,
    support: model.support,
    regional: model.regional,
    confidence,
    stripStrength: strength === undefined ? undefined : strength / source.densityPerField,
    gradientNoise: gradientNoise === undefined ? undefined : gradientNoise * DELIVERY_UNIT[gradientOf].factor,
    separation: one("separation", METRES) ?? Number(DEFAULT_SEPARATION),
    secondClearance: one("second-clearance", METRES),
  };
}
