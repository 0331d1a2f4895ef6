/** crossings.csv, one row a crossing, and crossing_lines.csv, one row a line. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {CrossingResult} from "../study/crossing-result.ts";
import {misTieFigures, ofLine} from "../survey/mis-ties.ts";
import {csvTable} from "./csv-table.ts";
import type {TextSink} from "./product.ts";

export async function writeCrossingsCsv(sink: TextSink, result: CrossingResult): Promise<void> {
  const {crossed, measured, carried, outliers} = result;
  const {lines, observable, crossings} = crossed;
  const {symbol, factor} = DELIVERY_UNIT[observable.dimension];
  const far = new Set(outliers);
  const names = lines.map(csvCell);
  const table = csvTable(sink);
  const value = (si: number | undefined): string => csvNumber(si === undefined ? undefined : si / factor);
  await table.row([
    ...["line_a", "chainage_a_m", "line_b", "chainage_b_m", "x", "y", "height_a_m", "height_b_m"],
    ...[`value_a_${symbol}`, `value_b_${symbol}`, `difference_${symbol}`],
    ...["common_level_m", `carried_a_${symbol}`, `carried_b_${symbol}`, `carried_difference_${symbol}`],
    ...["outlier", "reason"],
  ]);
  const {first, second} = crossings;
  for (let i = 0; i < crossings.count; ++i)
    await table.row([
      names[first.line[i]!]!,
      csvNumber(first.chainage[i]),
      names[second.line[i]!]!,
      csvNumber(second.chainage[i]),
      csvNumber(crossings.x[i]),
      csvNumber(crossings.y[i]),
      csvNumber(first.height[i]),
      csvNumber(second.height[i]),
      value(first.value[i]),
      value(second.value[i]),
      value(measured.differences[i]),
      csvNumber(carried?.readings.level[i]),
      value(carried?.readings.first[i]),
      value(carried?.readings.second[i]),
      value(carried?.differences[i]),
      String(far.has(i)),
      csvCell(carried?.readings.reasons.get(i) ?? ""),
    ]);
  await table.flush();
}

/** Differences of a line are its readings less those of the lines it crosses. */
export async function writeCrossingLinesCsv(sink: TextSink, result: CrossingResult): Promise<void> {
  const {crossed, perLine, measured, carried, without} = result;
  const {symbol, factor} = DELIVERY_UNIT[crossed.observable.dimension];
  const table = csvTable(sink);
  const kinds = [
    {prefix: "", differences: measured.differences},
    {prefix: "carried_", differences: carried?.differences},
  ];
  await table.row([
    "line",
    "status",
    "reason",
    ...kinds.flatMap(({prefix}) => [
      `${prefix}crossings`,
      `${prefix}mean_${symbol}`,
      `${prefix}median_${symbol}`,
      `${prefix}rms_${symbol}`,
      `${prefix}robust_deviation_${symbol}`,
      `${prefix}largest_${symbol}`,
    ]),
  ]);
  for (const [place, line] of perLine.entries()) {
    const id = crossed.lines[place]!;
    const missing = without.get(id);
    await table.row([
      csvCell(id),
      missing?.status ?? "done",
      csvCell(missing?.failure.message ?? ""),
      ...kinds.flatMap(({differences}) => {
        if (differences === undefined) return ["", "", "", "", "", ""];
        const {count, mean, median, rms, robustDeviation, largest} = misTieFigures(ofLine(line, differences));
        return [csvNumber(count), ...[mean, median, rms, robustDeviation, largest].map((si) => csvNumber(si / factor))];
      }),
    ]);
  }
  // A line that could not be read has no track, and is named all the same.
  for (const {id, failure} of crossed.failures)
    await table.row([csvCell(id), "failed", csvCell(failure.message), "0", ...Array.from({length: 11}, () => "")]);
  await table.flush();
}
