/** What a run over lines prints: one row a line, and the strips that were asked about. */
import type {StripEstimate} from "../lib/inverse/nouns.ts";
import type {Observable} from "../lib/potential/observable.ts";
import {deliveryOf} from "../lib/report/delivery.ts";
import {stripAnswer} from "../lib/report/strip-answer.ts";
import type {LineOutcome} from "../lib/study/outcome.ts";
import type {WantedSettings} from "../lib/study/settings.ts";
import {boundsResult} from "./bounds-result.ts";
import {comparisonResult} from "./comparison-result.ts";
import {reachResult} from "./reach-result.ts";
import {type Column, figure, textTable} from "./table.ts";

export interface RunResult<Outcome> {
  add(outcome: Outcome): void;
  /** For people. */
  text(): string;
  /** For scripts; units stand at the end of the names, as in the files. */
  json(): Readonly<Record<string, unknown>>;
}

const left = (head: string): Column => ({head, align: "left"});
const right = (head: string): Column => ({head, align: "right"});

export function lineResult(observable: Observable, {confidence, intervals}: WantedSettings): RunResult<LineOutcome> {
  const delivery = deliveryOf(observable);
  const {field, reading, density, total} = delivery;
  const interval = `${figure(100 * confidence, 3).replace(/\.?0+$/, "")} % ${intervals === "simultaneous" ? "band" : "interval"}`;
  const lineRows: string[][] = [];
  const stripRows: string[][] = [];
  const lines: Record<string, unknown>[] = [];
  const strips: Record<string, unknown>[] = [];
  const comparison = comparisonResult(delivery);

  const bounds = boundsResult(delivery);
  const reach = reachResult();

  const addStrip = (line: string, estimate: StripEstimate, basis: string): void => {
    const answer = stripAnswer(estimate, delivery);
    const {name, from, to} = estimate.strip;
    const bracket = ({lower, upper}: {lower: number; upper: number}): string => `${figure(lower)} .. ${figure(upper)}`;
    stripRows.push([
      line,
      name,
      figure(answer.mean.value),
      bracket(answer.mean),
      figure(answer.total.value),
      bracket(answer.total),
    ]);
    strips.push({
      line,
      strip: name,
      from_m: from,
      to_m: to,
      [`mean_${density}`]: answer.mean.value,
      [`lower_${density}`]: answer.mean.lower,
      [`upper_${density}`]: answer.mean.upper,
      [`total_${total}`]: answer.total.value,
      [`total_lower_${total}`]: answer.total.lower,
      [`total_upper_${total}`]: answer.total.upper,
      [`plain_mean_${density}`]: answer.plainMean,
      interval_basis: basis,
    });
  };

  return {
    add: (outcome) => {
      const {id, status} = outcome;
      if (!("study" in outcome)) {
        lineRows.push([id, status, "", "", "", "", "", ""]);
        lines.push({line: id, status, reason: outcome.failure.message, code: outcome.failure.code});
        return;
      }
      const {study} = outcome;
      const {choice, estimate, conditioned, resolution} = study;
      const expected = estimate.readings;
      const noise = delivery.toReading(conditioned.channels[0]!.noise);
      const norm = delivery.toNorm(estimate.norm);
      const bound = delivery.toNorm(choice.bound);
      const doubts = study.notices.filter(({weight}) => weight === "doubt");
      lineRows.push([
        id,
        status,
        `${study.line.stations.count}`,
        figure(noise, 3),
        figure(estimate.misfit / expected, 3),
        figure(norm, 3),
        figure(bound, 3),
        figure(resolution.length, 3),
      ]);
      lines.push({
        line: id,
        status,
        reason: choice.reason,
        stations: study.line.stations.count,
        panels: study.panels.count,
        multiplier: delivery.toMultiplier(choice.multiplier),
        [`bound_${field}_sqrt_m`]: bound,
        [`norm_${field}_sqrt_m`]: norm,
        bound_active: choice.active,
        misfit: estimate.misfit,
        misfit_expected: expected,
        [`noise_${reading}`]: noise,
        resolution_m: resolution.length,
        resolution_worst_m: resolution.worst.length,
        trusted_level_m: study.trust === undefined || Number.isNaN(study.trust.level) ? null : study.trust.level,
        doubts: doubts.map(({code}) => code),
      });
      for (const strip of study.strips) addStrip(id, strip, choice.basis);
      bounds.add(id, study);
      reach.add(id, study);
      comparison.add(study);
    },
    text: () => {
      const heads = [
        left("line"),
        left("status"),
        right("stations"),
        right(`noise ${reading}`),
        right("misfit/expected"),
        right(`norm ${field}·√m`),
        right("bound"),
        right("resolution m"),
      ];
      const stripHeads = [
        left("line"),
        left("strip"),
        right(`mean ${density}`),
        right(interval),
        right(`total ${total}`),
        right(interval),
      ];
      const stripsTable = stripRows.length === 0 ? "" : `\n${textTable(stripHeads, stripRows)}`;
      return textTable(heads, lineRows) + stripsTable + comparison.text() + bounds.text() + reach.text();
    },
    json: () => {
      const assumed = bounds.json();
      return {lines, strips, ...comparison.json(), ...(assumed.length === 0 ? {} : {at_bounds: assumed})};
    },
  };
}
