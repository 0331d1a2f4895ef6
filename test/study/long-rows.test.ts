/** Long level rows of a grid: the sample that fixes their multiplier, rows beyond its bound, and threads that solve them. */
import {expect, test} from "vitest";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyGrid} from "../../lib/study/grid-study.ts";
import type {RowOutcome, RowStudy} from "../../lib/study/outcome.ts";
import {type RowThreads, rowSolver} from "../../lib/study/row-work.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import {plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const COUNT = 620;
const STEP = 5;
const HEIGHT = 20;
const NOISE = 1e-7;
/** No row is of the full width. */
const WIDTH = COUNT + 8;

const settings = plainSettings({
  bound: discrepancy,
  levels: [0, 10].map((height) => ({kind: "above-boundary", height}) as const),
});

function row(seed: number, strength: number): SurveyLine {
  const noise = normalDeviates(seededRandom(seed), COUNT);
  const chainage = Float64Array.from({length: COUNT}, (_, i) => STEP * (i + 0.5));
  const values = chainage.map((x, i) => strength * harmonicMeasure(x, HEIGHT, 1000, 1060) + NOISE * noise[i]!);
  const made = syntheticLine({chainage, clearance: HEIGHT, values, noise: NOISE, id: ""});
  return {...made, stations: {...made.stations, row: Float64Array.from({length: COUNT}, (_, i) => i + 5)}};
}

function gridOf(rows: readonly SurveyLine[]): Survey {
  return {
    kind: "grid",
    files: ["made-up"],
    axes: [{group: "G1", azimuth: 90, origin: [0, 0], system: "made up", lines: rows.length}],
    choices: [],
    delivered: undefined,
    notices: [],
    lineCount: rows.length,
    grid: {width: WIDTH, height: rows.length, orientation: "rows", step: STEP, spacing: STEP},
    async *lines() {
      for (const [k, line] of rows.entries()) yield {line: {...line, id: `row-${k}`}};
    },
  };
}

async function outcomesOf(survey: Survey, threads?: RowThreads): Promise<RowOutcome[]> {
  const found: RowOutcome[] = [];
  for await (const outcome of studyGrid(survey, settings, threads)) found.push(outcome);
  return found;
}

const studyOf = (outcome: RowOutcome): RowStudy => {
  if (!("study" in outcome)) throw outcome.failure;
  return outcome.study;
};

test("rows with a margin are sampled, and one beyond the bound that the sample gave says so", async () => {
  const plain = [1, 2, 3].map((seed) => row(seed, 3e-6));
  // 130 rows of 620 readings are 80,000: of 260 every other one is in the sample, the first, the third …
  const rows = Array.from({length: 260}, (_, k) => plain[k % 3]!);
  const [seen, unseen] = [100, 201];
  const strong = row(9, 3e-5);
  const of = async (place: number) =>
    (await outcomesOf(gridOf(rows.map((line, k) => (k === place ? strong : line))))).map((outcome) => ({
      ...outcome,
      study: studyOf(outcome),
    }));
  const beyond = (studies: Awaited<ReturnType<typeof of>>): string[] =>
    studies
      .filter(({study}) => study.notices.some(({code}) => code === "grid/row-beyond-bound"))
      .map(({id, status}) => `${id} ${status}`);
  const missed = await of(unseen);
  expect(missed[0]!.study.choice.reason).toMatch(/; by 130 of 260 rows without gaps, spread over the grid$/);
  expect(beyond(missed)).toEqual([`row-${unseen} doubtful`]);
  const {study} = missed[unseen]!;
  expect(study.norm).toBeGreaterThan(study.choice.bound);
  expect(study.notices.find(({code}) => code === "grid/row-beyond-bound")!.message).toMatch(
    new RegExp(
      `row row-${unseen} is stronger \\(norm ${(study.norm / study.choice.bound).toPrecision(3)} times the bound`,
    ),
  );
  // In the sample it sets the bound itself.
  expect(beyond(await of(seen))).toEqual([]);
});

test("threads that answer in any order change no bit", async () => {
  const rows = Array.from({length: 9}, (_, k) => row(20 + k, 1e-6 * (k + 1)));
  const survey = gridOf([...rows, ...rows, ...rows]);
  const solvers = [rowSolver(), rowSolver()];
  let parcels = 0;
  const threads: RowThreads = {
    count: 2,
    async solve(work) {
      const own = parcels++;
      // As it would come to another thread: a copy of plain data.
      const figures = structuredClone(solvers[own % 2]!(structuredClone(work)));
      for (let turn = 0; turn < 3 - (own % 3); ++turn) await new Promise((done) => setImmediate(done));
      return figures;
    },
  };
  expect(await outcomesOf(survey, threads)).toEqual(await outcomesOf(survey));
  expect(parcels).toBeGreaterThan(0);
});

test("what fails in a thread fails the run", async () => {
  const failing: RowThreads = {count: 2, solve: () => Promise.reject(new Error("lost"))};
  await expect(outcomesOf(gridOf([row(1, 3e-6)]), failing)).rejects.toThrow("lost");
});
