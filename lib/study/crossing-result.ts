/** What a comparison at crossings comes to, before and after readings were brought to one height. SI. */
import type {ReportableError} from "../errors.ts";
import type {CrossedSurvey} from "../survey/crossings.ts";
import {byLine, type LineDifferences, type MisTieFigures, misTieFigures, outliersOf} from "../survey/mis-ties.ts";
import {type CarriedCrossings, carriedDifferences} from "./carry-crossings.ts";

/** First line less second, one entry a crossing; NaN where there is none. */
interface Compared {
  readonly differences: Float64Array;
  readonly figures: MisTieFigures;
}

export interface CrossingResult {
  readonly crossed: CrossedSurvey;
  readonly measured: Compared;
  /** Undefined where readings are compared as measured only. */
  readonly carried:
    | (Compared & {
        readonly readings: CarriedCrossings;
        /** The measured differences of those crossings that have a carried one: like with like. */
        readonly before: MisTieFigures;
      })
    | undefined;
  /** Crossings that lie far from all others, carried where they are, the farthest first. */
  readonly outliers: readonly number[];
  /** In the order of `crossed.lines`. */
  readonly perLine: readonly LineDifferences[];
  /** Lines whose readings could not be carried, by name. */
  readonly without: ReadonlyMap<string, {readonly status: "skipped" | "failed"; readonly failure: ReportableError}>;
}

/** @param readings as they were carried, if they were */
export function crossingResult(
  crossed: CrossedSurvey,
  readings: CarriedCrossings | undefined,
  without: CrossingResult["without"],
): CrossingResult {
  const {first, second} = crossed.crossings;
  const compared = (differences: Float64Array): Compared => ({differences, figures: misTieFigures(differences)});
  const measured = compared(first.value.map((value, i) => value - second.value[i]!));
  const after = readings === undefined ? undefined : compared(carriedDifferences(readings));
  const judged = after ?? measured;
  return {
    crossed,
    measured,
    carried:
      readings === undefined || after === undefined
        ? undefined
        : {
            ...after,
            readings,
            before: misTieFigures(
              measured.differences.map((value, i) => (Number.isNaN(after.differences[i]!) ? Number.NaN : value)),
            ),
          },
    outliers: outliersOf(judged.differences, judged.figures),
    perLine: byLine(crossed.lines.length, first.line, second.line),
    without,
  };
}
