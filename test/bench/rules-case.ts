/** How near each rule for the bound comes to the best multiplier, on models with a known source; no time is measured. */
import {apparentNoise} from "../../lib/inverse/apparent-noise.ts";
import {balance} from "../../lib/inverse/rules/balance.ts";
import {corner} from "../../lib/inverse/rules/corner.ts";
import {crossValidation} from "../../lib/inverse/rules/cross-validation.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import type {RuleQuestion} from "../../lib/inverse/rules/rule.ts";
import type {Solver} from "../../lib/solvers/solver.ts";
import {spectralSolver} from "../../lib/solvers/spectral.ts";
import {type BenchCase, type Figure, median} from "./bench-case.ts";
import {type Model, modelOf, type Posed, posed, SETTINGS} from "./rules-models.ts";

const DRAWS = 32;
/** Step of the search for the best multiplier in ln α: the error changes by less than a per cent over it. */
const STEP = 0.1;
/** Noise said to be so many times what it is, on the long line with noise of a per cent. */
const TOLD = [0.5, 2] as const;
const TOLD_SHARE = 0.01;
/** Of the long line 20 up: where a rule by the readings must do better than the one by the noise. */
const HARDEST = 0.05;
/** Against one bad draw in ten a median is blind. */
const TAIL = 0.9;

const RULES: Readonly<Record<string, (question: RuleQuestion) => number | undefined>> = {
  discrepancy: (question) => discrepancy.choose(question).multiplier,
  "most likely": ({solver}) => apparentNoise(solver)?.multiplier,
  "cross-validation": (question) => crossValidation.choose(question).multiplier,
  corner: (question) => corner.choose(question).multiplier,
  balance: (question) => balance.choose(question).multiplier,
};
const NAMES = Object.keys(RULES);

function leastError(solver: Solver, {error}: Posed): number {
  let least = Infinity;
  for (let t = Math.log(10 * solver.largest); t > Math.log(solver.least); t -= STEP)
    least = Math.min(least, error(solver.estimate(Math.exp(t))));
  return least;
}

interface Scores {
  readonly least: readonly number[];
  /** Error over the least error of each draw, by rule. */
  readonly ratios: Readonly<Record<string, readonly number[]>>;
}

function scoresOf(model: Model, share: number, told = 1): Scores {
  const problem = posed(model, share, told);
  const least: number[] = [];
  const ratios: Record<string, number[]> = Object.fromEntries(NAMES.map((name) => [name, []]));
  for (let draw = 1; draw <= DRAWS; ++draw) {
    const solver = spectralSolver(problem.draw(draw), 0);
    const best = leastError(solver, problem);
    least.push(best);
    const {length: supportLength, places} = problem;
    const question = {solver, supportLength, lines: 1, places, largestNorm: solver.norm};
    for (const name of NAMES) {
      const multiplier = RULES[name]!(question);
      ratios[name]!.push(multiplier === undefined ? Infinity : problem.error(solver.estimate(multiplier)) / best);
    }
  }
  return {least, ratios};
}

const percent = (share: number): string => `${Number((100 * share).toPrecision(3))} %`;
const tailOf = (values: readonly number[]): number =>
  [...values].sort((a, b) => a - b)[Math.round(TAIL * (values.length - 1))]!;
const line = (cells: readonly string[]): string => `| ${cells.join(" | ")} |`;

function tableLine(what: string, {least, ratios}: Scores): string {
  const cells = NAMES.map((name) => `${median(ratios[name]!).toFixed(2)} (${tailOf(ratios[name]!).toFixed(1)})`);
  return line([what, percent(median(least)), ...cells]);
}

export const rulesCase: BenchCase = {
  name: "rules",
  title: "Rules for the bound: error over the error of the best multiplier",
  run() {
    const figures: Figure[] = [];
    const figure = (what: string, ratio: number, most: number, target: string): void => {
      figures.push({what, program: ratio.toFixed(2), baseline: "1", ratio, target, met: ratio <= most});
    };
    const table = [line(["model, noise", "least error", ...NAMES]), line(["---", "---", ...NAMES.map(() => "---")])];
    for (const setting of SETTINGS) {
      const model = modelOf(setting);
      for (const share of setting.shares) {
        const scores = scoresOf(model, share);
        const what = `${model.name}, ${percent(share)}`;
        table.push(tableLine(what, scores));
        const reached = median(scores.ratios["discrepancy"]!);
        if (setting.target !== undefined)
          figure(`discrepancy, ${what}`, reached, setting.target, `≤ ${setting.target}`);
        if (setting.model !== "level20" || share !== HARDEST) continue;
        const best = Math.min(
          ...NAMES.filter((name) => name !== "discrepancy").map((name) => median(scores.ratios[name]!)),
        );
        figure(`best other rule, ${what}`, best, reached, `≤ ${reached.toFixed(2)}`);
      }
    }
    const [setting] = SETTINGS;
    const model = modelOf(setting!);
    for (const told of TOLD)
      table.push(
        tableLine(`${model.name}, ${percent(TOLD_SHARE)}, said ${told} times`, scoresOf(model, TOLD_SHARE, told)),
      );
    return {
      figures,
      notes: [
        `Root-mean-square error of the source at the ground over root-mean-square of the truth (long lines: within 120 of the middle); median over ${DRAWS} draws of its ratio to the error of the best multiplier of that draw, in brackets the ratio that a tenth of the draws exceeds.`,
        ...table,
      ],
    };
  },
};
