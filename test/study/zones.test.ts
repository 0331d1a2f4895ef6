/** Polygons of the map as supports and strips of lines: from a table in metres, in degrees, with chainage, and of a grid. */
import {describe, expect, test} from "vitest";
import {openSurvey} from "../../lib/acquisition/catalogue.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {parseGeoJson} from "../../lib/formats/geojson.ts";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {totalLength} from "../../lib/geometry/interval.ts";
import {areaOf, type MapArea} from "../../lib/geometry/map-area.ts";
import {transformation} from "../../lib/geometry/transformation.ts";
import {partsOf} from "../../lib/inverse/nouns.ts";
import {boundRuleNamed} from "../../lib/inverse/rules/catalogue.ts";
import {studyGrid} from "../../lib/study/grid-study.ts";
import type {LineOutcome, LineStudy} from "../../lib/study/outcome.ts";
import type {Settings, StripSetting, SupportSetting} from "../../lib/study/settings.ts";
import {OFF_SUPPORT} from "../../lib/study/skipped.ts";
import {studySurvey} from "../../lib/study/survey-study.ts";
import {zonesFor} from "../../lib/study/zones.ts";
import {linesOf, settingsWith} from "../acquisition/settings.ts";
import {failure, memorySource} from "../formats/memory.ts";
import {floatBytes, plainTags, tiffBytes} from "../formats/tiff-bytes.ts";
import {plainSettings} from "../harness/synthetic-line.ts";

const UTM = "EPSG:32633";
const degrees = transformation(coordinateSystem(UTM), coordinateSystem("EPSG:4326"));
/** The corner of the survey. */
const [X0, Y0] = [500_000, 6_000_000];

/** A polygon by metres from the corner of the survey. */
function areaAt(...corners: readonly (readonly [number, number])[]): MapArea {
  const ring = [...corners, corners[0]!].map(([x, y]) => degrees.apply(X0 + x, Y0 + y));
  const {features} = parseGeoJson(JSON.stringify({type: "Polygon", coordinates: [ring]}), "zones.geojson");
  return areaOf(features[0]!, "zones.geojson");
}
const boxAt = (x0: number, y0: number, x1: number, y1: number) => areaAt([x0, y0], [x1, y0], [x1, y1], [x0, y1]);
const joined = (...areas: MapArea[]): MapArea => ({...areas[0]!, polygons: areas.flatMap(({polygons}) => polygons)});

/** Lines A, B and C towards east, 0, 100 and 200 m north of the corner; 41 stations 10 m apart, each 12 m up. */
const STATIONS = ["A", "B", "C"].flatMap((line, n) =>
  Array.from({length: 41}, (_, i) => ({line, x: 10 * i, y: 100 * n, value: 0.5 / (1 + ((10 * i - 200) / 40) ** 2)})),
);
const table = (columns: string, cells: (s: (typeof STATIONS)[number]) => readonly (number | string)[]) =>
  memorySource([columns, ...STATIONS.map((s) => cells(s).join(","))].join("\n"), "lines.csv");
const METRES = table("line,x,y,value", ({line, x, y, value}) => [line, X0 + x, Y0 + y, value]);
const DEGREES = table("line,longitude,latitude,value", ({line, x, y, value}) => [
  line,
  ...degrees.apply(X0 + x, Y0 + y),
  value,
]);
const CHAINED = table("line,chainage,x,y,value", ({line, x, y, value}) => [line, 1000 + x, X0 + x, Y0 + y, value]);

const settings = (support: readonly SupportSetting[], strips: readonly StripSetting[] = []): Settings => {
  const plain = plainSettings({bound: boundRuleNamed("rms:1", 1e-5)});
  return {...plain, model: {...plain.model, support}, wanted: {...plain.wanted, strips}};
};
const opened = (source: typeof METRES, own: Partial<AcquisitionSettings> = {}) =>
  openSurvey([source], settingsWith({crs: UTM, clearance: 12, ...own}));
