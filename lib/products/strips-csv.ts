/** strips.csv: what lies in each strip that was asked about, in physical units. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {stripAnswer} from "../report/strip-answer.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, TextSink} from "./product.ts";

export function stripsCsv(sink: TextSink): LineProduct {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  return {
    begin: async ({observable}) => {
      delivery = deliveryOf(observable);
      const {density, total} = delivery;
      await table.row([
        "line",
        "strip",
        "from_m",
        "to_m",
        `mean_${density}`,
        `lower_${density}`,
        `upper_${density}`,
        `total_${total}`,
        `total_lower_${total}`,
        `total_upper_${total}`,
        `plain_mean_${density}`,
        "interval_basis",
      ]);
    },
    line: async (outcome) => {
      if (!("study" in outcome)) return;
      const {strips, choice} = outcome.study;
      for (const estimate of strips) {
        const {mean, total, plainMean} = stripAnswer(estimate, delivery);
        await table.row([
          csvCell(outcome.id),
          csvCell(estimate.strip.name),
          csvNumber(estimate.strip.from),
          csvNumber(estimate.strip.to),
          csvNumber(mean.value),
          csvNumber(mean.lower),
          csvNumber(mean.upper),
          csvNumber(total.value),
          csvNumber(total.lower),
          csvNumber(total.upper),
          csvNumber(plainMean),
          choice.basis,
        ]);
      }
      await table.flush();
    },
    end: () => table.flush(),
  };
}
