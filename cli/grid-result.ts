/** What a run over a grid prints: the rows taken together, since they share one multiplier. */
import type {Observable} from "../lib/potential/observable.ts";
import {deliveryOf} from "../lib/report/delivery.ts";
import type {RowOutcome} from "../lib/study/outcome.ts";
import type {RunResult} from "./line-result.ts";
import {figure, textTable} from "./table.ts";

export function gridResult(observable: Observable): RunResult<RowOutcome> {
  const delivery = deliveryOf(observable);
  const {field, reading} = delivery;
  const counts = {done: 0, doubtful: 0, skipped: 0, failed: 0};
  const sums = {pixels: 0, misfit: 0, expected: 0};
  let shared: {multiplier: number; noise: number; resolution: number; reason: string; basis: string} | undefined;
  let largestNorm = 0;
  return {
    add: (outcome) => {
      counts[outcome.status]++;
      if (!("study" in outcome)) return;
      const {study} = outcome;
      sums.pixels += study.stations;
      sums.misfit += study.misfit;
      sums.expected += study.misfitExpected;
      largestNorm = Math.max(largestNorm, delivery.toNorm(study.norm));
      shared ??= {
        multiplier: delivery.toMultiplier(study.choice.multiplier),
        noise: delivery.toReading(study.noise),
        resolution: study.resolution,
        reason: study.choice.reason,
        basis: study.choice.basis,
      };
    },
    text: () =>
      textTable(
        [
          {head: "rows taken together", align: "left"},
          {head: "", align: "right"},
        ],
        [
          ["done", `${counts.done}`],
          ["doubtful", `${counts.doubtful}`],
          ["skipped", `${counts.skipped}`],
          ["failed", `${counts.failed}`],
          ["pixels with a reading", `${sums.pixels}`],
          [`noise ${reading}`, figure(shared?.noise)],
          ["misfit/expected", figure(sums.misfit / sums.expected, 3)],
          [`largest norm ${field}·√m`, figure(largestNorm, 3)],
          ["resolution m", figure(shared?.resolution, 3)],
        ],
      ),
    json: () => ({
      rows: counts,
      pixels: sums.pixels,
      [`noise_${reading}`]: shared?.noise,
      multiplier: shared?.multiplier,
      misfit: sums.misfit,
      misfit_expected: sums.expected,
      [`largest_norm_${field}_sqrt_m`]: largestNorm,
      resolution_m: shared?.resolution,
      reason: shared?.reason,
      interval_basis: shared?.basis,
    }),
  };
}
