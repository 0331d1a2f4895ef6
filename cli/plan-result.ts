/** What a plan prints: tables for people, an object for scripts. */
import {deliveryOf} from "../lib/report/delivery.ts";
import type {Plan, PlanCase} from "../lib/study/plan.ts";
import {type Column, figure, textTable} from "./table.ts";

const right = (head: string): Column => ({head, align: "right"});
/** Wider than other tables: all columns are numbers. */
const WIDEST = 120;

export function planText({settings, cases}: Plan): string {
  const delivery = deliveryOf(settings.observables[0]!);
  const {reading, density, total, field} = delivery;
  const asked = settings.stripStrength !== undefined;
  const lead = ["clearance m", "spacing m", `noise ${reading}`, "bound"].map(right);
  const leadOf = ({clearance, spacing, noise, bound}: PlanCase): string[] => [
    figure(clearance),
    figure(spacing),
    figure(delivery.toReading(noise)),
    bound.text,
  ];
  const share = (value: number | undefined, of: number): string =>
    value === undefined ? "" : `x${figure(value / of, 3)}`;
  const strips = [
    ...lead,
    ...["strip m", `mean ± ${density}`, `total ± ${total}`, "at end ±", "+gradient", "+2nd pass"].map(right),
    ...(asked ? [right("told to m")] : []),
  ];
  const others = [
    ...lead,
    ...["stations", "resolution m", "dof", ...settings.levels.map((level) => `level ${level} ± ${field}`)].map(right),
  ];
  return settings.observables
    .map((observable) => {
      const own = cases.filter((one) => one.observable === observable);
      const stripRows = own.flatMap((one) =>
        one.strips.map((strip) => [
          ...leadOf(one),
          figure(strip.width),
          figure(delivery.toDensity(strip.middle), 3),
          figure(delivery.toDensity(strip.middle) * strip.width, 3),
          figure(delivery.toDensity(strip.end), 3),
          share(strip.withGradient, strip.middle),
          share(strip.withSecond, strip.middle),
          ...(asked ? [strip.highest === undefined ? "never" : figure(strip.highest, 3)] : []),
        ]),
      );
      const otherRows = own.map((one) => [
        ...leadOf(one),
        `${one.stations}`,
        figure(one.resolution, 3),
        figure(one.degreesOfFreedom, 3),
        ...one.levels.map(({halfWidth}) => figure(delivery.toField(halfWidth), 3)),
      ]);
      return `${observable.name}\n${textTable(strips, stripRows, WIDEST)}\n${textTable(others, otherRows, WIDEST)}`;
    })
    .join("\n");
}

/** Units stand at the end of the names, as in the files. */
export function planJson({settings, cases}: Plan): Readonly<Record<string, unknown>> {
  const delivery = deliveryOf(settings.observables[0]!);
  const {reading, density, total, field} = delivery;
  const toDensity = (si: number | undefined): number | null => (si === undefined ? null : delivery.toDensity(si));
  return {
    confidence: settings.confidence,
    length_m: settings.length,
    cases: cases.map((one) => ({
      observable: one.observable.name,
      clearance_m: one.clearance,
      spacing_m: one.spacing,
      [`noise_${reading}`]: delivery.toReading(one.noise),
      bound: one.bound.text,
      [`bound_norm_${field}_sqrt_m`]: delivery.toNorm(one.norm),
      stations: one.stations,
      support_length_m: one.supportLength,
      multiplier: delivery.toMultiplier(one.multiplier),
      resolution_m: one.resolution,
      degrees_of_freedom: one.degreesOfFreedom,
      second_clearance_m: one.secondClearance,
      strips: one.strips.map((strip) => ({
        width_m: strip.width,
        [`half_width_${density}`]: toDensity(strip.middle),
        [`total_half_width_${total}`]: delivery.toDensity(strip.middle) * strip.width,
        [`end_half_width_${density}`]: toDensity(strip.end),
        [`with_gradient_half_width_${density}`]: toDensity(strip.withGradient),
        [`with_second_half_width_${density}`]: toDensity(strip.withSecond),
        // As in plan.csv: 0 at no height, null where it was not asked.
        told_up_to_m: settings.stripStrength === undefined ? null : (strip.highest ?? 0),
      })),
      levels: one.levels.map(({level, halfWidth}) => ({
        level_m: level,
        [`half_width_${field}`]: delivery.toField(halfWidth),
      })),
    })),
  };
}
