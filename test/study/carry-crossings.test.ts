/** Readings at crossings brought to one height: differences of two heights go, noise and what is wrong with a line stay. */
import {describe, expect, test} from "vitest";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import {effectiveDirection} from "../../lib/potential/effective-direction.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import {totalFieldAnomaly} from "../../lib/potential/total-field-anomaly.ts";
import {type CarriedLine, carryCrossings, uncarried} from "../../lib/study/carry-crossings.ts";
import {type CrossingResult, crossingResult} from "../../lib/study/crossing-result.ts";
import {estimateLine, studyLine} from "../../lib/study/line-study.ts";
import type {Settings} from "../../lib/study/settings.ts";
import {findCrossings} from "../../lib/survey/crossings.ts";
import {misTieFigures, ofLine} from "../../lib/survey/mis-ties.ts";
import {linesOf, settingsWith} from "../acquisition/settings.ts";
import {memorySource} from "../formats/memory.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {EAST, type FlownLine, flownText, readingAt} from "../harness/crossing-survey.ts";
import {plainSettings} from "../harness/synthetic-line.ts";

const NT = 1e-9;
const NOISE = 0.3;

interface Asked {
  readonly observable?: Observable;
  readonly strike?: number;
  readonly level?: number;
  readonly noise?: number;
  readonly regional?: Settings["model"]["regional"];
}

function settingsFor({observable = fieldVertical, strike, noise = NOISE, regional = -1}: Asked): Settings {
  const plain = plainSettings({
    boundary: {kind: "elevation", elevation: 0},
    fieldDirection: {kind: "angles", inclination: 62, declination: 3},
  });
  const channels = [{role: "value", observable: observable.name, unit: undefined, noise}];
  const model = {...plain.model, regional, ...(strike === undefined ? {} : {strike})};
  return {...plain, acquisition: settingsWith({clearance: undefined, channels}), model};
}

async function compared(
  lines: readonly FlownLine[],
  asked: Asked = {},
): Promise<{result: CrossingResult; told: readonly CarriedLine[]}> {
  const {observable = fieldVertical, noise = NOISE} = asked;
  const settings = settingsFor(asked);
  // The total field is one number wherever the line runs: that of the body, which is crossed eastwards.
  const response = observable.response(effectiveDirection(62, 3, 90));
  const survey = await openDelimitedSurvey([memorySource(flownText(lines, {noise, response}))], settings.acquisition);
  const crossed = await findCrossings(survey, false);
  const carried = uncarried(crossed.crossings, asked.level);
  const told: CarriedLine[] = [];
  for await (const line of carryCrossings(survey, crossed, settings, carried)) told.push(line);
  const without = new Map(
    told.flatMap((line) =>
      "failure" in line ? [[line.id, {status: line.status, failure: line.failure}] as const] : [],
    ),
  );
  return {result: crossingResult(crossed, carried, without), told};
}

const traverse = (id: string, y: number, height: number, own: Partial<FlownLine> = {}): FlownLine => ({
  ...{id, from: [0, y], to: [1000, y], height},
  ...own,
});
const tie = (id: string, x: number, height: number, own: Partial<FlownLine> = {}): FlownLine => ({
  ...{id, from: [x, 0], to: [x, 400], height},
  ...own,
});
const TRAVERSES = [100, 200, 300].map((y, k) => traverse(`L${k + 1}`, y + 2.5, 40));
const TIES = [402.5, 512.5, 562.5].map((x, k) => tie(`T${k + 1}`, x, 90));

/** Of a difference of two readings, each straight between two stations of independent noise: at most √2 σ. */
const DIFFERENCE = Math.SQRT2 * NOISE;

