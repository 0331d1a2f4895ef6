import {describe, expect, test} from "vitest";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {failure, memorySource} from "../formats/memory.ts";
import {linesOf, settingsWith} from "./settings.ts";

const open = (text: string, own: Partial<AcquisitionSettings> = {}) =>
  openDelimitedSurvey([memorySource(text)], settingsWith(own));
const columns = (...entries: [string, string][]) => ({columns: new Map(entries)});
const channel = (own: object) => ({
  channels: [{role: "value", observable: "gravity", unit: undefined, noise: 1, ...own}],
});
const GOOD = "x,y,value\n0,0,1\n1,0,2\n";

/** What is wrong, the file, the settings, the code, and what the message must say. */
const CASES: readonly [string, string, Partial<AcquisitionSettings>, string, RegExp][] = [
  ["a missing column", "x,value\n0,1\n", {}, "column/missing", /Columns there: x, value\. .*--column chainage=NAME/],
  ["half a pair", "x,value\n0,1\n", columns(["x", "x"]), "column/missing", /no column for y/],
  ["no reading", "x,y,name\n0,0,a\n1,0,b\n", {}, "column/missing", /no column for value .*--column value=NAME/],
  [
    "two columns of numbers",
    "x,y,a,b\n0,0,1,2\n1,0,1,2\n",
    {},
    "column/ambiguous",
    /2 hold numbers: a, b\. .*--column value=NAME/,
  ],
  ["two readings by name", "x,y,Bouguer,FreeAir\n0,0,1,2\n", {}, "column/ambiguous", /Bouguer, FreeAir/],
  [
    "two columns for one role",
    "x,Easting,y,value\n0,0,0,1\n",
    {},
    "column/ambiguous",
    /2 columns could stand for x: x, Easting/,
  ],
  [
    "a column with two roles",
    "x,y,value\n0,0,1\n",
    columns(["x", "x"], ["value", "x"]),
    "column/two-roles",
    /"x" was asked for both as x and as value/,
  ],
  [
    "a mistyped column",
    "x,y,gravity_a\n0,0,1\n",
    columns(["value", "gravitya"]),
    "column/unknown",
    /did you mean "gravity_a"/,
  ],
  ["a mistyped role", GOOD, columns(["valeu", "value"]), "column/unknown-role", /Did you mean value\?/],
  [
    "two kinds of position",
    "x,y,lon,lat,value\n0,0,1,1,1\n",
    columns(["x", "x"], ["latitude", "lat"]),
    "column/two-positions",
    /one pair was needed/,
  ],
  [
    "text in a number",
    "x,y,value\n0,0,1\n1,0,two\n",
    columns(["value", "value"]),
    "table/text-in-number",
    /row 3, column "value" holds "two"/,
  ],
  ["an infinite number", "x,y,value\n0,0,1\n1,0,Infinity\n", {}, "table/infinite", /row 3, column "value"/],
  [
    "a bad cell far down a file of good ones",
    `x,y,value\n${"1,0,2\n".repeat(5000)}1,0,x\n`,
    {},
    "table/text-in-number",
    /row 5002/,
  ],
  ["no height", GOOD, {clearance: undefined}, "height/none", /--clearance H or --elevation Z/],
  [
    "a height twice",
    "x,y,h,value\n0,0,1,1\n",
    columns(["clearance", "h"], ["value", "value"]),
    "height/two-sources",
    /--clearance 10.*--column clearance=h/,
  ],
  [
    "two datums",
    "x,y,elevation,ground,value\n0,0,1,0,1\n1,0,1,0,1\n",
    {elevationDatum: "ellipsoid", groundDatum: "sea level"},
    "height/datums-differ",
    /--geoid-offset N/,
  ],
  ["latitude beyond the pole", "lon,lat,value\n1,2,3\n1,95,3\n", {}, "crs/latitude-range", /Latitude 95/],
  ["an unknown system", GOOD, {crs: "EPSG:999999"}, "crs/unknown-code", /999999/],
  ["degrees for metres", GOOD, {crs: "EPSG:4326"}, "crs/not-projected", /--column longitude=NAME/],
  ["metres for degrees", "lon,lat,value\n1,2,3\n2,2,3\n", {crs: "EPSG:32633"}, "crs/not-geographic", /--out-crs/],
  ["a system to deliver in without one to start from", GOOD, {outCrs: "EPSG:32633"}, "crs/needed", /--crs EPSG:n/],
  ["zero noise", GOOD, channel({noise: 0}), "noise/not-positive", /0 mGal.*above 0/],
  ["negative noise", GOOD, channel({noise: -2}), "noise/not-positive", /-2 mGal/],
  ["a unit of another kind", GOOD, channel({unit: "nT"}), "unit/wrong-dimension", /mGal/],
  ["an unknown observable", GOOD, channel({observable: "heat"}), "observable/unknown", /heat/],
  [
    "observed gravity",
    "x,y,value\n0,0,979041.8\n1,0,979043.3\n2,0,0\n",
    {},
    "value/not-an-anomaly",
    /2 of 3\) lie beyond 1000 mGal.*normal gravity/,
  ],
  [
    "a total field",
    "x,y,value\n0,0,-46015\n1,0,-46019\n",
    channel({observable: "field-vertical"}),
    "value/not-an-anomaly",
    /beyond −5000 nT.*reference field/,
  ],
  [
    "no station at all",
    "x,y,value\n0,0,\n,0,1\n",
    columns(["value", "value"]),
    "survey/no-station",
    /no row has a position and a reading/,
  ],
  [
    "a bad time, when times are used",
    "x,y,time,value\n0,0,noon,1\n",
    {split: "auto"},
    "table/text-in-time",
    /holds "noon".*09:30:00/,
  ],
];

