/** tradeoff.csv: misfit against norm over the multipliers; d(misfit)/d(norm²) = −multiplier among its numbers. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, TextSink} from "./product.ts";

export function tradeoffCsv(sink: TextSink): LineProduct {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  return {
    begin: async ({observable}) => {
      delivery = deliveryOf(observable);
      await table.row(["line", "multiplier", "misfit", "norm"]);
    },
    line: async (outcome) => {
      if (!("study" in outcome)) return;
      const {multiplier, misfit, norm} = outcome.study.curve;
      const id = csvCell(outcome.id);
      for (let k = 0; k < multiplier.length; ++k)
        await table.row([
          id,
          csvNumber(delivery.toMultiplier(multiplier[k]!)),
          csvNumber(misfit[k]),
          csvNumber(delivery.toNorm(norm[k]!)),
        ]);
      await table.flush();
    },
    end: () => table.flush(),
  };
}
