/** `groundward spectrum`: how much of each mode of a source zone reaches a height. */
import {InputError} from "../../lib/errors.ts";
import {askedOf, declare} from "../options/declare.ts";
import {type Asked, isOn, type OptionGroup, oneOf} from "../options/entry.ts";
import {intervalFor} from "../options/interval-text.ts";
import {type Need, numberFor, POSITIVE} from "../options/number.ts";
import {PRINTED} from "../options/output.ts";
import {textTable} from "../table.ts";
import type {AddCommand} from "./command.ts";

const NO_LINE = "there is no survey to take it from";
const DEFAULT_COUNT = "10";
const DEFAULT_FLOOR = "1e-8";

const QUESTION: OptionGroup = {
  heading: "The question",
  entries: [
    {name: "support", value: "A:B", help: "source zone, metres along the line", required: NO_LINE},
    {name: "height", value: "H", help: "height of the sensor above the sources, m", required: NO_LINE},
    {
      name: "count",
      value: "N",
      help: "how many eigenvalues, from the largest on",
      default: {value: DEFAULT_COUNT, reason: "enough to see how fast the modes fall off"},
    },
    {
      name: "floor",
      value: "F",
      help: "a mode is usable while its eigenvalue is above F",
      default: {value: DEFAULT_FLOOR, reason: "a heuristic: about the square root of double precision"},
    },
  ],
};

const COUNT: Need = {
  words: "a whole number above 0",
  example: DEFAULT_COUNT,
  above: 0,
  whole: true,
};
const FLOOR: Need = {words: "a number between 0 and 1", example: DEFAULT_FLOOR, above: 0, below: 1};

function required(asked: Asked, name: string, example: string): string {
  const text = oneOf(asked, name);
  if (text === undefined)
    throw new InputError("option/missing", `--${name} is missing. Give it, for example --${name} ${example}.`);
  return text;
}

export const spectrumCommand: AddCommand = (create, host, finish) => {
  const command = declare(create("spectrum"), [QUESTION, PRINTED])
    .description(
      "Prints the eigenvalues of the truncated Poisson operator: the share of each mode of a source zone that is left at a height above it, to 1e-12 absolute, and how many modes are above the floor.",
    )
    .addHelpText("after", "\nExample:\n  groundward spectrum --support -1:1 --height 0.25 --count 10");
  return command.action(async () => {
    const asked = askedOf(command);
    const {from, to, group} = intervalFor("--support ", required(asked, "support", "-400:400"));
    if (group !== undefined)
      throw new InputError(
        "option/no-group",
        `--support ${group}/${from}:${to} names a group, but there are no lines here. Give A:B alone.`,
      );
    const height = numberFor("--height", required(asked, "height", "60"), {
      ...POSITIVE,
      words: "a height in metres above 0",
      example: "60",
    });
    const count = numberFor("--count", oneOf(asked, "count") ?? DEFAULT_COUNT, COUNT);
    const floor = numberFor("--floor", oneOf(asked, "floor") ?? DEFAULT_FLOOR, FLOOR);
    const {countUsableModes, poissonSpectrum} = await import("../../lib/spectral/poisson-spectrum.ts");
    const {eigenvalues} = poissonSpectrum({from, to, height, count});
    const usable = countUsableModes({from, to}, height, floor);
    if (isOn(asked, "json")) host.out.write(`${JSON.stringify({eigenvalues: [...eigenvalues], usable})}\n`);
    else {
      const rows = [...eigenvalues].map((value, n) => [`${n + 1}`, value.toFixed(12), value.toExponential(3)]);
      const heads = ["mode", "eigenvalue", "rounded"].map((head) => ({head, align: "right" as const}));
      host.out.write(textTable(heads, rows));
      host.out.write(`${usable} mode${usable === 1 ? "" : "s"} above ${floor}\n`);
    }
    finish(0);
  });
};
