/** Where no bound was given: the answers at multiples of the one that was assumed, after the table of strips. */

import {BOUND_FACTORS} from "../lib/continuation/at-bounds.ts";
import {levelLabel} from "../lib/continuation/level-profile.ts";
import {DELIVERY_UNIT} from "../lib/quantities.ts";
import {assumedWords, factorText} from "../lib/report/bounds-words.ts";
import type {Delivery} from "../lib/report/delivery.ts";
import type {LineStudy} from "../lib/study/outcome.ts";
import {paragraph} from "./paragraph.ts";
import {type Column, figure, textTable} from "./table.ts";

export interface BoundsResult {
  add(id: string, study: LineStudy): void;
  text(): string;
  /** Empty where every bound was given. */
  json(): readonly Readonly<Record<string, unknown>>[];
}

export function boundsResult({field, density, toDensity, toField, toNorm}: Delivery): BoundsResult {
  const stripRows: string[][] = [];
  const halfRows: string[][] = [];
  const entries: Record<string, unknown>[] = [];
  return {
    add: (id, {atBounds, strips, levels}) => {
      if (atBounds === undefined) return;
      strips.forEach(({strip}, k) => {
        const intervals = atBounds.map(({strips: at}) => {
          const {value, halfWidth} = at[k]!;
          return `${figure(toDensity(value - halfWidth), 3)} .. ${figure(toDensity(value + halfWidth), 3)}`;
        });
        stripRows.push([id, strip.name, ...intervals]);
      });
      levels.forEach(({setting, dimension}, k) => {
        const {factor, symbol} = DELIVERY_UNIT[dimension];
        if (atBounds.every(({levels: at}) => Number.isNaN(at[k]!))) return;
        halfRows.push([
          id,
          `level ${levelLabel(setting)}, ${symbol}`,
          ...atBounds.map(({levels: at}) => figure(at[k]! / factor, 3)),
        ]);
      });
      halfRows.push([id, `panel averages, ${field}`, ...atBounds.map(({averages}) => figure(toField(averages), 3))]);
      for (const {factor, bound, ...at} of atBounds)
        entries.push({
          line: id,
          factor,
          [`bound_${field}_sqrt_m`]: toNorm(bound),
          strips: at.strips.map(({value, halfWidth}, k) => ({
            strip: strips[k]!.strip.name,
            [`mean_${density}`]: toDensity(value),
            [`lower_${density}`]: toDensity(value - halfWidth),
            [`upper_${density}`]: toDensity(value + halfWidth),
          })),
          levels: at.levels.map((half, k) => {
            const {factor: unit, symbol} = DELIVERY_UNIT[levels[k]!.dimension];
            return {level: levelLabel(levels[k]!.setting), [`median_half_width_${symbol}`]: half / unit};
          }),
          [`average_median_half_width_${field}`]: toField(at.averages),
        });
    },
    text: () => {
      if (halfRows.length === 0) return "";
      const factors = BOUND_FACTORS.map((factor): Column => ({head: factorText(factor), align: "right"}));
      const heads = (of: string): Column[] => [{head: "line", align: "left"}, {head: of, align: "left"}, ...factors];
      const strips = stripRows.length === 0 ? "" : `${textTable(heads(`mean of strip, ${density}`), stripRows)}\n`;
      return `\n${paragraph("", assumedWords(), 100, "")}\n${strips}${textTable(heads("median half-width"), halfRows)}`;
    },
    json: () => entries,
  };
}
