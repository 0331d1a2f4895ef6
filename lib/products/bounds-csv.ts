/** bounds.csv: what each rule for the bound makes of a line; one row a rule and strip, or one a rule without strips. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import type {RuleAnswer} from "../inverse/nouns.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, TextSink} from "./product.ts";

export function boundsCsv(sink: TextSink): LineProduct {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  const rowsOf = (line: string, {rule, reason, figures}: RuleAnswer): string[][] => {
    const told = [csvCell(line), csvCell(rule)];
    if (figures === undefined) return [[...told, "", "", "", "", "", "", "", "", csvCell(reason)]];
    const {multiplier, norm, bound, misfit, degreesOfFreedom, resolution, strips} = figures;
    const numbers = [
      csvNumber(delivery.toMultiplier(multiplier)),
      csvNumber(delivery.toNorm(norm)),
      csvNumber(delivery.toNorm(bound)),
      csvNumber(misfit),
      csvNumber(degreesOfFreedom),
      csvNumber(resolution),
    ];
    if (strips.length === 0) return [[...told, ...numbers, "", "", csvCell(reason)]];
    return strips.map(({strip, plainMean}) => [
      ...told,
      ...numbers,
      csvCell(strip.name),
      csvNumber(delivery.toDensity(plainMean)),
      csvCell(reason),
    ]);
  };
  return {
    begin: async ({observable}) => {
      delivery = deliveryOf(observable);
      const {field, density} = delivery;
      await table.row([
        "line",
        "rule",
        "multiplier",
        `norm_${field}_sqrt_m`,
        `bound_${field}_sqrt_m`,
        "misfit",
        "degrees_of_freedom",
        "resolution_m",
        "strip",
        `plain_mean_${density}`,
        "reason",
      ]);
    },
    line: async (outcome) => {
      if (!("study" in outcome)) return;
      for (const answer of outcome.study.comparison ?? [])
        for (const row of rowsOf(outcome.id, answer)) await table.row(row);
      await table.flush();
    },
    end: () => table.flush(),
  };
}
