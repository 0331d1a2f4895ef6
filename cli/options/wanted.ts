/** Options that say which answers are wanted, and how they become settings. */
import {type LevelSetting, levelLabel} from "../../lib/continuation/level-profile.ts";
import {InputError} from "../../lib/errors.ts";
import type {Strip} from "../../lib/inverse/nouns.ts";
import type {WantedSettings} from "../../lib/study/settings.ts";
import {shown} from "../printable.ts";
import {type Asked, allOf, type OptionGroup, oneOf} from "./entry.ts";
import {intervalFor} from "./interval-text.ts";
import {NOT_NEGATIVE, numberFor} from "./number.ts";

export const WANTED: OptionGroup = {
  heading: "What is wanted",
  entries: [
    {
      name: "level",
      value: "L|ground+D",
      repeated: true,
      help: "field at L metres above the boundary, or D metres above the ground; 0 (default) is the boundary itself",
    },
    {
      name: "strip",
      value: "NAME=A:B",
      repeated: true,
      help: "mean and total of the source between the chainages A and B, with intervals (NAME=G2/A:B for the lines of group G2)",
    },
    {name: "confidence", value: "P", help: "coverage of every interval, between 0 and 1; default 0.95"},
  ],
};

const LEVEL = {
  ...NOT_NEGATIVE,
  words: "a height in metres, 0 or above (nothing is known below the boundary)",
  example: "10",
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

/** @throws {InputError} `option/…` */
export function wantedFrom(asked: Asked): WantedSettings {
  // A level asked twice, 10 and 10.0 alike, is one level.
  const levels = new Map(
    allOf(asked, "level")
      .map(levelFrom)
      .map((level) => [levelLabel(level), level]),
  );
  const strips = allOf(asked, "strip").map(stripFrom);
  strips.forEach((strip, i) => {
    if (strips.slice(0, i).some((other) => other.name === strip.name && other.group === strip.group))
      throw new InputError(
        "option/two-strips",
        `--strip names ${shown(strip.name)} twice. Give every strip a name of its own.`,
      );
  });
  const confidence = oneOf(asked, "confidence");
  return {
    levels: levels.size === 0 ? [{kind: "above-boundary", height: 0}] : [...levels.values()],
    strips,
    confidence:
      confidence === undefined
        ? 0.95
        : numberFor("--confidence", confidence, {
            words: "a probability between 0 and 1, both excluded",
            example: "0.95",
            holds: (value) => value > 0 && value < 1,
          }),
  };
}
