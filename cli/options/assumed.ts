/** Options that say what is assumed about the sources, and how they become settings. */
import {InputError} from "../../lib/errors.ts";
import {supportOf} from "../../lib/geometry/interval.ts";
import {BOUND_RULES, boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import type {BoundRule} from "../../lib/inverse/rules/rule.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {DELIVERY_UNIT} from "../../lib/quantities.ts";
import type {ModelSettings, SupportSetting} from "../../lib/study/settings.ts";
import type {BoundarySetting} from "../../lib/survey/boundary.ts";
import {shown} from "../printable.ts";
import {type Asked, allOf, type OptionGroup, oneOf} from "./entry.ts";
import {intervalFor} from "./interval-text.ts";
import {NOT_NEGATIVE, numberFor, numberIn, POSITIVE} from "./number.ts";

const REGIONALS = {none: -1, "0": 0, "1": 1, "2": 2, "3": 3} as const;
const DEFAULT_BOUND = "discrepancy";

export const ASSUMED: OptionGroup = {
  heading: "What is assumed",
  entries: [
    {
      name: "boundary",
      value: "Z|depth-D",
      help: "flat boundary with every source at or below it: at elevation Z metres, or D metres below the lowest ground under the line. Default where the sensor is known by clearance only: the ground, taken as flat",
    },
    {
      name: "support",
      value: "A:B",
      repeated: true,
      help: "source zone, where sources may be: metres of chainage, which is distance along the line (G2/A:B for the lines of group G2). Default: the line and five median heights beyond either end",
    },
    {
      name: "bound",
      value: "RULE",
      help: `bound on the sources, which fixes the multiplier (regularisation parameter); default ${DEFAULT_BOUND}. ${BOUND_RULES.map(({usage, summary}) => `${usage}: ${summary}`).join("; ")}`,
    },
    {
      name: "regional",
      value: "none|0|1|2|3",
      help: "degree of the polynomial estimated together with the source; default 1",
    },
    {
      name: "panel",
      value: "W",
      help: "widest panel of the source zone in metres; default: a quarter of the least height",
    },
  ],
};

function boundaryFrom(text: string | undefined): BoundarySetting | undefined {
  if (text === undefined) return undefined;
  const depth = /^depth-(.*)$/.exec(text)?.[1];
  if (depth !== undefined)
    return {
      kind: "depth",
      depth: numberFor("--boundary depth-", depth, {...NOT_NEGATIVE, words: "a depth, 0 or above", example: "5"}),
    };
  const elevation = numberIn(text);
  if (elevation === undefined)
    throw new InputError(
      "option/not-a-boundary",
      `--boundary ${shown(text)} is not understood. Give an elevation in metres, for example --boundary -2000, or a depth below the lowest ground, for example --boundary depth-5.`,
    );
  return {kind: "elevation", elevation};
}

/** Supports of one group, or for every line, must be disjoint. */
function supportsFrom(asked: Asked): readonly SupportSetting[] {
  const supports = allOf(asked, "support").map((text) => intervalFor("--support ", text));
  for (const group of new Set(supports.map((support) => support.group)))
    supportOf(supports.filter((support) => support.group === group || support.group === undefined));
  return supports;
}

function regionalFrom(text: string | undefined): ModelSettings["regional"] {
  if (text === undefined) return 1;
  if (!Object.hasOwn(REGIONALS, text))
    throw new InputError(
      "option/unknown-word",
      `--regional ${shown(text)} is not known. Give the degree of a polynomial, ${Object.keys(REGIONALS).join(", ")}.`,
    );
  return REGIONALS[text as keyof typeof REGIONALS];
}

/** @throws {InputError} `option/…`, `support/…` */
export function modelFrom(asked: Asked): ModelSettings {
  const panel = oneOf(asked, "panel");
  return {
    boundary: boundaryFrom(oneOf(asked, "boundary")),
    support: supportsFrom(asked),
    panel:
      panel === undefined
        ? undefined
        : numberFor("--panel", panel, {...POSITIVE, words: "a width in metres above 0", example: "5"}),
    regional: regionalFrom(oneOf(asked, "regional")),
  };
}

/** @throws {InputError} of the catalogue of rules */
export function boundFrom(asked: Asked, observable: Observable): BoundRule {
  return boundRuleNamed(oneOf(asked, "bound") ?? DEFAULT_BOUND, DELIVERY_UNIT[observable.source.fieldDimension].factor);
}