describe("two heights over one body", () => {
  test("differ by a lot as measured, and by noise at the height of the ties", async () => {
    const {result, told} = await compared([...TRAVERSES, ...TIES]);
    expect(result.measured.figures.count).toBe(9);
    expect(result.measured.figures.rms / NT).toBeGreaterThan(40);
    // The higher line stays where it is: only traverses are estimated.
    expect(told.map(({id}) => id)).toEqual(["L1", "L2", "L3"]);
    const {figures, readings} = result.carried!;
    expect(figures.count).toBe(9);
    expect([...readings.level]).toEqual(Array.from({length: 9}, () => 90));
    absoluteClose(
      figures.rms / NT,
      0,
      1.5 * DIFFERENCE,
      "nine differences of noise; the carried body adds a third of it",
    );
  });

  test("exactly, where there is no noise to speak of", async () => {
    const {result} = await compared([...TRAVERSES, ...TIES], {noise: 0.002});
    const {first, crossings} = {...result.crossed, first: result.carried!.readings.first};
    for (let i = 0; i < crossings.count; ++i) {
      const x = crossings.x[i]! - EAST;
      absoluteClose(
        first[i]! / NT,
        readingAt(x, 90),
        0.5,
        "of a change by 82 nT: reading straight between stations 5 m apart loses up to 0.1, the estimate the rest",
      );
    }
  });

  test("also with a regional, which takes a few per cent of the change: a level and a slope are not carried", async () => {
    const {result} = await compared([...TRAVERSES, ...TIES], {regional: 1});
    expect(result.carried!.figures.rms).toBeLessThan(0.04 * result.measured.figures.rms);
  });

  test("at any other level, both readings are carried", async () => {
    const {result, told} = await compared(
      [traverse("L", 200, 40), traverse("M", 200, 70, {from: [0, 0], to: [1000, 400]})],
      {
        level: 120,
        noise: 0.01,
      },
    );
    expect(told).toHaveLength(2);
    const {first, second} = result.carried!.readings;
    expect(result.crossed.crossings.count).toBe(1);
    const x = result.crossed.crossings.x[0]! - EAST;
    absoluteClose(first[0]! / NT, readingAt(x, 120), 0.5, "as above; the estimate adds a few tenths of a nT in 90");
    absoluteClose(second[0]! / NT, readingAt(x, 120), 2, "21.8° off the square, so that lengths are 7 % too long");
  });
});

test("the total field, on two oblique lines with the strike given", async () => {
  const lines: readonly FlownLine[] = [
    {id: "NE", from: [0, 0], to: [1000, 1000], height: 45},
    {id: "SE", from: [0, 1000], to: [1000, 0], height: 80},
    {id: "SE2", from: [40, 1000], to: [1040, 0], height: 80},
  ];
  const {result} = await compared(lines, {observable: totalFieldAnomaly, strike: 0, level: 80});
  expect(result.measured.figures.count).toBe(2);
  expect(result.measured.figures.rms / NT).toBeGreaterThan(30);
  absoluteClose(result.carried!.figures.rms / NT, 0, 2.5 * DIFFERENCE, "noise of two readings and of the carrying");
});

test("what is wrong with a line stays in it", async () => {
  const {result} = await compared([...TRAVERSES, TIES[0]!, {...TIES[1]!, shift: 6}, TIES[2]!]);
  const {differences} = result.carried!;
  const means = result.perLine.map((line) => misTieFigures(ofLine(line, differences)).mean / NT);
  expect(result.crossed.lines).toEqual(["L1", "L2", "L3", "T1", "T2", "T3"]);
  const because = "three differences of noise, and what the carrying adds";
  absoluteClose(means[4]!, 6, 1.5 * DIFFERENCE, because);
  absoluteClose(means[3]!, 0, 1.5 * DIFFERENCE, because);
  // Each traverse meets one tie in three that reads 6 too high.
  absoluteClose(means[0]!, -2, 1.5 * DIFFERENCE, because);
});

describe("a crossing without a carried difference says why", () => {
  test("where a line has no source", async () => {
    // With the strike given, a tie along it has no section; here it is the lower line.
    const {result, told} = await compared([traverse("L", 202.5, 90), tie("T", 512.5, 40), tie("U", 402.5, 95)], {
      strike: 0,
    });
    expect(told.map(({id, status}) => [id, status])).toEqual([
      ["L", "done"],
      ["T", "failed"],
    ]);
    expect(result.without.get("T")!.failure.code).toBe("strike/too-oblique");
    expect([...result.carried!.readings.reasons]).toEqual([[0, "T has no source (strike/too-oblique)"]]);
    expect(Number.isNaN(result.carried!.differences[0]!)).toBe(true);
    expect(Number.isNaN(result.carried!.differences[1]!)).toBe(false);
    // Before and after are of the same crossings.
    expect(result.carried!.before.count).toBe(1);
    expect(result.carried!.before.mean).toBe(result.measured.differences[1]);
  });

  test("where the level is not above the boundary", async () => {
    const {result} = await compared([traverse("L", 202.5, 40), tie("T", 512.5, 60)], {level: 0});
    expect([...result.carried!.readings.reasons.values()]).toEqual([
      "the level is not above the boundary of L; the level is not above the boundary of T",
    ]);
  });
});

test("the estimate alone is that of the whole study", async () => {
  const settings = settingsFor({strike: 20});
  const survey = await openDelimitedSurvey(
    [memorySource(flownText([traverse("L", 0, 40)], {noise: NOISE}))],
    settings.acquisition,
  );
  const [line] = await linesOf(survey);
  const whole = studyLine(line!, settings);
  const alone = estimateLine(line!, settings);
  expect(alone.estimate).toEqual(whole.estimate);
  // Its lengths are those square to the strike, in which the section is worked.
  absoluteClose(
    alone.panels.to.at(-1)! / whole.panels.to.at(-1)!,
    Math.cos((20 * Math.PI) / 180),
    1e-12,
    "the sine of 70°, in a few roundings",
  );
});
