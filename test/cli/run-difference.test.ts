/** How a folder's run and the one asked are told apart: by options as they are typed. */
import {describe, expect, test} from "vitest";
import {settingsFrom} from "../../cli/options/settings.ts";
import {type RunIdentity, runDifference} from "../../cli/run-difference.ts";
import {recordJson} from "../../lib/products/record.ts";
import type {Survey} from "../../lib/survey/survey.ts";

const NO_LINES: Survey = {
  kind: "lines",
  files: [],
  axes: [],
  choices: [],
  delivered: undefined,
  notices: [],
  lineCount: 0,
  grid: undefined,
  async *lines() {},
};

/** What the record keeps of options, each with its values. */
function identity(
  options: Readonly<Record<string, string | readonly string[]>>,
  inputs = [file("a.csv")],
): RunIdentity {
  const asked = new Map(
    Object.entries({observable: "gravity", ...options}).map(([name, value]) => [name, [value].flat()]),
  );
  const settings = settingsFrom(asked);
  const outcomes = {done: 0, doubtful: 0, skipped: 0, failed: 0};
  const run = {version: "1", node: "20", architecture: "x", settings, survey: NO_LINES, outcomes, inputs, outputs: []};
  return JSON.parse(recordJson(run));
}
const file = (name: string, sha256 = "aa") => ({file: name, bytes: 3, sha256});

describe("two runs differ", () => {
  test.each<[string, Parameters<typeof identity>[0], Parameters<typeof identity>[0], string]>([
    ["text that is gone", {crs: "EPSG:25833"}, {}, '--crs was "EPSG:25833" and is not given'],
    ["a number of the channel", {noise: "0.02"}, {noise: "record"}, '--noise was "0.02" and is "record"'],
    ["the length of the noise", {}, {"noise-length": "50"}, '--noise-length was "0" and is "50"'],
    ["a name of two words", {"sensor-offset": "-3"}, {"sensor-offset": "0"}, '--sensor-offset was "-3" and is "0"'],
    ["a boundary", {boundary: "86"}, {boundary: "depth-5"}, '--boundary was "86" and is "depth-5"'],
    ["a column", {column: ["value=g"]}, {column: ["value=h"]}, '--column was "value=g" and is "value=h"'],
    [
      "one of two levels",
      {level: ["0", "5"]},
      {level: ["0", "ground+2"]},
      '--level "5" was given and is now "ground+2"',
    ],
    ["a level less", {level: ["3", "5"]}, {level: "5"}, '--level "3" was given and is not any more'],
    ["a level more", {level: "5"}, {level: ["5", "8"]}, '--level "8" was not given and is now'],
    ["the level that is taken where none is given", {level: ["3", "5"]}, {}, '--level "3, 5" was given and is now "0"'],
    [
      "a support more",
      {support: ["0:9"]},
      {support: ["0:9", "G2/20:30"]},
      '--support "G2/20:30" was not given and is now',
    ],
    ["a strip", {strip: ["dyke=2:3"]}, {strip: ["dyke=2:4"]}, '--strip "dyke=2:3" was given and is now "dyke=2:4"'],
    ["the order of levels", {level: ["0", "5"]}, {level: ["5", "0"]}, '--level was "0, 5" and is "5, 0"'],
    ["the bound", {bound: "rms:0.5"}, {}, '--bound was "rms:0.5" and is "discrepancy"'],
    ["the processing", {}, {processing: "levelled"}, '--processing was not given and is "levelled"'],
  ])("by %s", (_, there, here, words) => {
    expect(runDifference(identity(there), identity(here))).toBe(words);
  });

  test("by a polygon of a file", () => {
    const strips = (...areas: readonly string[]): RunIdentity => ({
      settings: {wanted: {strips: areas.map((area) => ({name: "pit", area}))}},
      inputs: [],
    });
    expect(runDifference(strips(), strips("pits.geojson, feature 1"))).toBe(
      '--strips "pits.geojson, feature 1" was not given and is now',
    );
  });

  test("by their files: other names, or other bytes", () => {
    expect(runDifference(identity({}), identity({}, [file("b.csv"), file("c.csv")]))).toBe(
      'it was made from "a.csv", and this one is from "b.csv, c.csv"',
    );
    expect(runDifference(identity({}), identity({}, [file("a.csv", "bb")]))).toBe('"a.csv" has changed since');
  });

  test("not at all", () => {
    expect(runDifference(identity({}), identity({}))).toBeUndefined();
  });

  test("where a record of another form has no option to name, in words", () => {
    const channels = (...roles: readonly string[]): RunIdentity => ({
      settings: {acquisition: {channels: roles.map((role) => ({role}))}},
      inputs: [],
    });
    expect(runDifference(channels("value"), channels("value", "value.2"))).toBe("what was measured is not the same");
    expect(runDifference({settings: null, inputs: []}, channels("value"))).toBe("what was measured is not the same");
    expect(runDifference({settings: null, inputs: []}, {settings: {}, inputs: []})).toBe("other settings");
  });
});