async function outcomes(source: typeof METRES, given: Settings, own: Partial<AcquisitionSettings> = {}) {
  const found: LineOutcome[] = [];
  for await (const outcome of studySurvey(await opened(source, own), given)) found.push(outcome);
  return found;
}
const supportOf = ({panels}: LineStudy) => panels.components.map(({interval: {from, to}}) => [from, to] as const);
const studied = (outcome: LineOutcome | undefined): LineStudy => {
  if (outcome === undefined || !("study" in outcome)) throw new Error("not studied");
  return outcome.study;
};
/** The polygons were drawn in degrees with some 1e-9 of rounding and are rounded to a millimetre. */
const closeTo = (
  found: readonly (readonly [number, number])[],
  wanted: readonly (readonly [number, number])[],
  within: number,
) => {
  expect(found).toHaveLength(wanted.length);
  found.flat().forEach((value, i) => {
    expect(Math.abs(value - wanted.flat()[i]!)).toBeLessThanOrEqual(within);
  });
};

describe("a support of polygons", () => {
  // A corridor that slants over lines A and B: at A from 100 to 250, at B from 150 to 300; C is beyond.
  const slanted = areaAt([75, -50], [225, -50], [325, 150], [175, 150]);

  test("gives each line its own part, and skips the line that has none", async () => {
    const [a, b, c] = await outcomes(METRES, settings([{area: slanted}]));
    closeTo(supportOf(studied(a)), [[100, 250]], 0.0015);
    closeTo(supportOf(studied(b)), [[150, 300]], 0.0015);
    expect(c).toMatchObject({status: "skipped", id: "C", failure: {code: OFF_SUPPORT}});
  });

  test("is the same for the survey in degrees, and for given chainage from its own zero", async () => {
    const [a, b] = await outcomes(DEGREES, settings([{area: slanted}]), {crs: undefined});
    // The survey's own projection is true to scale; UTM shrinks by 4 in 10,000 here: 0.04 to 0.12 m.
    closeTo(
      supportOf(studied(a)),
      [[100, 250]].map(([f, t]) => [f! / 0.9996, t! / 0.9996] as const),
      0.01,
    );
    closeTo(
      supportOf(studied(b)),
      [[150, 300]].map(([f, t]) => [f! / 0.9996, t! / 0.9996] as const),
      0.1,
    );
    const [chained] = await outcomes(CHAINED, settings([{area: slanted}]));
    closeTo(supportOf(studied(chained)), [[1100, 1250]], 0.0015);
  });

  test("joins several polygons and intervals of chainage", async () => {
    const zones = [
      {area: boxAt(50, -20, 120, 20)},
      {area: boxAt(110, -20, 160, 20)},
      {from: 155, to: 290, group: undefined},
      {from: 300, to: 310, group: undefined},
    ];
    const [a, b] = await outcomes(METRES, settings(zones));
    closeTo(
      supportOf(studied(a)),
      [
        [50, 290],
        [300, 310],
      ],
      0.0015,
    );
    closeTo(
      supportOf(studied(b)),
      [
        [155, 290],
        [300, 310],
      ],
      1e-9,
    );
  });

  test("goes on beyond the ends, up to twenty median heights", async () => {
    const [a] = await outcomes(METRES, settings([{area: boxAt(-100, -20, 9000, 20)}]));
    closeTo(supportOf(studied(a)), [[-100, 400 + 20 * 12]], 0.0015);
    expect(studied(a).notices.map(({code}) => code)).toContain("support/cut-off");
    const [beyond] = await outcomes(
      METRES,
      settings([{area: joined(boxAt(-100, -20, -50, 20), boxAt(100, 80, 200, 120))}]),
    );
    expect(beyond).toMatchObject({status: "skipped", failure: {code: OFF_SUPPORT}});
  });

  test("that no line meets stops the run, since something is wrong with it", async () => {
    const swapped = {
      ...slanted,
      polygons: slanted.polygons.map(({outer}) => ({outer: outer.map((_, i) => outer[i ^ 1]!), holes: []})),
    };
    const found = await failure(() => outcomes(METRES, settings([{area: swapped}])));
    expect(found.code).toBe("survey/all-skipped");
    expect(found.message).toMatch(/Line A meets no polygon.*longitude before latitude/);
  });

  test("needs coordinates and their system", async () => {
    const noSystem = await failure(() => outcomes(METRES, settings([{area: slanted}]), {crs: undefined}));
    expect(noSystem.code).toBe("zone/no-crs");
    expect(noSystem.message).toMatch(/^zones\.geojson, feature 1 .*line A .*--crs EPSG:n/);
    const bare = table("line,chainage,value", ({line, x, value}) => [line, x, value]);
    expect((await failure(() => outcomes(bare, settings([{area: slanted}]), {crs: undefined}))).code).toBe(
      "zone/no-coordinates",
    );
  });

  test("says that datums are taken as one, without calling every line doubtful for it", async () => {
    const survey = await opened(METRES, {crs: "EPSG:25833"});
    const [line] = await linesOf(survey);
    expect(zonesFor(settings([{area: slanted}]))(line!).notices).toMatchObject([
      {code: "zone/datums-taken-as-one", everywhere: true},
    ]);
    expect(zonesFor(settings([]))(line!)).toEqual({support: undefined, strips: [], notices: []});
  });
});

