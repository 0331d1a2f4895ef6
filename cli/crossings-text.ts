/** What `crossings` prints: statistics before and after, the worst crossings and lines. */
import {DELIVERY_UNIT} from "../lib/quantities.ts";
import type {CrossingResult} from "../lib/study/crossing-result.ts";
import {type MisTieFigures, misTieFigures, ofLine} from "../lib/survey/mis-ties.ts";
import {type Column, figure, textTable} from "./table.ts";

/** Crossings and lines shown. */
const SHOWN = 5;
/** Outliers that JSON names; the table holds all. */
const NAMED = 100;

const left = (head: string): Column => ({head, align: "left"});
const right = (head: string): Column => ({head, align: "right"});

const unitOf = ({crossed}: CrossingResult) => DELIVERY_UNIT[crossed.observable.dimension];

/** The comparisons that were made, in words; before and after of the same crossings stand together. */
function comparisons({measured, carried}: CrossingResult): readonly {words: string; figures: MisTieFigures}[] {
  const rows = [{words: "as measured", figures: measured.figures}];
  if (carried === undefined) return rows;
  if (carried.figures.count < measured.figures.count)
    rows.push({words: "as measured, those carried", figures: carried.before});
  rows.push({words: "at one height", figures: carried.figures});
  return rows;
}

/** Differences that the result is judged by. */
const judged = ({measured, carried}: CrossingResult) => carried ?? measured;

/** Crossings by the size of their difference, largest first; those without one are left out. */
function worstCrossings(result: CrossingResult, most: number): readonly number[] {
  const {differences} = judged(result);
  return [...differences.keys()]
    .filter((i) => !Number.isNaN(differences[i]!))
    .sort((i, j) => Math.abs(differences[j]!) - Math.abs(differences[i]!) || i - j)
    .slice(0, most);
}

interface LineFigures {
  readonly line: string;
  readonly measured: MisTieFigures;
  readonly carried: MisTieFigures | undefined;
}

/** Every line that crosses another, by the size of its mean difference, largest first. */
function linesByMean(result: CrossingResult): readonly LineFigures[] {
  const {crossed, perLine, measured, carried} = result;
  const lines = perLine
    .map(
      (own, k): LineFigures => ({
        line: crossed.lines[k]!,
        measured: misTieFigures(ofLine(own, measured.differences)),
        carried: carried === undefined ? undefined : misTieFigures(ofLine(own, carried.differences)),
      }),
    )
    .filter((line) => line.measured.count > 0);
  const size = (line: LineFigures): number => Math.abs((line.carried ?? line.measured).mean) || 0;
  return lines.sort((a, b) => size(b) - size(a));
}

export function crossingsText(result: CrossingResult): string {
  const {crossed, measured, carried, outliers} = result;
  const {symbol, factor} = unitOf(result);
  const {count, first, second} = crossed.crossings;
  if (count === 0) return `No two of ${crossed.lines.length} lines cross.\n`;
  const value = (si: number | undefined): string => figure(si === undefined ? undefined : si / factor);
  const parts = [
    textTable(
      [
        left(`difference ${symbol}`),
        ...["crossings", "mean", "rms", "median size", "robust sd", "largest"].map((head) => right(head)),
      ],
      comparisons(result).map(({words, figures}) => [
        words,
        `${figures.count}`,
        ...[figures.mean, figures.rms, figures.medianSize, figures.robustDeviation, figures.largest].map(value),
      ]),
    ),
  ];
  const far = new Set(outliers);
  const worst = worstCrossings(result, SHOWN);
  if (worst.length > 0)
    parts.push(
      textTable(
        [
          left("line a"),
          right("chainage m"),
          left("line b"),
          right("chainage m"),
          right("height a m"),
          right("height b m"),
          right(`difference ${symbol}`),
          ...(carried === undefined ? [] : [right("at one height")]),
          left(""),
        ],
        worst.map((i) => [
          crossed.lines[first.line[i]!]!,
          first.chainage[i]!.toFixed(1),
          crossed.lines[second.line[i]!]!,
          second.chainage[i]!.toFixed(1),
          first.height[i]!.toFixed(1),
          second.height[i]!.toFixed(1),
          value(measured.differences[i]),
          ...(carried === undefined ? [] : [value(carried.differences[i])]),
          far.has(i) ? "outlier" : "",
        ]),
      ),
    );
  parts.push(
    textTable(
      [
        left("line"),
        right("crossings"),
        right(`mean ${symbol}`),
        ...(carried === undefined ? [] : [right("mean at one height")]),
      ],
      linesByMean(result)
        .slice(0, SHOWN)
        .map(({line, measured: own, carried: after}) => [
          line,
          `${own.count}`,
          value(own.mean),
          ...(after === undefined ? [] : [value(after.mean)]),
        ]),
    ),
  );
  if (outliers.length > 0)
    parts.push(`${outliers.length} of ${judged(result).figures.count} differences lie far from the others.\n`);
  return parts.join("\n");
}

/** For scripts; units stand at the end of the names, as in the files. */
export function crossingsJson(result: CrossingResult): Readonly<Record<string, unknown>> {
  const {crossed, measured, carried, outliers, without} = result;
  const {symbol, factor} = unitOf(result);
  const {first, second, x, y, count} = crossed.crossings;
  const value = (si: number | undefined): number | null =>
    si === undefined || !Number.isFinite(si) ? null : si / factor;
  const figures = (of: MisTieFigures) => ({
    crossings: of.count,
    [`mean_${symbol}`]: value(of.mean),
    [`median_${symbol}`]: value(of.median),
    [`rms_${symbol}`]: value(of.rms),
    [`median_size_${symbol}`]: value(of.medianSize),
    [`robust_deviation_${symbol}`]: value(of.robustDeviation),
    [`largest_${symbol}`]: value(of.largest),
  });
  const crossing = (i: number) => ({
    line_a: crossed.lines[first.line[i]!]!,
    chainage_a_m: first.chainage[i]!,
    line_b: crossed.lines[second.line[i]!]!,
    chainage_b_m: second.chainage[i]!,
    x: x[i]!,
    y: y[i]!,
    height_a_m: first.height[i]!,
    height_b_m: second.height[i]!,
    [`difference_${symbol}`]: value(measured.differences[i]),
    ...(carried === undefined
      ? {}
      : {
          common_level_m: carried.readings.level[i]!,
          [`carried_difference_${symbol}`]: value(carried.differences[i]),
        }),
  });
  return {
    crossings: count,
    heights: crossed.heights,
    as_measured: figures(measured.figures),
    ...(carried === undefined
      ? {}
      : {as_measured_of_those_carried: figures(carried.before), at_one_height: figures(carried.figures)}),
    worst: worstCrossings(result, SHOWN).map(crossing),
    outliers: {count: outliers.length, first: outliers.slice(0, NAMED).map(crossing)},
    lines: linesByMean(result).map((line) => ({
      line: line.line,
      as_measured: figures(line.measured),
      ...(line.carried === undefined ? {} : {at_one_height: figures(line.carried)}),
    })),
    not_carried: [...without].map(([line, {status, failure}]) => ({
      line,
      status,
      code: failure.code,
      reason: failure.message,
    })),
    unreadable: crossed.failures.map(({id, failure}) => ({line: id, code: failure.code, reason: failure.message})),
  };
}
