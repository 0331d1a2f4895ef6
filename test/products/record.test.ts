import {expect, test} from "vitest";
import {type RecordInput, recordJson} from "../../lib/products/record.ts";
import {CAUTIONS, cautionSentence, cautionsFor} from "../../lib/report/cautions.ts";
import {settingsFixture, surveyFixture} from "../harness/study-fixture.ts";

const input = (options: Partial<RecordInput> = {}): RecordInput => ({
  version: "0.1.0",
  node: "v20.20.2",
  architecture: "x64",
  settings: settingsFixture(),
  survey: surveyFixture(),
  outcomes: {done: 2, doubtful: 1, skipped: 0, failed: 0},
  inputs: [{file: "harrow-field.csv", bytes: 9120, sha256: "a".repeat(64)}],
  outputs: [{file: "source.csv", bytes: 812, sha256: "b".repeat(64)}],
  ...options,
});

test("the record holds what repeats the run", () => {
  const record = JSON.parse(recordJson(input()));
  expect(record.program).toEqual({name: "groundward", version: "0.1.0", node: "v20.20.2", architecture: "x64"});
  expect(record.settings.bound).toBe("discrepancy");
  expect(record.settings.model).toEqual({
    boundary: {kind: "elevation", elevation: 40},
    support: [{from: -30, to: 250, group: null}],
    panel: null,
    regional: 1,
  });
  expect(record.settings.acquisition.columns).toEqual({line: "flight", value: "b_down"});
  expect(record.settings.acquisition.sensorOffset).toBe(-1.2);
  expect(record.settings.wanted.levels).toHaveLength(2);
  expect(record.survey.roles).toEqual([
    {role: "line", column: "flight", reason: "recognised"},
    {role: "value", column: "b_down", reason: "asked"},
  ]);
  expect(record.survey.axes[0].azimuth).toBe(16.3);
  expect(record.processing).toBe("daily variation removed by base station; heading corrected");
  expect(record.inputs).toEqual([{file: "harrow-field.csv", bytes: 9120, sha256: "a".repeat(64)}]);
  expect(record.outputs[0].sha256).toBe("b".repeat(64));
  expect(record.outcomes).toEqual({done: 2, doubtful: 1, skipped: 0, failed: 0});
  expect(record.intervals["assumed-bound"]).toMatch(/twice the norm/);
  expect(record.cautions).toEqual(cautionsFor("lines").map(cautionSentence));
});

test("every setting is there, an absent one as null", () => {
  const {acquisition, model, wanted} = JSON.parse(recordJson(input())).settings;
  const settings = settingsFixture();
  expect(Object.keys(acquisition).sort()).toEqual(Object.keys(settings.acquisition).sort());
  expect(Object.keys(model).sort()).toEqual(Object.keys(settings.model).sort());
  expect(Object.keys(wanted).sort()).toEqual(Object.keys(settings.wanted).sort());
  expect(acquisition.geoidOffset).toBeNull();
});

test("the order in which settings were put together does not reach the bytes", () => {
  const settings = settingsFixture();
  const {regional, panel, support, boundary} = settings.model;
  const columns = new Map([...settings.acquisition.columns].reverse());
  const acquisition = Object.fromEntries(Object.entries(settings.acquisition).reverse());
  const shuffled: typeof settings = {
    wanted: settings.wanted,
    processing: settings.processing,
    bound: settings.bound,
    fieldDirection: settings.fieldDirection,
    acquisition: {...(acquisition as unknown as typeof settings.acquisition), columns},
    model: {regional, support, panel, boundary},
  };
  expect(recordJson(input({settings: shuffled}))).toBe(recordJson(input()));
});

test("no number becomes invalid JSON and no time of day stands in the record", () => {
  const text = recordJson(
    input({
      survey: surveyFixture({axes: [{group: "G1", azimuth: Number.NaN, origin: undefined, system: "", lines: 1}]}),
    }),
  );
  expect(JSON.parse(text).survey.axes[0].azimuth).toBeNull();
  expect(text).not.toMatch(/\d\d:\d\d/);
  expect(text).not.toMatch(/20\d\d-\d\d-\d\d/);
});

test("a grid's record says that it is row by row", () => {
  const record = JSON.parse(recordJson(input({survey: surveyFixture({kind: "grid"})})));
  expect(record.cautions.join(" ")).toMatch(/not a three-dimensional continuation/);
  expect(record.cautions).toHaveLength(4);
});

test("the cautions say what they must", () => {
  const all = CAUTIONS.map(cautionSentence).join("\n");
  expect(all).toMatch(/not clearance to dig, drill or enter/);
  expect(all).toMatch(/not a three-dimensional continuation/);
  expect(all).toMatch(/above the boundary .* invalid/);
  expect(all).toMatch(/[Ll]ocal codes and licensed practice decide/);
});
