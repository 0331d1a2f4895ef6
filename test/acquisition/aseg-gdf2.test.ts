import {describe, expect, test} from "vitest";
import {openAsegSurvey} from "../../lib/acquisition/aseg-gdf2.ts";
import {openSurvey} from "../../lib/acquisition/catalogue.ts";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {failure, memorySource} from "../formats/memory.ts";
import {linesOf, settingsWith} from "./settings.ts";

const FIELDS = {
  line: "FLTLINE:F10.1",
  x: "EAST_MGA:F11.2:UNIT=METRES,NULL=-99999.00,NAME=Easting",
  y: "NORTH_MGA:F12.2:UNIT=m:NAME=Northing",
  value: "BOUG:F9.3:UNIT=um/s2:NULL=-999.999:NAME=Gravity anomaly",
  clearance: "CLEARANCE:F7.1:UNIT=m",
};
const definition = (own: Partial<typeof FIELDS> = {}): string =>
  Object.values({...FIELDS, ...own})
    .map((field, i) => `DEFN ${i} ST=RECD,RT=;${field}\n`)
    .join("");
const DATA = [
  "    1001.0  500000.00  7000000.00    1.250   30.0",
  "    1001.0  500010.00  7000000.00   -2.500   31.0",
  "    1001.0  500020.00  7000000.00 -999.999   32.0",
  "    1002.0  500000.00  7000050.00    4.000   30.0",
  "    1002.0  500010.00  7000050.00    5.000   30.0",
  "",
].join("\n");
const pair = (own: Partial<typeof FIELDS> = {}, name = "a") => [
  memorySource(definition(own), `${name}.dfn`),
  memorySource(DATA, `${name}.dat`),
];
const NO_HEIGHT = {clearance: undefined};
const gravity = (unit: string | undefined): Partial<AcquisitionSettings> => ({
  ...NO_HEIGHT,
  channels: [{role: "value", observable: "gravity", unit, noise: 0.2}],
});
const open = (own: Partial<typeof FIELDS> = {}, settings: Partial<AcquisitionSettings> = NO_HEIGHT) =>
  openAsegSurvey(pair(own), settingsWith(settings));

describe("a pair of definition and data", () => {
  test("gives the lines that the same numbers in CSV give", async () => {
    const survey = await open();
    expect(survey.files).toEqual(["a.dat"]);
    expect(survey.choices).toEqual([
      {role: "x", column: "EAST_MGA", reason: "recognised"},
      {role: "y", column: "NORTH_MGA", reason: "recognised"},
      {role: "line", column: "FLTLINE", reason: "recognised"},
      {role: "clearance", column: "CLEARANCE", reason: "recognised"},
      {role: "value", column: "BOUG", reason: "recognised", unit: "um/s2"},
    ]);
    const csv = `line,x,y,gravity,clearance\n${DATA.replaceAll(/ +/g, ",").replaceAll(/^,/gm, "").replaceAll("-999.999", "")}`;
    const same = await openDelimitedSurvey([memorySource(csv)], settingsWith(gravity("um/s2")));
    const bare = async (lines: ReturnType<typeof linesOf>) =>
      (await lines).map(({locate: _, track: __, file: ___, ...rest}) => rest);
    const [got, wanted] = [await bare(linesOf(survey)), await bare(linesOf(same))];
    // A CSV has a row of header before the data.
    expect(wanted.map(({stations}) => [...stations.row])).toEqual([
      [2, 3],
      [5, 6],
    ]);
    expect(got.map(({stations}) => [...stations.row])).toEqual([
      [1, 2],
      [4, 5],
    ]);
    // The noise of 0.02 is in the unit of the readings.
    expect(got[0]!.channels[0]!.noise).toBeCloseTo(0.02e-6, 20);
    const rest = (line: (typeof got)[number]) => ({
      ...line,
      stations: {...line.stations, row: 0},
      channels: line.channels.map(({values}) => values),
      notices: line.notices.map(({code}) => code),
    });
    expect(got.map(rest)).toEqual(wanted.map(rest));
    // 1 um/s² = 1e-6 m/s²; the null is no reading.
    expect([...got[0]!.channels[0]!.values].map((value) => Number((1e6 * value).toFixed(9)))).toEqual([1.25, -2.5]);
    expect(got[0]!.omitted).toBe(1);
  });

  test("says what it took the unit from, and passes on words and coordinate system", async () => {
    const files = [
      ...pair(),
      memorySource("COMM Flown low\n", "a.des"),
      memorySource("DEFN 1 ST=RECD,RT=PROJ;COORDSYS:A40:NAME=GDA94 / MGA zone 53\n", "a.prj"),
    ];
    const survey = await openAsegSurvey(files, settingsWith(NO_HEIGHT));
    expect(survey.notices.map(({code, weight}) => `${weight} ${code}`)).toEqual([
      "remark gdf2/projection",
      "remark gdf2/description",
      "remark unit/from-definition",
      "remark crs/metres-assumed",
    ]);
    expect(survey.notices[0]!.message).toContain("GDA94 / MGA zone 53");
    expect(survey.notices[1]!.message).toContain("Flown low");
  });

  test("is recognised by its names among the kinds of survey, in any order and with its companions", async () => {
    const files = [...pair().toReversed(), memorySource("COMM words\n", "a.des")];
    expect((await openSurvey(files, settingsWith(NO_HEIGHT))).lineCount).toBe(2);
    const mixed = [...pair(), memorySource("line,x,y,value\nA,1,2,3\n")];
    expect(await failure(() => openSurvey(mixed, settingsWith()))).toMatchObject({code: "survey/mixed-kinds"});
    const alone = pair().slice(0, 1);
    const refused = await failure(() => openSurvey(alone, settingsWith()));
    expect(refused).toMatchObject({code: "gdf2/no-data"});
    expect(refused.message).toContain("a.dat");
  });

  test("several pairs make one survey, with one unit", async () => {
    const settings = settingsWith(NO_HEIGHT);
    expect((await openAsegSurvey([...pair(), ...pair({}, "b")], settings)).lineCount).toBe(4);
    const other = pair({value: FIELDS.value.replace("um/s2", "mGal")}, "b");
    expect(await failure(() => openAsegSurvey([...pair(), ...other], settings))).toMatchObject({
      code: "unit/files-differ",
    });
  });
});

