/** Every rule for the bound. Help texts and option parsing read this list; a further rule is one file and one line here. */
import {InputError} from "../../errors.ts";
import {balance} from "./balance.ts";
import {compareRules} from "./compare.ts";
import {corner} from "./corner.ts";
import {crossValidation} from "./cross-validation.ts";
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

const named = (rule: BoundRule) => (text: string) => (text === rule.text ? rule : undefined);

/** Rules that choose for themselves, in the order in which they are compared; the first gives the answer there. */
const CHOOSING = [discrepancy, crossValidation, corner, balance];

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
    parse: named(discrepancy),
  },
  {
    usage: "cross-validation",
    summary: "chosen by leaving out blocks of readings: the smoothest source that foretells them from the others",
    parse: named(crossValidation),
  },
  {
    usage: "corner",
    summary: "chosen where the curve of misfit against norm turns most sharply",
    parse: named(corner),
  },
  {
    usage: "balance",
    summary: "chosen by the noise: the smoothest source from which less smooth ones differ by no more than noise",
    parse: named(balance),
  },
  {
    usage: "compare",
    summary: `answers by ${CHOOSING[0].name} and sets ${CHOOSING.slice(1)
      .map(({name}) => name)
      .join(", ")} beside it`,
    parse: named(compareRules(CHOOSING)),
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
