/** Long level lines and rows are solved without modes, and answer as they did with them. */
import {describe, expect, test} from "vitest";
import {estimateSource} from "../../lib/inverse/estimate.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {tradeoffCurve} from "../../lib/inverse/tradeoff.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {studyGrid} from "../../lib/study/grid-study.ts";
import {operated} from "../../lib/study/operated.ts";
import type {RowStudy} from "../../lib/study/outcome.ts";
import {condition} from "../../lib/survey/condition.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {Survey} from "../../lib/survey/survey.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {plainSettings, syntheticLine} from "../harness/synthetic-line.ts";

const COUNT = 620;
const STEP = 5;
const HEIGHT = 20;
const NOISE = 1e-7;
const UNIT = 3e-6;
/** Rows are solved without corrections, V cut where 1e-7 of α is left. */
const ALIKE = "the same equations, one route cut at 1e-7";
const settings = plainSettings({bound: discrepancy, levels: [{kind: "above-boundary", height: 10}]});

function line(seed: number, change: (x: Float64Array) => void = () => {}): SurveyLine {
  const noise = normalDeviates(seededRandom(seed), COUNT);
  const chainage = Float64Array.from({length: COUNT}, (_, i) => STEP * (i + 0.5));
  change(chainage);
  const values = chainage.map((x, i) => UNIT * harmonicMeasure(x, HEIGHT, 1000, 1060) + 2e-6 + NOISE * noise[i]!);
  const made = syntheticLine({chainage, clearance: HEIGHT, values, noise: NOISE, id: `r${seed}`});
  return {...made, stations: {...made.stations, row: Float64Array.from({length: COUNT}, (_, i) => i + 1)}};
}

const panels = panelsOn([{from: -100, to: STEP * COUNT + 100}], STEP);
const conditionedLine = (change?: (x: Float64Array) => void) =>
  condition(line(1, change), settings.model.boundary, undefined);

describe("a long level line", () => {
  const conditioned = conditionedLine();
  const level = operated(conditioned, panels, 1);
  const modal = operated(conditioned, panels, 1, [], true);

  test("has no modes, the same source by the same rule, and its residual", () => {
    expect([level.solver.modes, modal.solver.modes !== undefined]).toEqual([undefined, true]);
    const [choice, want] = [level, modal].map(({solver}) =>
      discrepancy.choose({solver, supportLength: 1, lines: 1, largestNorm: solver.norm}),
    );
    absoluteClose(Math.log(choice!.multiplier / want!.multiplier), 0, 1e-6, "the panels are the cells");
    absoluteClose(choice!.bound / want!.bound, 1, 0.01, "the most likely multiplier, found to a tenth in ln α");
    const [source, wanted] = [level, modal].map(({solver, operator, readings, values, regional}) =>
      estimateSource(solver, choice!, operator, readings, regional, values),
    );
    const largest = wanted!.density.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
    source!.density.forEach((value, j) => {
      absoluteClose(value / largest, wanted!.density[j]! / largest, 1e-9, "rounding of the modes");
    });
    for (const part of ["field", "regional", "residual"] as const)
      source!.channels[0]![part].forEach((value, i) => {
        absoluteClose(value / UNIT, wanted!.channels[0]![part][i]! / UNIT, 1e-9, "rounding of the modes");
      });
    expect([source!.modes, source!.readings]).toEqual([undefined, COUNT]);
  });

  test("has two points a decade on its trade-off curve", () => {
    const {multiplier, misfit} = tradeoffCurve(level.solver);
    const decades = Math.log10((10 * level.solver.largest) / level.solver.least);
    expect(multiplier.length).toBe(Math.ceil(2 * decades - 1e-9) + 1);
    for (let k = 1; k < misfit.length; ++k) expect(misfit[k]!).toBeGreaterThanOrEqual(misfit[k - 1]! * (1 - 1e-9));
  });

  test("flown backwards it is the same line", () => {
    const back = operated(
      conditionedLine((x) => x.reverse()),
      panels,
      1,
    );
    expect(back.solver.modes).toBeUndefined();
    const alpha = 1e-3 * level.solver.largest;
    const field = back.solver.field!(alpha);
    // The noise does not turn with the line: what is turned is where it is read.
    expect(field.indexOf(Math.max(...field))).toBe(
      COUNT - 1 - level.solver.field!(alpha).indexOf(Math.max(...level.solver.field!(alpha))),
    );
  });

  test.each([
    ["a rule weighs the modes", () => operated(conditioned, panels, 1, [], boundRuleNamed("balance", 1).modes)],
    [
      "a station is off its place",
      () =>
        operated(
          conditionedLine((x) => (x[300]! += 0.4)),
          panels,
          1,
        ),
    ],
  ])("it has modes where %s", (_, make) => {
    expect(make().solver.modes).toBeGreaterThan(0);
  });
});

test("a long uneven line has modes where its panels are few", () => {
  const stations = 2200;
  const chainage = Float64Array.from({length: stations}, (_, i) => 2 * i + 0.4 * Math.sin(7 * i));
  const made = syntheticLine({
    chainage,
    clearance: HEIGHT,
    values: new Float64Array(stations),
    noise: NOISE,
    id: "long",
  });
  const row = Float64Array.from({length: stations}, (_, i) => i + 1);
  const conditioned = condition({...made, stations: {...made.stations, row}}, settings.model.boundary, undefined);
  // 150 panels: a decomposition of so many columns takes less time than one step.
  expect(operated(conditioned, panelsOn([{from: 0, to: 4400}], 30), 1).solver.modes).toBeGreaterThan(0);
});

test("rows of a long level grid share one multiplier, have no modes, and answer as with them", async () => {
  const rows = [1, 2, 3].map((seed) => line(seed));
  const survey: Survey = {
    kind: "grid",
    files: ["made-up"],
    axes: [{group: "G1", azimuth: 90, origin: [0, 0], system: "made up", lines: rows.length}],
    choices: [],
    delivered: undefined,
    notices: [],
    lineCount: rows.length,
    grid: {width: COUNT, height: rows.length, orientation: "rows", step: STEP, spacing: STEP},
    async *lines() {
      for (const row of rows) yield {line: row};
    },
  };
  // Panels that are the cells.
  const model = {...settings.model, panel: STEP, support: [{from: -100, to: STEP * COUNT + 100, group: undefined}]};
  const studies = async (bound: typeof settings.bound): Promise<RowStudy[]> => {
    const found: RowStudy[] = [];
    for await (const outcome of studyGrid(survey, {...settings, model, bound}))
      if ("study" in outcome) found.push(outcome.study);
    return found;
  };
  const bound = boundRuleNamed("rms:0.2", 1e-5);
  const [level, modal] = [await studies(bound), await studies({...bound, modes: true})];
  expect(level.map(({modes}) => modes)).toEqual([undefined, undefined, undefined]);
  level.forEach((study, k) => {
    const want = modal[k]!;
    expect(want.modes).toBeGreaterThan(0);
    absoluteClose(study.misfit / want.misfit, 1, 1e-5, ALIKE);
    absoluteClose(study.norm / want.norm, 1, 1e-5, ALIKE);
    const bands = [
      [study.source, want.source],
      [study.levels[0]!.band, want.levels[0]!.band],
    ] as const;
    for (const [got, wanted] of bands)
      got.value.forEach((value, i) => {
        const half = wanted.halfWidth[i]!;
        absoluteClose((value - wanted.value[i]!) / half, 0, 1e-5, ALIKE);
        absoluteClose(got.halfWidth[i]! / half, 1, 1e-5, ALIKE);
      });
  });
});
