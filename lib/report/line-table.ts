/** All lines at a glance. */
import {least as leastOf} from "d3-array";
import type {LineOutcome} from "../study/outcome.ts";
import {type Delivery, deliveryOf} from "./delivery.ts";
import {messageText, nameText} from "./html.ts";
import {bracketText, countText, fixedText, metreText} from "./number-text.ts";
import type {Bracket} from "./strip-answer.ts";

export interface LineRow {
  readonly index: number;
  readonly id: string;
  readonly status: LineOutcome["status"];
  /** Why there is no answer; undefined where there is one. */
  readonly reason: string | undefined;
  readonly stations: number;
  readonly from: number;
  readonly to: number;
  /** The average furthest from zero among panels below stations, delivered, and its chainage. */
  readonly strongest: (Bracket & {readonly at: number}) | undefined;
  readonly misfitRatio: number;
  readonly resolution: number;
}

export function lineRow(outcome: LineOutcome, index: number): LineRow {
  if (!("study" in outcome)) {
    const {id, status, failure} = outcome;
    const none = Number.NaN;
    return {
      index,
      id,
      status,
      reason: failure.message,
      stations: none,
      from: none,
      to: none,
      strongest: undefined,
      misfitRatio: none,
      resolution: none,
    };
  }
  const {line, panels, averages, estimate, resolution, observable} = outcome.study;
  const {toField} = deliveryOf(observable);
  let from = Number.POSITIVE_INFINITY;
  let to = Number.NEGATIVE_INFINITY;
  for (const chainage of line.stations.chainage) {
    from = Math.min(from, chainage);
    to = Math.max(to, chainage);
  }
  const below = Array.from(panels.centre.keys()).filter((j) => panels.centre[j]! >= from && panels.centre[j]! <= to);
  const j = leastOf(below, (panel) => -Math.abs(averages.value[panel]!));
  return {
    index,
    id: outcome.id,
    status: outcome.status,
    reason: undefined,
    stations: line.stations.count,
    from,
    to,
    strongest:
      j === undefined
        ? undefined
        : {
            value: toField(averages.value[j]!),
            lower: toField(averages.lower[j]!),
            upper: toField(averages.upper[j]!),
            at: panels.centre[j]!,
          },
    misfitRatio: estimate.misfit / estimate.readings,
    resolution: resolution.length,
  };
}

export const stateText = (status: LineOutcome["status"]): string => `<span class="state ${status}">${status}</span>`;

/** @param shown indices of the lines that have a section of their own, to point at */
export function lineTable(rows: readonly LineRow[], shown: ReadonlySet<number>, delivery: Delivery): string {
  const body = rows.map((row) => {
    const name = shown.has(row.index) ? `<a href="#line-${row.index + 1}">${nameText(row.id)}</a>` : nameText(row.id);
    const lead = `<tr><td>${name}</td><td>${stateText(row.status)}</td>`;
    if (row.reason !== undefined) return `${lead}<td colspan="6">${messageText(row.reason)}</td></tr>`;
    const {strongest} = row;
    return `${lead}<td class="n">${countText(row.stations)}</td><td class="n">${metreText(row.from)} to ${metreText(row.to)}</td><td class="n">${
      strongest === undefined ? "–" : bracketText(strongest.value, strongest.lower, strongest.upper)
    }</td><td class="n">${strongest === undefined ? "–" : metreText(strongest.at)}</td><td class="n">${fixedText(row.misfitRatio, 2)}</td><td class="n">${metreText(row.resolution)}</td></tr>`;
  });
  return `<table><thead><tr><th>Line</th><th>State</th><th class="n">Stations</th><th class="n">Chainage<br><span>m</span></th><th class="n">Strongest average<br><span>${delivery.field}</span></th><th class="n">at<br><span>m</span></th><th class="n">Misfit per<br>reading</th><th class="n">Resolution<br><span>m</span></th></tr></thead><tbody>${body.join("")}</tbody></table>`;
}
