/** The answer to what was asked: each strip, line by line, drawn on one axis and in figures. */

import {extent} from "d3-array";
import {scaleLinear} from "d3-scale";
import type {IntervalKind} from "../inverse/interval-kind.ts";
import type {Strip} from "../inverse/nouns.ts";
import type {LineStudy} from "../study/outcome.ts";
import {type Delivery, deliveryOf} from "./delivery.ts";
import {lineMark, px} from "./figures/svg.ts";
import {nameText} from "./html.ts";
import {intervalNoun} from "./interval-words.ts";
import {bracketSigns, bracketText, figureText, metreText, percentText} from "./number-text.ts";
import {type Bracket, type StripAnswer, stripAnswer} from "./strip-answer.ts";

export interface StripRow {
  readonly line: string;
  readonly strip: Strip;
  readonly answer: StripAnswer;
}

export function stripRows(study: LineStudy): readonly StripRow[] {
  const delivery = deliveryOf(study.observable);
  return study.strips.map((estimate) => ({
    line: study.line.id,
    strip: estimate.strip,
    answer: stripAnswer(estimate, delivery),
  }));
}

/** What an interval says about the sign, as it is printed: an end that is printed as zero leaves zero in. */
export function signText({lower, upper}: Bracket): string {
  const [low, high] = bracketSigns(lower, upper);
  if (low > 0) return "above zero";
  if (high < 0) return "below zero";
  return "not told from zero";
}

/** Rows grouped by strip; empty text when there are none. @param withLine whether to name the line of each row */
export function stripTable(
  rows: readonly StripRow[],
  delivery: Delivery,
  confidence: number,
  withLine: boolean,
  intervals?: IntervalKind,
): string {
  if (rows.length === 0) return "";
  const groups = new Map<string, StripRow[]>();
  for (const row of rows) {
    // One name in one group is one strip, also where a polygon gives each line another stretch of it.
    const {name, group} = row.strip;
    const key = JSON.stringify([name, group]);
    const together = groups.get(key);
    if (together === undefined) groups.set(key, [row]);
    else together.push(row);
  }
  const percent = percentText(confidence);
  const body = [...groups.values()].map((group) => {
    const {name, from, to} = group[0]!.strip;
    const alike = group.every(({strip}) => strip.from === from && strip.to === to);
    const [least, greatest] = extent([0, ...group.flatMap(({answer}) => [answer.mean.lower, answer.mean.upper])]);
    const span = `${nameText(name)} <span class="small">${alike ? `${metreText(from)} to ${metreText(to)} m` : "a polygon, elsewhere on each line"}, drawn from ${figureText(least!, 2)} to ${figureText(greatest!, 2)} ${delivery.density}</span>`;
    const heading = withLine ? `<tr class="group"><td colspan="5">${span}</td></tr>` : "";
    return heading + group.map((row) => tableRow(row, [least!, greatest!], withLine)).join("");
  });
  return `<table><thead><tr><th>${withLine ? "Line" : "Strip"}</th><th><span>${percent} ${intervalNoun(intervals)} of the mean</span></th><th class="n">Mean ${delivery.densityNoun}<br><span>${delivery.density}</span></th><th class="n">Total<br><span>${delivery.total}, per metre of strike</span></th><th>Sign</th></tr></thead><tbody>${body.join("")}</tbody></table>`;
}

function tableRow({line, strip, answer}: StripRow, domain: readonly [number, number], withLine: boolean): string {
  const {mean, total} = answer;
  const name = withLine
    ? nameText(line)
    : `${nameText(strip.name)} <span class="small">${metreText(strip.from)} to ${metreText(strip.to)} m</span>`;
  return `<tr><td>${name}</td><td class="w">${whisker(mean, domain)}</td><td class="n">${bracketText(mean.value, mean.lower, mean.upper)}</td><td class="n">${bracketText(total.value, total.lower, total.upper)}</td><td class="s">${signText(mean)}</td></tr>`;
}

const WIDTH = 180;

/** The interval as a bar with its centre, against zero. */
function whisker(mean: Bracket, domain: readonly [number, number]): string {
  const x = scaleLinear(domain[1] > domain[0] ? domain : [domain[0] - 1, domain[1] + 1], [6, WIDTH - 6]);
  return `<svg viewBox="0 0 ${WIDTH} 22" width="${WIDTH}" height="22" aria-hidden="true">${lineMark("grid", 0, 11, WIDTH, 11)}${lineMark("zero", x(0), 1, x(0), 21)}${lineMark("whisker", x(mean.lower), 11, x(mean.upper), 11)}<circle class="point" cx="${px(x(mean.value))}" cy="11" r="3.4"/></svg>`;
}
