/** bounds_assumed.csv: what the answers would be at multiples of a bound that was assumed, line by line. */

import {levelLabel} from "../continuation/level-profile.ts";
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, TextSink} from "./product.ts";

/** A strip has mean and interval; levels and panel averages have the median of their half-widths along the line. */
export function boundsAssumedCsv(sink: TextSink): LineProduct {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  return {
    begin: async ({observable, quantity}) => {
      delivery = deliveryOf(observable, quantity);
      const {density, field, level} = delivery;
      await table.row([
        "line",
        "of",
        "name",
        "factor",
        `bound_${field}_sqrt_m`,
        `mean_${density}`,
        `lower_${density}`,
        `upper_${density}`,
        `level_half_width_${level}`,
        `average_half_width_${field}`,
      ]);
    },
    line: async (outcome) => {
      if (!("study" in outcome) || outcome.study.atBounds === undefined) return;
      const {strips, levels, atBounds} = outcome.study;
      const id = csvCell(outcome.id);
      for (const {factor, bound, ...at} of atBounds) {
        const head = (of: string, name: string): string[] => [
          id,
          of,
          csvCell(name),
          csvNumber(factor),
          csvNumber(delivery.toNorm(bound)),
        ];
        for (const [k, {value, halfWidth}] of at.strips.entries())
          await table.row([
            ...head("strip", strips[k]!.strip.name),
            csvNumber(delivery.toDensity(value)),
            csvNumber(delivery.toDensity(value - halfWidth)),
            csvNumber(delivery.toDensity(value + halfWidth)),
            "",
            "",
          ]);
        for (const [k, half] of at.levels.entries())
          await table.row([
            ...head("level", levelLabel(levels[k]!.setting)),
            "",
            "",
            "",
            csvNumber(delivery.toLevel(half)),
            "",
          ]);
        await table.row([...head("averages", ""), "", "", "", "", csvNumber(delivery.toField(at.averages))]);
      }
      await table.flush();
    },
    end: () => table.flush(),
  };
}
