/** A grid row by row against the walk of a line, on made-up rows held in memory. */
import {describe, expect, test} from "vitest";
import {InputError, type ReportableError} from "../../lib/errors.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyGrid} from "../../lib/study/grid-study.ts";
import {studyLine} from "../../lib/study/line-study.ts";
import type {RowOutcome, RowStudy} from "../../lib/study/outcome.ts";
import {studySurvey} from "../../lib/study/survey-study.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {LineRecord, Survey} from "../../lib/survey/survey.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {type PlainSettings, plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const STEP = 5;
const WIDTH = 48;
const HEIGHT = 15;
const NOISE = 1e-8;
const UNIT = 3e-6;

/** Row `id` of the grid: pixels that `holds` keeps, a ridge 40 m wide about `centre`. */
function row(id: string, seed: number, centre: number, holds: (pixel: number) => boolean = () => true): SurveyLine {
  const noise = normalDeviates(seededRandom(seed), WIDTH);
  const pixels = Array.from({length: WIDTH}, (_, i) => i + 1).filter(holds);
  const chainage = Float64Array.from(pixels, (pixel) => STEP * (pixel - 0.5));
  const values = chainage.map(
    (x, i) => UNIT * harmonicMeasure(x, HEIGHT, centre - 20, centre + 20) + NOISE * noise[pixels[i] - 1],
  );
  const line = syntheticLine({chainage, clearance: HEIGHT, values, noise: NOISE, id});
  return {...line, stations: {...line.stations, row: Float64Array.from(pixels)}};
}

const empty = (id: string): LineRecord => ({
  id,
  failure: new InputError("grid/empty-row", `Row ${id} holds no reading.`),
});

function gridOf(records: readonly (SurveyLine | LineRecord)[], kind: "grid" | "lines" = "grid"): Survey {
  return {
    kind,
    files: ["made-up"],
    axes: [{group: "G1", azimuth: 90, origin: [0, 0], system: "made up", lines: records.length}],
    choices: [],
    delivered: undefined,
    notices: [],
    lineCount: records.length,
    grid:
      kind === "grid"
        ? {width: WIDTH, height: records.length, orientation: "rows", step: STEP, spacing: STEP}
        : undefined,
    async *lines() {
      for (const record of records) yield "stations" in record ? {line: record} : record;
    },
  };
}

async function all<T>(stream: AsyncIterable<T>): Promise<T[]> {
  const list: T[] = [];
  for await (const item of stream) list.push(item);
  return list;
}

function studyOf(outcome: RowOutcome): RowStudy {
  if (!("study" in outcome)) throw new Error(`row ${outcome.id} has no study: ${outcome.failure.message}`);
  return outcome.study;
}

const LEVELS = [0, 4, 30].map((height) => ({kind: "above-boundary", height}) as const);
const given: PlainSettings = {levels: LEVELS, bound: boundRuleNamed("rms:0.15", 1e-5)};

function expectBand(got: Float64Array, want: Float64Array, because: string): void {
  expect(got.length).toBe(want.length);
  got.forEach((value, i) => {
    absoluteClose(value / UNIT, want[i] / UNIT, 1e-8, because);
  });
}

describe("a grid of one row", () => {
  const whole = row("r1", 1, 110);

  test.each([0, 1] as const)("under a given bound is its line, regional %d", async (regional) => {
    const settings = plainSettings({...given, regional});
    const [outcome] = await all(studyGrid(gridOf([whole]), settings));
    const study = studyOf(outcome);
    const line = studyLine(whole, settings);
    expect([outcome.index, outcome.id]).toEqual([0, "r1"]);
    absoluteClose(study.choice.multiplier / line.choice.multiplier, 1, 1e-9, "one row pooled is itself");
    expect([study.choice.bound, study.panels, study.stations]).toEqual([line.choice.bound, line.panels.count, WIDTH]);
    for (const [name, want] of [
      ["norm", line.estimate.norm],
      ["misfit", line.estimate.misfit],
      ["resolution", line.resolution.length],
      ["degreesOfFreedom", line.estimate.degreesOfFreedom],
    ] as const)
      absoluteClose(study[name] / want, 1, 1e-8, "the same sums");
    expectBand(study.source.value, line.levels[0].value, "the same modes");
    study.levels.forEach(({setting, band}, k) => {
      expect(setting).toBe(LEVELS[k]);
      expectBand(band.value, line.levels[k].value, "the same modes");
      const half = line.levels[k].upper.map((upper, i) => (upper - line.levels[k].lower[i]) / 2);
      expectBand(band.halfWidth, half, "the same geometry");
    });
  });

  test("by the discrepancy rule has its line's multiplier, and assumes no less", async () => {
    const settings = plainSettings({levels: LEVELS});
    const study = studyOf((await all(studyGrid(gridOf([whole]), settings)))[0]);
    const line = studyLine(whole, settings);
    absoluteClose(study.choice.multiplier / line.choice.multiplier, 1, 1e-9, "one row pooled is itself");
    expectBand(study.levels[1].band.value, line.levels[1].value, "the same modes");
    // Norms of rows are noted at eight multipliers a decade, and the next smaller one is taken.
    const ratio = study.choice.bound / line.choice.bound;
    expect(ratio).toBeGreaterThanOrEqual(1);
    expect(ratio).toBeLessThan(10 ** (1 / 8));
    expect([study.choice.basis, study.noise, study.misfitExpected]).toEqual(["assumed-bound", NOISE, WIDTH]);
  });
});

describe("a grid with holes", () => {
  const hole = (pixel: number): boolean => pixel < 20 || pixel > 24;
  const rows = [
    row("r1", 1, 110),
    row("r2", 2, 112, hole),
    empty("r3"),
    row("r4", 4, 116),
    row("r5", 5, 118, (pixel) => pixel > 6),
  ];

  test("answers where there are readings, skips what has none, and pools the misfit", async () => {
    const outcomes = await all(studyGrid(gridOf(rows), plainSettings({levels: LEVELS})));
    expect(outcomes.map(({id, index}) => [id, index])).toEqual([
      ["r1", 0],
      ["r2", 1],
      ["r3", 2],
      ["r4", 3],
      ["r5", 4],
    ]);
    expect(outcomes[2].status).toBe("skipped");
    const studies = outcomes.filter((_, i) => i !== 2).map(studyOf);
    for (const band of [studies[1].source, ...studies[1].levels.map((level) => level.band)])
      for (let pixel = 1; pixel <= WIDTH; ++pixel) {
        expect(Number.isNaN(band.value[pixel - 1])).toBe(!hole(pixel));
        expect(Number.isNaN(band.halfWidth[pixel - 1])).toBe(!hole(pixel));
      }
    expect([...studies[3].source.value.slice(0, 7)].map(Number.isNaN)).toEqual([
      true,
      true,
      true,
      true,
      true,
      true,
      false,
    ]);
    const readings = WIDTH + (WIDTH - 5) + WIDTH + (WIDTH - 6);
    expect(studies.map(({stations}) => stations)).toEqual([WIDTH, WIDTH - 5, WIDTH, WIDTH - 6]);
    const misfit = studies.reduce((sum, study) => sum + study.misfit, 0);
    absoluteClose(misfit / (readings + 2 * Math.sqrt(2 * readings)), 1, 1e-8, "one multiplier for all, found to 1e-10");
    for (const study of studies) expect(study.choice).toBe(studies[0].choice);
    // Each row by itself at the pooled multiplier: the same source as its line there.
    expect(Math.max(...studies.map(({norm}) => norm)) * 2).toBeLessThanOrEqual(studies[0].choice.bound);
  });

  test("pooled bound: the root-mean-square of the norms is the bound", async () => {
    const studies = (await all(studyGrid(gridOf(rows), plainSettings({...given, levels: []}))))
      .filter((outcome) => "study" in outcome)
      .map(studyOf);
    const [{choice}] = studies;
    expect(choice.active).toBe(true);
    const square = studies.reduce((sum, {norm}) => sum + norm * norm, 0) / studies.length;
    absoluteClose(Math.sqrt(square) / choice.bound, 1, 1e-9, "the promise");
  });

  test("the place of a row counts where the support is given", async () => {
    // The same pattern of pixels, shifted: geometry may be shared only where the support moves along.
    const left = row("left", 7, 110, (pixel) => pixel <= 40);
    const right = row("right", 8, 110, (pixel) => pixel > 8);
    const settings = plainSettings({...given, support: [{from: 60, to: 170, group: undefined}]});
    const studies = (await all(studyGrid(gridOf([left, right]), settings))).map(studyOf);
    for (const [k, line] of [left, right].entries()) {
      const alone = studyOf((await all(studyGrid(gridOf([line]), settings)))[0]);
      const offset = line.stations.row[0] - 1;
      // Half-widths rest on geometry and the given bound alone.
      const both = studies[k].levels[1].band.halfWidth.slice(offset, offset + 40);
      expectBand(both, alone.levels[1].band.halfWidth.slice(offset, offset + 40), "the same geometry");
    }
  });

  test("more geometries than are kept at a time change nothing", async () => {
    const many = Array.from({length: 7}, (_, k) => row(`m${k}`, 20 + k, 110, (pixel) => pixel !== 10 + k));
    const once = (await all(studyGrid(gridOf(many), plainSettings(given)))).map(studyOf);
    const again = (await all(studyGrid(gridOf([...many, ...many]), plainSettings(given)))).map(studyOf);
    // The same rows twice: the pooled multiplier is the same but for the order of sums.
    again.forEach((study, k) => {
      const want = once[k % 7];
      for (let pixel = 0; pixel < WIDTH; ++pixel) {
        if (Number.isNaN(want.levels[1].band.value[pixel])) continue;
        absoluteClose(
          study.levels[1].band.value[pixel] / UNIT,
          want.levels[1].band.value[pixel] / UNIT,
          1e-7,
          "order of sums",
        );
        absoluteClose(
          study.levels[1].band.halfWidth[pixel] / UNIT,
          want.levels[1].band.halfWidth[pixel] / UNIT,
          1e-12,
          "none",
        );
      }
    });
  });

  test("with no reading at all says so", async () => {
    await expect(all(studyGrid(gridOf([empty("r1"), empty("r2")]), plainSettings()))).rejects.toMatchObject({
      code: "grid/empty-row",
    });
    await expect(all(studyGrid(gridOf([]), plainSettings()))).rejects.toMatchObject({code: "grid/no-readings"});
  });
});

describe("a survey of lines", () => {
  test("is a stream of outcomes, the failed ones too", async () => {
    const low = row("low", 3, 110);
    const sunk: SurveyLine = {...low, stations: {...low.stations, clearance: new Float64Array(WIDTH)}};
    const lost: LineRecord = {id: "lost", failure: new InputError("line/lost", "Not read.")};
    const outcomes = await all(studySurvey(gridOf([row("r1", 1, 110), sunk, lost], "lines"), plainSettings()));
    expect(outcomes.map(({id, status}) => [id, status])).toEqual([
      // Ground taken as flat is a doubt about every line alike, and singles none out.
      ["r1", "done"],
      ["low", "failed"],
      ["lost", "failed"],
    ]);
    const failure = (k: number): ReportableError | undefined => {
      const outcome = outcomes[k];
      return "failure" in outcome ? outcome.failure : undefined;
    };
    expect(failure(1)).toMatchObject({code: "boundary/station-below"});
    expect(failure(2)).toMatchObject({code: "line/lost"});
  });

  test("with lines in two directions needs to know which a support belongs to", async () => {
    const survey = gridOf([row("r1", 1, 110)], "lines");
    const two: Survey = {...survey, axes: [...survey.axes, {...survey.axes[0], group: "G2"}]};
    const support = (group: string | undefined) => plainSettings({support: [{from: 50, to: 200, group}]});
    await expect(all(studySurvey(two, support(undefined)))).rejects.toMatchObject({code: "support/needs-group"});
    await expect(all(studySurvey(two, support("G3")))).rejects.toMatchObject({code: "support/unknown-group"});
    expect((await all(studySurvey(two, support("G1")))).length).toBe(1);
  });
});
