/** The rows (or columns) of a grid in a few figures, gathered as they come. */
import type {RowStudy} from "../study/outcome.ts";
import type {Delivery} from "./delivery.ts";
import {messageText, nameText} from "./html.ts";
import {figureText, fixedText, metreText} from "./number-text.ts";

interface Range {
  least: number;
  greatest: number;
  sum: number;
  count: number;
}

const empty = (): Range => ({least: Number.POSITIVE_INFINITY, greatest: Number.NEGATIVE_INFINITY, sum: 0, count: 0});

function extend(range: Range, value: number): void {
  if (!Number.isFinite(value)) return;
  range.least = Math.min(range.least, value);
  range.greatest = Math.max(range.greatest, value);
  range.sum += value;
  ++range.count;
}

export interface GridLedger {
  take(study: RowStudy): void;
  /** Pairs of a definition list; empty when no row was answered. */
  pairs(delivery: Delivery): readonly (readonly [string, string])[];
}

export function gridLedger(): GridLedger {
  const ranges = {
    readings: empty(),
    multiplier: empty(),
    noise: empty(),
    misfit: empty(),
    resolution: empty(),
    degrees: empty(),
    halfWidth: empty(),
  };
  let chosen = "";
  return {
    take(study) {
      extend(ranges.readings, study.stations);
      extend(ranges.multiplier, study.choice.multiplier);
      extend(ranges.noise, study.noise);
      extend(ranges.misfit, study.misfit / study.misfitExpected);
      extend(ranges.resolution, study.resolution);
      extend(ranges.degrees, study.degreesOfFreedom);
      for (const half of study.source.halfWidth) extend(ranges.halfWidth, half);
      if (chosen === "") chosen = `${nameText(study.choice.rule)}: ${messageText(study.choice.reason)}`;
    },
    pairs(delivery) {
      if (ranges.readings.count === 0) return [];
      const {field, reading} = delivery;
      return [
        [
          "Readings",
          `${fixedText(ranges.readings.sum, 0)} in all; ${rangeText(ranges.readings, (n) => fixedText(n, 0))} in one`,
        ],
        ["Multiplier", rangeText(ranges.multiplier, (si) => figureText(delivery.toMultiplier(si)))],
        ["Chosen by", chosen],
        ["Noise", `${rangeText(ranges.noise, (si) => figureText(delivery.toReading(si)))} ${reading}`],
        ["Misfit per reading", rangeText(ranges.misfit, (ratio) => fixedText(ratio, 2))],
        ["Degrees of freedom", rangeText(ranges.degrees, (degrees) => figureText(degrees))],
        ["Resolution", `${rangeText(ranges.resolution, metreText)} m`],
        [
          "Half-width of the source",
          `${rangeText(ranges.halfWidth, (si) => figureText(delivery.toField(si)))} ${field}`,
        ],
      ];
    },
  };
}

/** `mean (least to greatest)`, or the one figure where all agree. */
function rangeText({least, greatest, sum, count}: Range, text: (value: number) => string): string {
  if (count === 0) return "–";
  const [a, b] = [text(least), text(greatest)];
  return a === b ? a : `${text(sum / count)} on average (${a} to ${b})`;
}
