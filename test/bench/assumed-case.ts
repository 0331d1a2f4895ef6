/** Intervals where nobody gave a bound: what the bound that the rule assumes is worth on models whose sources are known. */
import {apparentNoise} from "../../lib/inverse/apparent-noise.ts";
import {ASSUMED_FACTOR, assumedBound} from "../../lib/inverse/assumed-bound.ts";
import type {Solver} from "../../lib/solvers/solver.ts";
import {type Assumption, assumedCoverage, type Score} from "../harness/assumed-coverage.ts";
import {MODELS} from "../harness/assumed-models.ts";
import type {BenchCase} from "./bench-case.ts";
import {markdownTable} from "./results.ts";

const DRAWS = 200;

const likely = (solver: Solver): number => solver.norm(apparentNoise(solver)!.multiplier);
const hidden = ({data, largest}: Solver): number => Math.sqrt((2 * Math.sqrt(2 * data)) / largest);

/** The program's own first, then what else was tried. */
const ASSUMPTIONS: readonly Assumption[] = [
  {
    name: "as assumed",
    bound: (solver, {multiplier}) => assumedBound({solver, largestNorm: solver.norm}, multiplier),
  },
  ...[1, 2, 3, 4].map((times) => ({
    name: `${times} × norm by discrepancy`,
    bound: (solver: Solver, {multiplier}: {readonly multiplier: number}) =>
      times * Math.max(solver.norm(multiplier), hidden(solver)),
  })),
  ...[1, 1.5, 2, 3].map((times) => ({
    name: `${times} × likely norm`,
    bound: (solver: Solver) => times * Math.max(likely(solver), hidden(solver)),
  })),
  {
    name: "strength of a white source on the panels",
    bound: (solver) => {
      const found = apparentNoise(solver)!;
      return Math.max(hidden(solver), found.ratio * Math.sqrt(solver.unknowns / found.multiplier));
    },
  },
];

const percent = (share: number): string => (100 * share).toFixed(1);

export const assumedCase: BenchCase = {
  name: "assumed",
  title: "Coverage of 95 % intervals under the bound that the discrepancy rule assumes",
  run() {
    const scores = MODELS.flatMap((model, m) =>
      model.noises.flatMap((noise, n) => assumedCoverage(model, noise, ASSUMPTIONS, DRAWS, 1000 * m + n + 1)),
    );
    const own = scores.filter(({assumption}) => assumption === ASSUMPTIONS[0]!.name);
    const lowest = (pick: (score: Score) => number, of: readonly Score[]): number => Math.min(...of.map(pick));
    const figure = (what: string, pick: (score: Score) => number) => ({
      what,
      program: `${percent(lowest(pick, own))} %`,
      baseline: "–",
      ratio: undefined,
      target: "≥ 95 %",
      met: lowest(pick, own) >= 0.95,
    });
    const candidates = ASSUMPTIONS.map(({name}) => {
      const of = scores.filter(({assumption}) => assumption === name);
      const ratios = of.map(({widthRatio}, k) => widthRatio / own[k]!.widthRatio).sort((a, b) => a - b);
      const bounds = of.map(({boundRatio}) => boundRatio);
      return [
        name,
        `${percent(lowest(({strips}) => strips, of))} (${percent(lowest(({worstStrip}) => worstStrip, of))})`,
        `${percent(lowest(({averages}) => averages, of))} (${percent(lowest(({worstAverage}) => worstAverage, of))})`,
        `${percent(lowest(({level}) => level, of))} (${percent(lowest(({worstLevel}) => worstLevel, of))})`,
        `${Math.min(...bounds).toFixed(2)} – ${Math.max(...bounds).toFixed(2)}`,
        `${ratios[ratios.length >> 1]!.toFixed(2)} (${ratios[0]!.toFixed(2)} – ${ratios.at(-1)!.toFixed(2)})`,
      ];
    });
    return {
      figures: [
        figure("strips of 20 m and wider, lowest of all models", ({strips}) => strips),
        figure("averages on the boundary, lowest of all models", ({averages}) => averages),
        figure("level half-way down, lowest of all models", ({level}) => level),
      ],
      notes: [
        `${DRAWS} draws of white noise, a share of the largest reading, for each row. The bound is ${ASSUMED_FACTOR} × the norm of the most likely source, and what could hide in the noise beside it.`,
        "Shares are over strips or points and draws; in brackets the worst strip or point. Half-widths are over those of an interval that knows the true norm.",
        "The four line masses have tails off the support of 800 m, which the model takes for zero: an error of the model that the intervals do not count.",
      ],
      tables: [
        markdownTable(
          [
            "model",
            "noise",
            "strips",
            "averages",
            "level",
            "M over the true norm",
            "half-width over that of the true norm",
          ],
          own.map((score) => [
            score.model,
            `${percent(score.noise)} %`,
            `${percent(score.strips)} (${percent(score.worstStrip)})`,
            `${percent(score.averages)} (${percent(score.worstAverage)})`,
            `${percent(score.level)} (${percent(score.worstLevel)})`,
            score.boundRatio.toFixed(2),
            score.widthRatio.toFixed(2),
          ]),
        ),
        markdownTable(
          [
            "assumption",
            "strips, lowest model",
            "averages",
            "level",
            "M over the true norm",
            "half-width over the program's, median (range)",
          ],
          candidates,
        ),
      ],
    };
  },
};
