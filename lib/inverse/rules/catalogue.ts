/** Every rule for the bound. Help texts and option parsing read this list; a further rule is one file and one line here. */
import {InputError} from "../../errors.ts";
import {discrepancy} from "./discrepancy.ts";
import {givenBound} from "./given.ts";
import type {BoundRule} from "./rule.ts";

export interface RuleEntry {
  /** As the option takes it. */
  readonly usage: string;
  readonly summary: string;
  /** The rule for this text, or undefined when the text is not its own. */
  parse(text: string, fieldFactor: number): BoundRule | undefined;
}

const given =
  (word: string, norm: (value: number, supportLength: number) => number) => (text: string, fieldFactor: number) => {
    if (!text.startsWith(`${word}:`)) return undefined;
    const value = Number(text.slice(word.length + 1));
    if (text.length === word.length + 1 || !(value > 0 && Number.isFinite(value)))
      throw new InputError(
        "bound/not-positive",
        `--bound ${text} is not a positive bound. Give a strength that the sources cannot exceed, for example ${word}:0.5.`,
      );
    return givenBound(text, (supportLength) => norm(value, supportLength) * fieldFactor);
  };

export const BOUND_RULES: readonly RuleEntry[] = [
  {
    usage: "rms:V",
    summary: "root-mean-square of the boundary field over the source zone, V in mGal or nT",
    parse: given("rms", (value, supportLength) => value * Math.sqrt(supportLength)),
  },
  {
    usage: "norm:V",
    summary: "L2 norm of the boundary field over the source zone, V in mGal·√m or nT·√m",
    parse: given("norm", (value) => value),
  },
  {
    usage: "discrepancy",
    summary: "chosen by the noise: the smoothest source whose misfit the noise explains",
    parse: (text) => (text === discrepancy.name ? discrepancy : undefined),
  },
];

/**
 * @param text `rms:0.5`, `norm:3` or the name of a rule
 * @param fieldFactor one delivery unit of the boundary field in SI
 * @throws {InputError} `bound/unknown`, `bound/not-positive`
 */
export function boundRuleNamed(text: string, fieldFactor: number): BoundRule {
  for (const entry of BOUND_RULES) {
    const rule = entry.parse(text, fieldFactor);
    if (rule !== undefined) return rule;
  }
  throw new InputError(
    "bound/unknown",
    `--bound ${text} is not a bound known here. Give one of ${BOUND_RULES.map((entry) => entry.usage).join(", ")}.`,
  );
}
