/** What each rule for the bound makes of a line, side by side. */
import type {RuleAnswer} from "../inverse/nouns.ts";
import type {LineStudy} from "../study/outcome.ts";
import {type Delivery, deliveryOf} from "./delivery.ts";
import {messageText, nameText} from "./html.ts";
import {figureText, fixedText, metreText} from "./number-text.ts";

/** Empty text where no comparison was asked for. */
export function comparisonTable(study: LineStudy): string {
  const {comparison, strips} = study;
  if (comparison === undefined) return "";
  const delivery = deliveryOf(study.observable);
  const columns = [
    "<th>Rule</th>",
    `<th class="n">Norm<br><span>${delivery.field}·√m</span></th>`,
    '<th class="n">Misfit<br><span>a reading</span></th>',
    '<th class="n">Degrees of freedom</th>',
    '<th class="n">Resolution<br><span>m</span></th>',
    ...strips.map(({strip}) => `<th class="n">${nameText(strip.name)}<br><span>${delivery.density}</span></th>`),
  ];
  const rows = comparison.map((answer) => tableRow(answer, study, delivery, columns.length));
  return `<h3>Other rules for the bound</h3><p>The answers above are those of ${nameText(study.choice.rule)}. Strips here are means of the one source that each rule gives, without interval: where they differ by more than the intervals above allow, the bound decides the answer, not the readings.</p><table><thead><tr>${columns.join("")}</tr></thead><tbody>${rows.join("")}</tbody></table>`;
}

function tableRow({rule, reason, figures}: RuleAnswer, study: LineStudy, delivery: Delivery, width: number): string {
  if (figures === undefined)
    return `<tr><td>${nameText(rule)}</td><td colspan="${width - 1}">${messageText(reason)}</td></tr>`;
  const {norm, misfit, degreesOfFreedom, resolution, strips} = figures;
  const numbers = [
    figureText(delivery.toNorm(norm)),
    fixedText(misfit / study.estimate.readings, 2),
    figureText(degreesOfFreedom),
    metreText(resolution),
    ...strips.map(({plainMean}) => figureText(delivery.toDensity(plainMean))),
  ];
  const cells = numbers.map((text) => `<td class="n">${text}</td>`).join("");
  return `<tr><td>${nameText(rule)}<br><span class="small">${messageText(reason)}</span></td>${cells}</tr>`;
}