describe("refuses", () => {
  for (const [what, text, own, code, message] of CASES)
    test(what, async () => {
      const found = await failure(() => open(text, own));
      expect(found.code).toBe(code);
      expect(found.message).toMatch(message);
    });

  test("with the place of a bad cell", async () => {
    expect(await failure(() => open("x,y,value\n0,0,1\nhere,0,2\n"))).toMatchObject({row: 3, column: "x"});
  });

  test("a second file without a column of the first", async () => {
    const files = [memorySource("x,y,ground,value\n0,0,1,1\n1,0,1,1\n", "a.csv"), memorySource(GOOD, "b.csv")];
    const found = await failure(() => openDelimitedSurvey(files, settingsWith()));
    expect(found).toMatchObject({code: "column/missing"});
    expect(found.message).toMatch(/b\.csv has no column for ground \(another file/);
  });
});

describe("a name is a name", () => {
  test("whatever is written in it", async () => {
    const names = ["../up", "=cmd|'/c calc'!A1", "<script>alert(1)</script>"];
    const rows = names.flatMap((name) => [`${name},0,1`, `${name},1,2`]);
    const survey = await open(["line,chainage,value", ...rows].join("\n"));
    expect((await linesOf(survey)).map(({id}) => id)).toEqual(names);
  });
});

describe("heights", () => {
  const text = "x,y,elevation,ground,clearance,value\n0,0,120,100,17,1\n1,0,121,100,18,1\n";

  test("of all three kinds must agree to 2 m", async () => {
    const [line] = await linesOf(await open(text, {clearance: undefined}));
    expect(line!.notices).toMatchObject([{code: "height/disagree", weight: "doubt", line: "1"}]);
    expect(line!.notices[0]!.message).toMatch(/differs from clearance by 3\.00 m/);
    const [mended] = await linesOf(await open(text, {clearance: undefined, geoidOffset: 3, sensorOffset: 0}));
    expect(mended!.notices).toEqual([]);
    expect([...mended!.stations.ground!]).toEqual([103, 103]);
  });

  test("give the third from two, the sensor's offset applied", async () => {
    const without = "x,y,elevation,ground,value\n0,0,120,100,1\n1,0,121,100,1\n";
    const [line] = await linesOf(await open(without, {clearance: undefined, sensorOffset: -10}));
    expect([...line!.stations.elevation!]).toEqual([110, 111]);
    expect([...line!.stations.clearance!]).toEqual([10, 11]);
    const [flat] = await linesOf(await open(GOOD, {elevation: 50, clearance: 20, sensorOffset: -5}));
    expect([...flat!.stations.ground!]).toEqual([30, 30]);
  });

  test("may be missing for a look", async () => {
    const survey = await open(GOOD, {clearance: undefined, inspecting: true});
    expect(survey.notices.map(({code}) => code)).toContain("height/none");
    expect((await linesOf(survey))[0]!.stations.clearance).toBeUndefined();
  });

  test("an empty column of heights is left out", async () => {
    const survey = await open("x,y,elevation,ground,value\n0,0,5,,1\n1,0,5,,1\n", {clearance: undefined});
    expect(survey.notices.map(({code}) => code)).toContain("height/empty-column");
    expect((await linesOf(survey))[0]!.stations.count).toBe(2);
  });
});

test("a unit in the header that is not the unit read raises a doubt", async () => {
  const survey = await open("x,y,gz_ugal\n0,0,1\n1,0,2\n");
  expect(survey.notices).toContainEqual(expect.objectContaining({code: "column/unit", weight: "doubt"}));
});