describe("strips of polygons", () => {
  const support = [{from: 0, to: 400, group: undefined}];
  const two = joined(boxAt(150, -20, 180, 20), boxAt(220, -20, 270, 120));

  test("answer for all of their parts together, on the lines that they meet", async () => {
    const parts: StripSetting[] = [
      {name: "first", from: 150, to: 180, group: undefined},
      {name: "second", from: 220, to: 270, group: undefined},
    ];
    const [a, b, c] = await outcomes(METRES, settings(support, [...parts, {name: "both", area: two}]));
    const [first, second, both] = studied(a).strips;
    expect(both!.strip).toMatchObject({name: "both", group: undefined});
    closeTo(
      partsOf(both!.strip).map(({from, to}) => [from, to] as const),
      [
        [150, 180],
        [220, 270],
      ],
      0.0015,
    );
    expect(totalLength(partsOf(both!.strip))).toBeCloseTo(80, 2);
    // Mean of the one source over 30 and 50 m; ends are rounded to a millimetre of 30 m.
    const together = (30 * first!.plainMean + 50 * second!.plainMean) / 80;
    expect(Math.abs(both!.plainMean / together - 1)).toBeLessThan(1e-4);
    // An interval for the two cannot be wider than the two intervals added.
    const width = (s: typeof first) => s!.upper - s!.lower;
    expect(width(both)).toBeLessThanOrEqual(((30 * width(first) + 50 * width(second)) / 80) * (1 + 1e-3));
    expect(width(both)).toBeGreaterThan(0);
    closeTo(
      partsOf(studied(b).strips[2]!.strip).map(({from, to}) => [from, to] as const),
      [[220, 270]],
      0.0015,
    );
    expect(studied(c).strips.map(({strip}) => strip.name)).toEqual(["first", "second"]);
  });

  test("that only the straight continuation of a line meets are none of it", async () => {
    const [a] = await outcomes(METRES, settings(support, [{name: "far", area: boxAt(2000, -20, 2100, 20)}]));
    expect(studied(a).strips).toEqual([]);
  });

  test("off the support are zero, with a doubt", async () => {
    const [a] = await outcomes(
      METRES,
      settings([{from: 0, to: 300, group: undefined}], [{name: "off", area: boxAt(320, -20, 350, 20)}]),
    );
    expect(studied(a).strips).toMatchObject([{mean: 0, lower: 0, upper: 0}]);
    expect(studied(a).notices.map(({code}) => code)).toContain("strip/off-support");
  });
});

describe("a grid", () => {
  test("has its rows cut by polygons, and skips those that meet none", async () => {
    // 30 × 4 pixels of 50 × 25 m from (500000, 7000000) in EPSG:32755.
    const values = Array.from({length: 120}, (_, i) => 5 / (1 + (((i % 30) - 15) / 3) ** 2));
    const file = memorySource(tiffBytes(plainTags(30, 4), floatBytes(values)), "grid.tif");
    const survey = await openSurvey([file], settingsWith({clearance: 60}));
    const back = transformation(coordinateSystem("EPSG:32755"), coordinateSystem("EPSG:4326"));
    const box = [
      [500225, 6999950],
      [501225, 6999950],
      [501225, 7000050],
      [500225, 7000050],
      [500225, 6999950],
    ];
    const {features} = parseGeoJson(
      JSON.stringify({type: "Polygon", coordinates: [box.map(([x, y]) => back.apply(x!, y!))]}),
      "zones.geojson",
    );
    const found = [];
    for await (const row of studyGrid(survey, settings([{area: areaOf(features[0]!, "zones.geojson")}])))
      found.push(row);
    // Rows lie at 6999987.5, 6999962.5, 6999937.5 and 6999912.5.
    expect(found.map(({status}) => status === "skipped")).toEqual([false, false, true, true]);
    // 1000 m of support in panels of a quarter of 60 m.
    expect(found.flatMap((row) => ("study" in row ? [row.study.panels] : []))).toEqual([67, 67]);
  });
});
