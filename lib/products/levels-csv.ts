/**
 * levels.csv: the field at every station used, level after level in the order asked,
 * stations in the order of the file; `level_m` is the height above the boundary under that station.
 */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {type Delivery, deliveryOf} from "../report/delivery.ts";
import {type CsvTable, csvTable} from "./csv-table.ts";
import type {LineProduct, TextSink} from "./product.ts";

export function levelsCsv(sink: TextSink): LineProduct {
  const table: CsvTable = csvTable(sink);
  let delivery: Delivery;
  return {
    begin: async ({observable, quantity}) => {
      delivery = deliveryOf(observable, quantity);
      const u = delivery.level;
      await table.row([
        "line",
        "row",
        "chainage_m",
        "x",
        "y",
        "level_m",
        `field_${u}`,
        `lower_${u}`,
        `upper_${u}`,
        "averaged_over_m",
        "interval_basis",
      ]);
    },
    line: async (outcome) => {
      if (!("study" in outcome)) return;
      const {line, levels, choice} = outcome.study;
      const {stations} = line;
      const id = csvCell(outcome.id);
      const field = (si: number | undefined): string => csvNumber(delivery.toLevel(si!));
      for (const level of levels)
        for (let i = 0; i < stations.count; ++i)
          await table.row([
            id,
            csvNumber(stations.row[i]),
            csvNumber(stations.chainage[i]),
            csvNumber(stations.x?.[i]),
            csvNumber(stations.y?.[i]),
            csvNumber(level.height[i]),
            field(level.value[i]),
            field(level.lower[i]),
            field(level.upper[i]),
            csvNumber(level.averagedOver[i]),
            choice.basis,
          ]);
      await table.flush();
    },
    end: () => table.flush(),
  };
}
