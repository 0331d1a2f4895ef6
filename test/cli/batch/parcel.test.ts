/** Outcomes survive the way through bytes, whatever they are. */
import {describe, expect, test} from "vitest";
import {pack, unpack} from "../../../cli/batch/pack.ts";
import {packedError, unpackedError} from "../../../cli/batch/packed-error.ts";
import {outcomeIn, parcelOf} from "../../../cli/batch/parcel.ts";
import {settingsFrom} from "../../../cli/options/settings.ts";
import {openSurvey} from "../../../lib/acquisition/catalogue.ts";
import {InputError, ModelError, NumericalError} from "../../../lib/errors.ts";
import {lineAnswers} from "../../../lib/study/survey-study.ts";
import type {LineRecord} from "../../../lib/survey/survey.ts";
import {fileSource} from "../../harness/file-source.ts";
import {fileWith, surveyText} from "../harness.ts";

/** Lines on the map with two channels; the last two lines cannot be answered. */
function mapText(): string {
  const rows = ["line,x,y,clearance,ground,elevation,value,value.2"];
  for (let l = 0; l < 3; ++l)
    for (let i = 0; i < 40; ++i) {
      const x = 10 * i;
      const angle = Math.atan2(x - 150, 30) - Math.atan2(x - 210, 30);
      const noise = 0.01 * Math.sin(7 * i + l) + 0.01 * Math.cos(13 * i);
      const ground = 100 + Math.sin(i / 5);
      const up = l === 1 ? -30 : 30;
      rows.push(
        `L${l},${500_000 + x},${5_800_000 + 50 * l},${up},${ground},${ground + up},${l === 2 ? 1 : 0.2 * angle + noise},${angle + noise}`,
      );
    }
  return `${rows.join("\n")}\n`;
}

const CASES: readonly [string, string, readonly (readonly [string, string])[]][] = [
  [
    "gravity, strips and levels",
    surveyText(),
    [
      ["observable", "gravity"],
      ["noise", "0.02"],
      ["bound", "rms:0.5"],
      ["strip", "dyke=200:260"],
      ["level", "20"],
    ],
  ],
  [
    "a rule, noise of the record",
    surveyText(),
    [
      ["observable", "gravity"],
      ["bound", "discrepancy"],
    ],
  ],
  [
    "a field with a direction, oblique to its strike",
    mapText(),
    [
      ["observable", "total-field-anomaly"],
      ["column", "value=value"],
      ["crs", "EPSG:32631"],
      ["noise", "0.5"],
      ["bound", "discrepancy"],
      ["inclination", "60"],
      ["declination", "3"],
      ["strike", "30"],
      ["boundary", "depth-2"],
      ["level", "ground+5"],
    ],
  ],
  [
    "two channels over ground",
    mapText(),
    [
      ["observable", "gravity"],
      ["observable", "value.2=gravity-gradient"],
      ["column", "value=value"],
      ["column", "value.2=value.2"],
      ["noise", "0.05"],
      ["noise", "value.2=0.5"],
      ["bound", "rms:2"],
      ["boundary", "ground-0"],
    ],
  ],
];

async function recordsOf(text: string, options: readonly (readonly [string, string])[]) {
  const asked = new Map<string, string[]>();
  for (const [name, value] of options) asked.set(name, [...(asked.get(name) ?? []), value]);
  const settings = settingsFrom(asked);
  const survey = await openSurvey([fileSource(fileWith("lines.csv", text))], settings.acquisition);
  const records: LineRecord[] = [];
  for await (const record of survey.lines()) records.push(record);
  return {settings, survey, records};
}

describe("a parcel gives back the outcome", () => {
  test.each(CASES)("%s", async (_, text, options) => {
    const {settings, survey, records} = await recordsOf(text, options);
    const answer = lineAnswers(settings);
    const statuses = new Set<string>();
    let place = 0;
    // The lines are read again, as whoever opens a parcel does.
    for await (const again of survey.lines()) {
      const record = records[place++]!;
      const outcome = answer(record);
      statuses.add("failure" in outcome ? "no answer" : "answer");
      expect(outcomeIn(parcelOf(outcome, record), record)).toStrictEqual(outcome);
      const opened = outcomeIn(parcelOf(outcome, record), again);
      if (!("study" in opened) || !("study" in outcome) || !("line" in again)) continue;
      expect(opened.study.line).toBe(again.line);
      expect(opened.study.observable).toBe(outcome.study.observable);
      expect(opened.study.estimate).toStrictEqual(outcome.study.estimate);
      expect(opened.study.conditioned.line).toBe(again.line);
    }
    expect([...statuses]).toContain("answer");
    if (records.length > 1) expect([...statuses]).toContain("no answer");
  });

  test("skipped and failed ones, with class, code, place and cause", () => {
    const cause = new ModelError("model/b", "under it", {cause: new RangeError("at the bottom")});
    const failure = new NumericalError("numeric/a", "what was found", {
      place: {file: "a.csv", row: 7, column: "x"},
      cause,
    });
    const record = {id: "L1", failure};
    for (const status of ["skipped", "failed"] as const) {
      // The failure of the reader is known to whoever reads again; that of a study is not.
      const own = new InputError("input/c", "another", {place: {file: "b.csv"}});
      for (const reason of [failure, own]) {
        const opened = outcomeIn(parcelOf({status, id: "L1", failure: reason}, record), record);
        expect(opened).toStrictEqual({status, id: "L1", failure: reason});
      }
    }
    const back = unpackedError(packedError(failure));
    expect(back).toBeInstanceOf(NumericalError);
    expect({code: back.code, message: back.message, place: back.place}).toEqual({
      code: failure.code,
      message: failure.message,
      place: failure.place,
    });
    expect(back.cause).toBeInstanceOf(ModelError);
    expect((back.cause as Error).cause).toMatchObject({message: "at the bottom"});
  });
});

describe("pack", () => {
  test("keeps bits, absent values and what is shared", () => {
    const shared = Float64Array.of(-0, Number.NaN, Number.POSITIVE_INFINITY, 5e-324);
    const value = {a: shared, b: [shared, undefined, null], c: -0, d: undefined};
    const back = unpack(pack(value, {}), {}) as typeof value;
    expect(back).toStrictEqual(value);
    expect(back.b[0]).toBe(back.a);
    expect(Object.is(back.c, -0)).toBe(true);
  });

  test("refuses a function by its place, unless both sides have it", () => {
    const locate = () => 1;
    expect(() => pack({study: {levels: [{locate}]}}, {})).toThrow(/value\.study\.levels\[0\]\.locate is a function/);
    const roots = {line: {locate}};
    expect(unpack(pack({levels: [{locate}]}, roots), roots)).toEqual({levels: [{locate}]});
    expect(() => unpack(pack({locate}, roots), {line: {}})).toThrow(/line\.locate is not here/);
    expect(() => pack({map: new Map()}, {})).toThrow(/value\.map is an object of a kind/);
  });
});
