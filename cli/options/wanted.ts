/** Options that say which answers are wanted, and how they become settings. */
import {type LevelSetting, levelLabel} from "../../lib/continuation/level-profile.ts";
import {DEFAULT_TRUST_FRACTION, refuseTrustOf} from "../../lib/continuation/trust-fraction.ts";
import {InputError} from "../../lib/errors.ts";
import {INTERVAL_KINDS, type IntervalKind} from "../../lib/inverse/interval-kind.ts";
import type {Strip} from "../../lib/inverse/nouns.ts";
import {BOUNDARY_FIELD, LEVEL_QUANTITIES, levelQuantityNamed} from "../../lib/potential/level-quantity.ts";
import {ALSO, type AlsoWord} from "../../lib/products/also.ts";
import type {StripSetting, WantedSettings} from "../../lib/study/settings.ts";
import {shown} from "../printable.ts";
import {type Asked, allOf, type OptionGroup, oneOf} from "./entry.ts";
import {intervalFor} from "./interval-text.ts";
import {type MapFiles, mapFileAt, stripsFrom} from "./map-file.ts";
import {type Need, NOT_NEGATIVE, NUMBER_PATTERN, numberFor} from "./number.ts";

const DEFAULT_LEVEL = "0";
const DEFAULT_CONFIDENCE = "0.95";
const LEVEL: Need = {
  ...NOT_NEGATIVE,
  words: "a height in metres, 0 or above (nothing is known below the boundary)",
  example: "10",
};
const PROBABILITY: Need = {
  words: "a probability between 0 and 1, both excluded",
  example: DEFAULT_CONFIDENCE,
  above: 0,
  below: 1,
};

const FRACTION: Need = {
  words: "a share of the range of the field, above 0 and at most 1",
  example: `${DEFAULT_TRUST_FRACTION}`,
  above: 0,
  most: 1,
};

export const WANTED: OptionGroup = {
  heading: "What is wanted",
  entries: [
    {
      name: "level",
      value: "L|ground+D",
      repeated: true,
      form: {number: LEVEL, pattern: `ground\\+${NUMBER_PATTERN}`},
      help: "field at L metres above the boundary, or D metres above the ground; 0 is the boundary itself",
      default: {value: DEFAULT_LEVEL, reason: "the boundary is where sources are told apart best"},
    },
    {
      name: "level-observable",
      value: "KIND",
      form: {words: LEVEL_QUANTITIES.map(({name}) => name)},
      help: `what is given on the levels. ${LEVEL_QUANTITIES.map(({name, summary}) => `${name}: ${summary}`).join("; ")}`,
      default: {
        value: BOUNDARY_FIELD.name,
        reason: "it is what the source itself is given in, and has a value on the boundary",
      },
    },
    {
      name: "strip",
      value: "NAME=A:B",
      repeated: true,
      form: {pairs: {of: {interval: true}}},
      help: "mean and total of the source between the chainages A and B, with intervals (NAME=G2/A:B for the lines of group G2)",
      default: {value: "no strips", reason: "which stretches matter is for the user to say"},
    },
    {
      name: "strips",
      value: "FILE.geojson",
      repeated: true,
      form: {mapFile: true},
      help: "strips as polygons of the map: of each line the part inside, under the property name of the polygon; where a line crosses one several times, mean and total are over all of it",
      default: {value: "no polygons", reason: "which areas matter is for the user to say"},
    },
    {
      name: "confidence",
      value: "P",
      form: {number: PROBABILITY},
      help: "coverage of every interval, between 0 and 1",
      default: {value: DEFAULT_CONFIDENCE, reason: "custom: 19 intervals in 20 are to hold the truth"},
    },
    {
      name: "trust-fraction",
      value: "F",
      form: {number: FRACTION},
      help: "depth to trust of a survey line: the lowest level at which the interval is narrower than this share of the range of the field along the line; below it a level is more bound than data",
      default: {
        value: `${DEFAULT_TRUST_FRACTION}`,
        reason: "custom: an anomaly four times as large as its interval can be read with its shape",
      },
    },
    {
      name: "intervals",
      value: "KIND",
      form: {words: INTERVAL_KINDS},
      help: "single: each interval holds its number at the confidence; simultaneous: a band that holds all numbers of a line at once; not for grids",
      default: {
        value: "single",
        reason: "one number is asked about at a time; take simultaneous to compare or search many",
      },
    },
    {
      name: "also",
      value: "KIND",
      repeated: true,
      form: {words: ALSO.map(({word}) => word)},
      help: `further files beside the usual ones. ${ALSO.map(({help}) => help).join("; ")}`,
      default: {value: "nothing further", reason: "the tables in CSV hold every number"},
    },
  ],
};

