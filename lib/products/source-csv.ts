/** source.csv: one row a panel, the one source and its averages with their intervals. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, TextSink} from "./product.ts";

export function sourceCsv(sink: TextSink): LineProduct {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  return {
    begin: async ({observable}) => {
      delivery = deliveryOf(observable);
      const u = delivery.field;
      await table.row([
        "line",
        "from_m",
        "to_m",
        "x",
        "y",
        `source_${u}`,
        `average_${u}`,
        `lower_${u}`,
        `upper_${u}`,
        "averaged_over_m",
        "interval_basis",
        "resolution_m",
      ]);
    },
    line: async (outcome) => {
      if (!("study" in outcome)) return;
      const {line, panels, estimate, averages, choice, resolution} = outcome.study;
      const id = csvCell(outcome.id);
      const field = (si: number | undefined): string => csvNumber(delivery.toField(si!));
      for (let j = 0; j < panels.count; ++j) {
        const place = line.locate?.(panels.centre[j]!);
        await table.row([
          id,
          csvNumber(panels.from[j]),
          csvNumber(panels.to[j]),
          csvNumber(place?.[0]),
          csvNumber(place?.[1]),
          field(estimate.density[j]),
          field(averages.value[j]),
          field(averages.lower[j]),
          field(averages.upper[j]),
          csvNumber(averages.averagedOver[j]),
          choice.basis,
          csvNumber(resolution.local[j]),
        ]);
      }
      await table.flush();
    },
    end: () => table.flush(),
  };
}
