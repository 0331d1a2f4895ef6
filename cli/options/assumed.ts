/** Options that say what is assumed about the sources, and how they become settings. */
import {InputError} from "../../lib/errors.ts";
import {supportOf} from "../../lib/geometry/interval.ts";
import {BOUND_RULES, boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import type {BoundRule} from "../../lib/inverse/rules/rule.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {DELIVERY_UNIT} from "../../lib/quantities.ts";
import type {ModelSettings, SupportSetting} from "../../lib/study/settings.ts";
import type {BoundarySetting} from "../../lib/survey/boundary.ts";
import type {Tie} from "../../lib/survey/tie.ts";
import {shown} from "../printable.ts";
import {type Asked, allOf, type OptionGroup, oneOf} from "./entry.ts";
import {intervalFor} from "./interval-text.ts";
import {type MapFiles, mapFileAt, zonesFrom} from "./map-file.ts";
import {ANY_NUMBER, type Need, NOT_NEGATIVE, NUMBER_PATTERN, numberFor, numberIn, POSITIVE} from "./number.ts";

const REGIONALS = {none: -1, "0": 0, "1": 1, "2": 2, "3": 3} as const;
const DEFAULT_REGIONAL = "1";
const DEFAULT_BOUND = "discrepancy";
const DEPTH: Need = {...NOT_NEGATIVE, words: "a depth, 0 or above", example: "5"};
const DEGREE: Need = {words: "a whole number from 0 to 3", example: DEFAULT_REGIONAL, least: 0, most: 3, whole: true};
const STRIKE: Need = {...ANY_NUMBER, words: "degrees from -360 to 360", example: "30", least: -360, most: 360};
const WIDTH: Need = {...POSITIVE, words: "a width in metres above 0", example: "5"};

export const ASSUMED: OptionGroup = {
  heading: "What is assumed",
  entries: [
    {
      name: "boundary",
      value: "Z|depth-D|ground-D",
      form: {number: ANY_NUMBER, pattern: `(?:depth|ground)-${NUMBER_PATTERN}`},
      help: "boundary with every source at or below it: flat at elevation Z metres, flat D metres below the lowest ground under the line, or following the ground D metres below it",
      default: {
        value: "the ground, taken as flat, where the sensor is known by clearance only; else it must be given",
        reason:
          "clearance is measured from the ground and no source stands above it; a source above the boundary would make the result invalid",
      },
    },
    {
      name: "support",
      value: "A:B|FILE.geojson",
      repeated: true,
      form: {interval: true, mapFile: true},
      help: "source zone, where sources may be: metres of chainage, which is distance along the line (G2/A:B for the lines of group G2), or polygons of the map, of which each line gets the part inside (20 median heights beyond its ends at most) and a line that meets none is skipped",
      default: {
        value: "the line and five median heights beyond either end",
        reason: "from five heights away a source adds at most 6 per cent of its strength to the last station",
      },
    },
    {
      name: "bound",
      value: "RULE",
      form: {pattern: BOUND_RULES.map(({usage}) => usage.replace(/:V$/, `:${NUMBER_PATTERN}`)).join("|")},
      help: `bound on the sources, which fixes the multiplier (regularisation parameter). ${BOUND_RULES.map(({usage, summary}) => `${usage}: ${summary}`).join("; ")}`,
      default: {
        value: DEFAULT_BOUND,
        reason:
          "the noise can be told from the data, the strength of the sources cannot; intervals then rest on an assumption, so give rms or norm where the strength is known",
      },
    },
    {
      name: "regional",
      value: "none|0|1|2|3",
      form: {words: Object.keys(REGIONALS), number: DEGREE},
      help: "degree of the polynomial estimated together with the source",
      default: {value: DEFAULT_REGIONAL, reason: "anomalies keep a level and a slope of unknown origin"},
    },
    {
      name: "strike",
      value: "A",
      form: {number: STRIKE},
      help: "azimuth that the sources run along, degrees clockwise from true north, where lines do not cross them squarely: distances are scaled by the sine of the angle between, which must be 30 degrees at least; --bound norm and totals are counted square to the strike",
      default: {value: "square to each line", reason: "lines are laid across what they look for"},
    },
    {
      name: "tie",
      value: "FILE.csv",
      repeated: true,
      form: {path: true},
      help: "known readings that the answer must meet, without regional: columns line, chainage (or x, y), elevation, value and, if wanted, tolerance (standard deviation, 0 or empty: exactly) and observable, values in mGal, E, nT or nT/m; on the boundary itself a tie is an average over the resolution length",
      default: {value: "none", reason: "what is known at the ground is for the user to say"},
    },
    {
      name: "panel",
      value: "W",
      form: {number: WIDTH},
      help: "widest panel of the source zone in metres",
      default: {
        value: "a quarter of the least height, an eighth where a gradient is read",
        reason: "finer detail does not reach the sensor; intervals do not depend on the panels",
      },
    },
  ],
};

function boundaryFrom(text: string | undefined): BoundarySetting | undefined {
  if (text === undefined) return undefined;
  const depth = /^depth-(.*)$/.exec(text)?.[1];
  if (depth !== undefined)
    return {
      kind: "depth",
      depth: numberFor("--boundary depth-", depth, DEPTH),
    };
  const below = /^ground-(.*)$/.exec(text)?.[1];
  if (below !== undefined) return {kind: "ground", depth: numberFor("--boundary ground-", below, DEPTH)};
  const elevation = numberIn(text);
  if (elevation === undefined)
    throw new InputError(
      "option/not-a-boundary",
      `--boundary ${shown(text)} is not understood. Give an elevation in metres, for example --boundary -2000, a depth below the lowest ground, for example --boundary depth-5, or below the ground as it runs, for example --boundary ground-2.`,
    );
  return {kind: "elevation", elevation};
}

/** An ending of letters: no interval has one. */
const isFile = (text: string): boolean => /\.[a-z]\w*$/i.test(text);

/** Supports of one group, or for every line, must be disjoint. */
function supportsFrom(asked: Asked, maps: MapFiles | undefined): readonly SupportSetting[] {
  const texts = allOf(asked, "support");
  const supports = texts.filter((text) => !isFile(text)).map((text) => intervalFor("--support ", text));
  for (const group of new Set(supports.map((support) => support.group)))
    supportOf(supports.filter((support) => support.group === group || support.group === undefined));
  const files = texts.filter(isFile).flatMap((path) => mapFileAt("--support", path, maps) ?? []);
  return [...supports, ...files.flatMap(zonesFrom)];
}

function regionalFrom(text: string): ModelSettings["regional"] {
  if (!Object.hasOwn(REGIONALS, text))
    throw new InputError(
      "option/unknown-word",
      `--regional ${shown(text)} is not known. Give the degree of a polynomial, ${Object.keys(REGIONALS).join(", ")}.`,
    );
  return REGIONALS[text as keyof typeof REGIONALS];
}

/**
 * @param maps files of polygons by their paths; undefined: they are left out
 * @throws {InputError} `option/…`, `support/…`, `polygon/…`
 */
export function modelFrom(asked: Asked, maps?: MapFiles, ties?: readonly Tie[]): ModelSettings {
  const panel = oneOf(asked, "panel");
  const strike = oneOf(asked, "strike");
  return {
    boundary: boundaryFrom(oneOf(asked, "boundary")),
    support: supportsFrom(asked, maps),
    ...(strike === undefined ? {} : {strike: numberFor("--strike", strike, STRIKE)}),
    ...(ties === undefined || ties.length === 0 ? {} : {ties}),
    panel: panel === undefined ? undefined : numberFor("--panel", panel, WIDTH),
    regional: regionalFrom(oneOf(asked, "regional") ?? DEFAULT_REGIONAL),
  };
}

/** @throws {InputError} of the catalogue of rules */
export function boundFrom(asked: Asked, observable: Observable): BoundRule {
  return boundRuleNamed(oneOf(asked, "bound") ?? DEFAULT_BOUND, DELIVERY_UNIT[observable.source.fieldDimension].factor);
}