function levelFrom(text: string): LevelSetting {
  const above = /^ground\+(.*)$/.exec(text)?.[1];
  return above === undefined
    ? {kind: "above-boundary", height: numberFor("--level", text, LEVEL)}
    : {kind: "above-ground", height: numberFor("--level ground+", above, LEVEL)};
}

function stripFrom(text: string): Strip {
  // A name may hold "=": the interval never does.
  const cut = text.lastIndexOf("=");
  const name = text.slice(0, cut).trim();
  if (cut < 1 || name === "")
    throw new InputError(
      "option/not-a-pair",
      `--strip ${shown(text)} is not NAME=A:B. Give a name and an interval of chainage, for example --strip dyke=600:700.`,
    );
  return {name, ...intervalFor(`--strip ${name}=`, text.slice(cut + 1))};
}

function intervalsFrom(asked: Asked): IntervalKind {
  const text = oneOf(asked, "intervals") ?? "single";
  const found = INTERVAL_KINDS.find((kind) => kind === text);
  if (found === undefined)
    throw new InputError(
      "option/unknown-word",
      `--intervals ${shown(text)} is not known. Give ${INTERVAL_KINDS.join(" or ")}.`,
    );
  return found;
}

function alsoFrom(asked: Asked): AlsoWord[] {
  const words = new Set(allOf(asked, "also"));
  return [...words].map((text) => {
    const found = ALSO.find(({word}) => word === text);
    if (found === undefined)
      throw new InputError(
        "option/unknown-word",
        `--also ${shown(text)} is not known. Give ${ALSO.map(({word}) => word).join(" or ")}.`,
      );
    return found.word;
  });
}

/**
 * @param maps files of polygons by their paths; undefined: they are left out
 * @throws {InputError} `option/…`, `trust/no-interval`, `strip/no-name`, `polygon/…`
 */
export function wantedFrom(asked: Asked, maps?: MapFiles): WantedSettings {
  // A level asked twice, 10 and 10.0 alike, is one level.
  const levels = new Map(
    allOf(asked, "level")
      .map(levelFrom)
      .map((level) => [levelLabel(level), level]),
  );
  const files = allOf(asked, "strips").flatMap((path) => mapFileAt("--strips", path, maps) ?? []);
  const strips = [...allOf(asked, "strip").map(stripFrom), ...files.flatMap(stripsFrom)];
  const groupOf = (strip: StripSetting): string | undefined => ("area" in strip ? undefined : strip.group);
  strips.forEach((strip, i) => {
    const map = "area" in strip;
    // A polygon is for the lines of every group.
    if (strips.slice(0, i).some((other) => other.name === strip.name && (map || groupOf(other) === groupOf(strip))))
      throw new InputError(
        "option/two-strips",
        map
          ? `${strip.area.words} bears the name of another strip. Give every strip a name of its own, or make one MultiPolygon of the two.`
          : `--strip names ${shown(strip.name)} twice. Give every strip a name of its own.`,
      );
  });
  const also = alsoFrom(asked);
  const levelQuantity = levelQuantityNamed(oneOf(asked, "level-observable") ?? BOUNDARY_FIELD.name);
  const fraction = oneOf(asked, "trust-fraction");
  if (fraction !== undefined) refuseTrustOf(levelQuantity);
  return {
    levelQuantity,
    levels: levels.size === 0 ? [levelFrom(DEFAULT_LEVEL)] : [...levels.values()],
    strips,
    confidence: numberFor("--confidence", oneOf(asked, "confidence") ?? DEFAULT_CONFIDENCE, PROBABILITY),
    ...(fraction === undefined ? {} : {trustFraction: numberFor("--trust-fraction", fraction, FRACTION)}),
    intervals: intervalsFrom(asked),
    ...(also.length === 0 ? {} : {also}),
  };
}
