/** Options to settings: what each accepts, and the message for what it refuses. */

import {describe, expect, test} from "vitest";
import type {Asked} from "../../cli/options/entry.ts";
import {settingsFrom} from "../../cli/options/settings.ts";
import {InputError} from "../../lib/errors.ts";
import {BOUNDARY_FIELD} from "../../lib/potential/level-quantity.ts";

/** `--name value` pairs after the observable that every run needs. */
function asked(...pairs: readonly (readonly [string, string])[]): Asked {
  const map = new Map<string, string[]>([["observable", ["gravity"]]]);
  for (const [name, value] of pairs) map.set(name, [...(map.get(name) ?? []), value]);
  return map;
}

function refusal(...pairs: readonly (readonly [string, string])[]): string {
  try {
    settingsFrom(asked(...pairs));
  } catch (error) {
    expect(error).toBeInstanceOf(InputError);
    return (error as InputError).message;
  }
  throw new Error(`accepted: ${JSON.stringify(pairs)}`);
}

describe("settings", () => {
  test("defaults are those of the contract", () => {
    const {acquisition, model, bound, wanted, processing} = settingsFrom(asked());
    expect(acquisition).toEqual({
      columns: new Map(),
      clearance: undefined,
      elevation: undefined,
      sensorOffset: 0,
      elevationDatum: undefined,
      groundDatum: undefined,
      geoidOffset: undefined,
      crs: undefined,
      outCrs: undefined,
      split: undefined,
      channels: [{role: "value", observable: "gravity", unit: undefined, noise: undefined}],
      profiles: "rows",
      noiseLength: 0,
    });
    expect(model).toEqual({boundary: undefined, support: [], panel: undefined, regional: 1});
    expect(bound.text).toBe("discrepancy");
    expect(wanted).toEqual({
      levelQuantity: BOUNDARY_FIELD,
      levels: [{kind: "above-boundary", height: 0}],
      strips: [],
      confidence: 0.95,
      intervals: "single",
    });
    expect(processing).toBeUndefined();
  });

  test("every option reaches its setting", () => {
    const {acquisition, model, bound, wanted, processing} = settingsFrom(
      asked(
        ["column", "value=g=z"],
        ["column", "line=LN"],
        ["clearance", "60"],
        ["elevation", "-1.5e2"],
        ["sensor-offset", "-3"],
        ["elevation-datum", "ellipsoid"],
        ["ground-datum", "geoid"],
        ["geoid-offset", "47.3"],
        ["crs", "EPSG:32633"],
        ["out-crs", "EPSG:4326"],
        ["split", "auto"],
        ["profiles", "columns"],
        ["unit", "uGal"],
        ["noise", "20"],
        ["boundary", "-2000"],
        ["support", "400:900"],
        ["support", "G2/-50:50"],
        ["bound", "rms:0.5"],
        ["regional", "none"],
        ["panel", "5"],
        ["level", "0"],
        ["level", "ground+10"],
        ["strip", "a=b=600:700"],
        ["strip", "dyke=G2/-1:1"],
        ["confidence", "0.9"],
        ["trust-fraction", "0.1"],
        ["intervals", "simultaneous"],
        ["processing", "drift removed"],
      ),
    );
    expect(acquisition).toMatchObject({
      columns: new Map([
        ["value", "g=z"],
        ["line", "LN"],
      ]),
      clearance: 60,
      elevation: -150,
      sensorOffset: -3,
      elevationDatum: "ellipsoid",
      groundDatum: "geoid",
      geoidOffset: 47.3,
      crs: "EPSG:32633",
      outCrs: "EPSG:4326",
      split: "auto",
      profiles: "columns",
      channels: [{role: "value", observable: "gravity", unit: "uGal", noise: 20}],
    });
    expect(model).toEqual({
      boundary: {kind: "elevation", elevation: -2000},
      support: [
        {from: 400, to: 900, group: undefined},
        {from: -50, to: 50, group: "G2"},
      ],
      panel: 5,
      regional: -1,
    });
    expect(bound.text).toBe("rms:0.5");
    expect(wanted).toEqual({
      levelQuantity: BOUNDARY_FIELD,
      levels: [
        {kind: "above-boundary", height: 0},
        {kind: "above-ground", height: 10},
      ],
      strips: [
        {name: "a=b", from: 600, to: 700, group: undefined},
        {name: "dyke", from: -1, to: 1, group: "G2"},
      ],
      confidence: 0.9,
      trustFraction: 0.1,
      intervals: "simultaneous",
    });
    expect(processing).toBe("drift removed");
  });

  test("depth below the ground, noise of the record, degrees, equal levels", () => {
    expect(settingsFrom(asked(["boundary", "depth-5"])).model.boundary).toEqual({kind: "depth", depth: 5});
    expect(settingsFrom(asked(["noise", "record"])).acquisition.channels[0]?.noise).toBe("record");
    expect([0, 1, 2, 3].map((degree) => settingsFrom(asked(["regional", `${degree}`])).model.regional)).toEqual([
      0, 1, 2, 3,
    ]);
    expect(settingsFrom(asked(["level", "10"], ["level", "10.0"], ["level", "1e1"])).wanted.levels).toHaveLength(1);
  });

  test("the observable is never guessed", () => {
    expect(() => settingsFrom(new Map())).toThrow(
      /--observable is missing.*gravity, gravity-along.*field-vertical.*--observable gravity/,
    );
  });

  // Every message names the option, the value, what was needed, and an example.
  const refused: readonly [string, string, RegExp][] = [
    ["noise", "0", /--noise "0" is out of range\..*above 0.*--noise 0\.02/],
    ["noise", "-1", /--noise "-1" is out of range/],
    ["noise", "NaN", /--noise "NaN" is not a number/],
    ["noise", "Infinity", /is not a number/],
    ["noise", "1,5", /--noise "1,5" is not a number/],
    ["noise", "records", /or the word record/],
    ["unit", "nT", /"nT".*mGal, uGal/],
    ["unit", "mgal", /"mgal" is not a unit/],
    ["support", "900:400", /ends at or before its start.*400:900/],
    ["support", "400", /not an interval.*A:B.*400:900/],
    ["support", "400:NaN", /not an interval/],
    ["support", "zone.shp", /does not name a GeoJSON file.*\.geojson or \.json/],
    ["bound", "rms:0", /rms:0 is not a positive bound.*rms:0\.5/],
    ["bound", "rms:-1", /rms:-1 is not a positive bound/],
    ["bound", "norm:NaN", /norm:NaN is not a positive bound/],
    ["bound", "tight", /tight is not a bound known here.*rms:V, norm:V, discrepancy/],
    ["boundary", "deep", /--boundary "deep" is not understood.*-2000.*depth-5/],
    ["boundary", "depth--5", /--boundary depth- "-5" is out of range/],
    ["boundary", "ground-x", /--boundary ground- "x" is not a number/],
    ["regional", "4", /--regional "4" is not known.*none/],
    ["regional", "toString", /is not known/],
    ["panel", "0", /--panel "0" is out of range/],
    ["level", "-10", /--level "-10" is out of range.*nothing is known below the boundary/],
    ["level", "ground-3", /--level "ground-3" is not a number/],
    ["strip", "600:700", /--strip "600:700" is not NAME=A:B.*dyke=600:700/],
    ["strip", "=600:700", /not NAME=A:B/],
    ["strip", "dyke=700:600", /--strip dyke="700:600" ends at or before its start.*--strip dyke=600:700/],
    ["confidence", "1", /--confidence "1" is out of range.*between 0 and 1/],
    ["confidence", "0", /out of range/],
    ["confidence", "95", /out of range/],
    ["intervals", "joint", /--intervals "joint" is not known.*single or simultaneous/],
    ["clearance", "-5", /--clearance "-5" is out of range/],
    ["elevation", "high", /--elevation "high" is not a number/],
    ["sensor-offset", "0x10", /--sensor-offset "0x10" is not a number.*-3/],
    ["split", "line", /--split "line" is not known\. Give column or auto/],
    ["profiles", "row", /Give rows or columns/],
    ["column", "value", /--column "value" is not ROLE=NAME/],
    ["column", "hight=h", /names no role known here\. Nearest is \w+/],
    ["column", "clearence=h", /Nearest is clearance/],
    ["observable", "gravitation", /given as "gravity" and as "gravitation"/],
  ];
  test.each(refused)("--%s %s is refused", (name, value, message) => {
    expect(refusal([name, value])).toMatch(message);
  });

  test("values that contradict each other", () => {
    expect(refusal(["noise", "1"], ["noise", "2"])).toMatch(/--noise was given as "1" and as "2"/);
    expect(refusal(["support", "0:10"], ["support", "5:20"])).toMatch(/0:10 and 5:20 overlap/);
    expect(refusal(["support", "0:10"], ["support", "G2/5:20"])).toMatch(/overlap/);
    expect(refusal(["column", "value=a"], ["column", "value=b"])).toMatch(
      /two columns for the role value: "a" and "b"/,
    );
    expect(refusal(["strip", "a=0:1"], ["strip", "a=2:3"])).toMatch(/--strip names "a" twice/);
    expect(settingsFrom(asked(["support", "G1/0:10"], ["support", "G2/5:20"])).model.support).toHaveLength(2);
  });

  test("a huge value is quoted by its beginning", () => {
    expect(refusal(["noise", "9x".repeat(100_000)]).length).toBeLessThan(400);
  });
});