describe("the unit of a definition", () => {
  const unit = (text: string) => ({value: FIELDS.value.replace("um/s2", text)});
  test.each([
    ["um/s2", 1e-6],
    ["µm/s^2", 1e-6],
    ["um.s-2", 1e-6],
    ["gu", 1e-6],
    ["MGALS", 1e-5],
    ["uGal", 1e-8],
  ])("%s is understood", async (text, factor) => {
    const [line] = await linesOf(await open(unit(text)));
    expect(line!.channels[0]!.values[0]).toBeCloseTo(1.25 * factor, 18);
  });

  test("agrees with --unit or is refused", async () => {
    const [line] = await linesOf(await open({}, gravity("gu")));
    expect(line!.channels[0]!.values[0]).toBeCloseTo(1.25e-6, 18);
    const refused = await failure(() => open({}, gravity("mGal")));
    expect(refused).toMatchObject({code: "unit/conflict", column: "BOUG"});
    expect(refused.message).toContain("10.0 times");
  });

  test("of another kind than the observable, or not known, is refused; --unit settles the latter", async () => {
    expect(await failure(() => open(unit("nT")))).toMatchObject({code: "unit/wrong-dimension"});
    expect(await failure(() => open(unit("m")))).toMatchObject({code: "unit/wrong-dimension"});
    expect(await failure(() => open(unit("counts")))).toMatchObject({code: "unit/not-understood"});
    const settled = await open(unit("counts"), gravity("mGal"));
    expect(settled.notices.map(({code}) => code)).toContain("unit/not-understood");
  });

  test("that is missing leaves the usual one, with a doubt", async () => {
    const survey = await open({value: "BOUG:F9.3:NULL=-999.999:NAME=Gravity anomaly"});
    expect(survey.notices.find(({code}) => code === "unit/not-defined")).toMatchObject({weight: "doubt"});
    expect((await linesOf(survey))[0]!.channels[0]!.values[0]).toBeCloseTo(1.25e-5, 18);
    const told = await open({value: "BOUG:F9.3:NULL=-999.999:NAME=Gravity anomaly"}, gravity("um/s2"));
    expect(told.notices.map(({code}) => code)).not.toContain("unit/not-defined");
  });

  test("of a place must be metres or degrees", async () => {
    const feet = {clearance: "CLEARANCE:F7.1:UNIT=ft"};
    expect(await failure(() => open(feet))).toMatchObject({code: "height/none"});
    const asked = {...NO_HEIGHT, columns: new Map([["clearance", "CLEARANCE"]])};
    expect(await failure(() => open(feet, asked))).toMatchObject({code: "unit/not-metres", column: "CLEARANCE"});
    const doubted = await open({clearance: "CLEARANCE:F7.1:UNIT=fathoms"});
    expect(doubted.notices.map(({code}) => code)).toContain("unit/not-understood");
  });

  test("in degrees makes columns called east and north longitude and latitude", async () => {
    const fields =
      "DEFN 1 ST=RECD,RT=;EAST:F12.6:NULL=-999.999999:UNIT=dega:NAME=GDA_LONG\n" +
      "DEFN 2 ST=RECD,RT=;NORTH:F12.6:NULL=-999.999999:UNIT=dega:NAME=GDA_LAT\n" +
      "DEFN 3 ST=RECD,RT=;BOUG:F9.3:UNIT=um/s2:NAME=Gravity anomaly\n";
    const data = "  135.000000  -30.000000    1.000\n  135.001000  -30.000000    2.000\n";
    const files = [memorySource(fields, "g.dfn"), memorySource(data, "g.dat")];
    const survey = await openAsegSurvey(files, settingsWith());
    expect(survey.choices.map(({role, column}) => `${role} ${column}`)).toEqual([
      "longitude EAST",
      "latitude NORTH",
      "value BOUG",
    ]);
    const [line] = await linesOf(survey);
    // A thousandth of a degree of longitude at 30° S: 111,412.84 cos φ − 93.5 cos 3φ metres a degree (WGS 84 series, from memory).
    expect(Math.abs(line!.stations.chainage[1]! - line!.stations.chainage[0]!)).toBeCloseTo(96.486, 2);
  });
});
