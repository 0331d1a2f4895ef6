/** plan.csv: one row a combination and strip or level. A strip that is told from nothing at no height has 0 there; empty: not asked. */
import {csvCell, csvNumber} from "../formats/csv-text.ts";
import {deliveryOf} from "../report/delivery.ts";
import type {Plan} from "../study/plan.ts";
import {csvTable} from "./csv-table.ts";
import type {TextSink} from "./product.ts";

export async function planCsv(sink: TextSink, {settings, cases}: Plan): Promise<void> {
  const delivery = deliveryOf(settings.observables[0]!);
  const {reading, field, density, total} = delivery;
  const table = csvTable(sink);
  await table.row([
    "observable",
    "clearance_m",
    "spacing_m",
    `noise_${reading}`,
    "bound",
    `bound_norm_${field}`,
    "stations",
    "resolution_m",
    "degrees_of_freedom",
    "strip_width_m",
    `half_width_${density}`,
    `total_half_width_${total}`,
    `end_half_width_${density}`,
    `with_gradient_half_width_${density}`,
    `with_second_half_width_${density}`,
    "told_up_to_m",
    "level_m",
    `level_half_width_${field}`,
  ]);
  const toDensity = (si: number | undefined): string => csvNumber(si === undefined ? si : delivery.toDensity(si));
  for (const one of cases) {
    const head = [
      csvCell(one.observable.name),
      csvNumber(one.clearance),
      csvNumber(one.spacing),
      csvNumber(delivery.toReading(one.noise)),
      csvCell(one.bound.text),
      csvNumber(delivery.toNorm(one.norm)),
      csvNumber(one.stations),
      csvNumber(one.resolution),
      csvNumber(one.degreesOfFreedom),
    ];
    for (const strip of one.strips)
      await table.row([
        ...head,
        csvNumber(strip.width),
        toDensity(strip.middle),
        csvNumber(delivery.toDensity(strip.middle) * strip.width),
        toDensity(strip.end),
        toDensity(strip.withGradient),
        toDensity(strip.withSecond),
        csvNumber(settings.stripStrength === undefined ? undefined : (strip.highest ?? 0)),
        "",
        "",
      ]);
    for (const {level, halfWidth} of one.levels)
      await table.row([
        ...head,
        ...Array.from({length: 7}, () => ""),
        csvNumber(level),
        csvNumber(delivery.toField(halfWidth)),
      ]);
  }
  await table.flush();
}
