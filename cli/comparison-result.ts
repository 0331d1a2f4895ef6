/** What the rules for the bound make of each line, side by side, where that was asked. */
import type {RuleAnswer} from "../lib/inverse/nouns.ts";
import type {Delivery} from "../lib/report/delivery.ts";
import type {LineStudy} from "../lib/study/outcome.ts";
import {type Column, figure, textTable} from "./table.ts";

export interface ComparisonResult {
  add(study: LineStudy): void;
  /** Empty where nothing was compared. */
  text(): string;
  json(): Readonly<Record<string, unknown>>;
}

const left = (head: string): Column => ({head, align: "left"});
const right = (head: string): Column => ({head, align: "right"});

export function comparisonResult(delivery: Delivery): ComparisonResult {
  const {field, density} = delivery;
  const ruleRows: string[][] = [];
  const stripRows: string[][] = [];
  const without: string[] = [];
  const rules: Record<string, unknown>[] = [];
  let names: readonly string[] = [];

  const addRule = (line: string, {rule, reason, figures}: RuleAnswer, readings: number): void => {
    if (figures === undefined) {
      ruleRows.push([line, rule, "", "", "", "", ""]);
      without.push(`${line}, ${rule}: ${reason}`);
      rules.push({line, rule, reason});
      return;
    }
    const {multiplier, norm, bound, misfit, degreesOfFreedom, resolution, strips} = figures;
    ruleRows.push([
      line,
      rule,
      figure(delivery.toMultiplier(multiplier), 3),
      figure(delivery.toNorm(norm), 3),
      figure(misfit / readings, 3),
      figure(degreesOfFreedom, 3),
      figure(resolution, 3),
    ]);
    rules.push({
      line,
      rule,
      multiplier: delivery.toMultiplier(multiplier),
      [`norm_${field}_sqrt_m`]: delivery.toNorm(norm),
      [`bound_${field}_sqrt_m`]: delivery.toNorm(bound),
      misfit,
      degrees_of_freedom: degreesOfFreedom,
      resolution_m: Number.isFinite(resolution) ? resolution : null,
      strips: strips.map(({strip, plainMean}) => ({
        strip: strip.name,
        [`plain_mean_${density}`]: delivery.toDensity(plainMean),
      })),
      reason,
    });
  };

  return {
    add: ({line, comparison, strips, estimate}) => {
      if (comparison === undefined) return;
      names = comparison.map(({rule}) => rule);
      for (const answer of comparison) addRule(line.id, answer, estimate.readings);
      strips.forEach(({strip}, place) => {
        const means = comparison.map(({figures}) => figures?.strips[place]?.plainMean);
        stripRows.push([
          line.id,
          strip.name,
          ...means.map((mean) => figure(mean === undefined ? undefined : delivery.toDensity(mean))),
        ]);
      });
    },
    text: () => {
      if (ruleRows.length === 0) return "";
      const heads = [
        left("line"),
        left("rule"),
        right("multiplier"),
        right(`norm ${field}·√m`),
        right("misfit/expected"),
        right("degrees of freedom"),
        right("resolution m"),
      ];
      const stripHeads = [left("line"), left(`plain mean ${density}`), ...names.map(right)];
      return [
        `\n${textTable(heads, ruleRows)}`,
        ...(stripRows.length === 0 ? [] : [`\n${textTable(stripHeads, stripRows)}`]),
        ...(without.length === 0 ? [] : [`\n${without.join("\n")}\n`]),
      ].join("");
    },
    json: () => (rules.length === 0 ? {} : {rules}),
  };
}
