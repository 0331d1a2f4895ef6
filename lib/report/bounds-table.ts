/** The answers of a line at multiples of the bound that was assumed. */

import {DELIVERY_UNIT} from "../quantities.ts";
import type {LineStudy} from "../study/outcome.ts";
import {assumedWords, factorText} from "./bounds-words.ts";
import {deliveryOf} from "./delivery.ts";
import {nameText} from "./html.ts";
import {levelWords} from "./level-words.ts";
import {bracketText, figureText} from "./number-text.ts";

/** Empty where the bound was given. */
export function boundsTable({atBounds, strips, levels, observable}: LineStudy): string {
  if (atBounds === undefined) return "";
  const {density, field, toDensity, toField, toNorm} = deliveryOf(observable);
  const row = (name: string, unit: string, cells: readonly string[]): string =>
    `<tr><td>${name} <span class="small">${unit}</span></td>${cells.map((cell) => `<td class="n">${cell}</td>`).join("")}</tr>`;
  const heads = atBounds.map(
    ({factor, bound}) =>
      `<th class="n">${factorText(factor)}<br><span>${figureText(toNorm(bound))} ${field}·√m</span></th>`,
  );
  const rows = [
    ...strips.map(({strip}, k) =>
      row(
        `Mean of ${nameText(strip.name)}`,
        density,
        atBounds.map(({strips: at}) => {
          const {value, halfWidth} = at[k]!;
          return bracketText(toDensity(value), toDensity(value - halfWidth), toDensity(value + halfWidth));
        }),
      ),
    ),
    ...levels.flatMap(({setting, dimension}, k) => {
      const {factor, symbol} = DELIVERY_UNIT[dimension];
      if (atBounds.every(({levels: at}) => Number.isNaN(at[k]!))) return [];
      const halves = atBounds.map(({levels: at}) => `± ${figureText(at[k]! / factor)}`);
      return [row(`Median half-width ${levelWords(setting)}`, symbol, halves)];
    }),
    row(
      "Median half-width of the averages",
      field,
      atBounds.map(({averages}) => `± ${figureText(toField(averages))}`),
    ),
  ];
  return `<p>${assumedWords()}</p><table><thead><tr><th>If sources are at most</th>${heads.join("")}</tr></thead><tbody>${rows.join("")}</tbody></table>`;
}
