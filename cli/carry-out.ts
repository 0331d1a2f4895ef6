/** The walk over the outcomes of a run: each goes to every product, to the result and to the doubts, and is forgotten. */

import type {IntervalBasis} from "../lib/inverse/nouns.ts";
import {BOUNDARY_FIELD} from "../lib/potential/level-quantity.ts";
import type {LineOutcome, RowOutcome} from "../lib/study/outcome.ts";
import {type Doubts, doubtCollector} from "./doubts.ts";
import {failureCollector} from "./failures.ts";
import {progressOf} from "./progress.ts";
import {type Counts, noOutcome, observableOf, type Run} from "./run.ts";
import type {Work} from "./work.ts";

export interface Summary {
  readonly counts: Counts;
  /** Exit status. */
  readonly status: number;
  /** Whether the files are worth keeping: not when every line failed alike. */
  readonly keep: boolean;
  readonly doubts: Doubts;
  readonly bases: ReadonlySet<IntervalBasis>;
}

export async function carryOut<Outcome extends LineOutcome | RowOutcome>(
  {host, survey, settings, messages, form}: Run,
  {outcomes, computed, products, result, across}: Work<Outcome>,
): Promise<Summary> {
  const counts = noOutcome();
  const doubts = doubtCollector();
  const bases = new Set<IntervalBasis>();
  const failed = new Set<number>();
  const failures = failureCollector(!form.json);
  const noun = computed ? "lines written" : (survey.grid?.orientation ?? "lines");
  const silent = form.json || form.quiet || (computed && !host.err.isTerminal);
  const progress = progressOf(host, survey.lineCount, noun, silent);
  doubts.add(survey.notices);
  const {levels, confidence, intervals, levelQuantity} = settings.wanted;
  for (const product of products)
    await product.begin({
      survey,
      observable: observableOf(settings),
      levels,
      quantity: levelQuantity ?? BOUNDARY_FIELD,
      confidence,
      intervals,
    });
  try {
    for await (const outcome of outcomes) {
      counts[outcome.status]++;
      if ("study" in outcome) {
        doubts.add(outcome.study.notices, outcome.id);
        bases.add(outcome.study.choice.basis);
      } else if (outcome.status === "failed") {
        failed.add(outcome.failure.exitStatus);
        failures.add(outcome.failure, outcome.id);
      }
      result.add(outcome);
      across?.add(outcome);
      for (const product of products) await product.take(outcome);
      progress.step(outcome.id);
      await host.breathe();
    }
  } finally {
    progress.end();
  }
  const notices = across?.notices() ?? [];
  doubts.add(notices);
  for (const product of products) await product.end(notices);
  const groups = failures.groups();
  for (const {failure, count, firstLines} of groups)
    messages.error(failure, survey.lineCount > 1 ? {count, firstLines} : undefined);
  const alike = counts.done + counts.doubtful === 0 && failed.size === 1;
  if (!alike && groups.some(({count}) => count > 1)) messages.note("lines.csv names each line with its reason.");
  const status = alike ? [...failed][0]! : counts.failed > 0 ? 5 : 0;
  return {counts, status, keep: !alike, doubts, bases};
}
