/** The files of a comparison at crossings: their bytes, hostile names, and the rules of GeoJSON. */
import {expect, test} from "vitest";
import {InputError, ModelError} from "../../lib/errors.ts";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {transformation} from "../../lib/geometry/transformation.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {writeCrossingLinesCsv, writeCrossingsCsv} from "../../lib/products/crossing-tables.ts";
import {writeCrossingsGeojson} from "../../lib/products/crossings-geojson.ts";
import {uncarried} from "../../lib/study/carry-crossings.ts";
import {crossingResult} from "../../lib/study/crossing-result.ts";
import type {CrossedSurvey, CrossingSide} from "../../lib/survey/crossings.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {keptText, parsedCsv} from "../harness/text-sink.ts";

const side = (line: number[], height: number[], value: number[]): CrossingSide => ({
  line: Uint32Array.from(line),
  at: Float64Array.from(line, () => 0.5),
  chainage: Float64Array.from(line, (_, i) => 10 * i),
  height: Float64Array.from(height),
  value: Float64Array.from(value, (nT) => nT * 1e-9),
});

/** Two crossings on the central meridian of UTM 33 north: the second line is named to do harm, the third has no source. */
function fixture(carry: boolean) {
  const crossed: CrossedSurvey = {
    lines: ["A", '=HYPERLINK("x"),<b>', "C"],
    observable: fieldVertical,
    heights: "elevation",
    crossings: {
      count: 2,
      x: Float64Array.of(500_000, 500_000),
      y: Float64Array.of(0, 5_900_000),
      first: side([0, 0], [40, 40], [12, 5]),
      second: side([1, 2], [50, 60], [7, 8]),
    },
    failures: [{id: "lonely", failure: new InputError("line/one-station", "one station")}],
    notices: [],
  };
  if (!carry) return crossingResult(crossed, undefined, new Map());
  const readings = uncarried(crossed.crossings, undefined);
  readings.first[0] = 9e-9;
  readings.second[0] = 7e-9;
  readings.reasons.set(1, "A has no source (x/y)");
  return crossingResult(
    crossed,
    readings,
    new Map([["C", {status: "failed", failure: new ModelError("x/y", "no, none")}]]),
  );
}

test("crossings.csv", async () => {
  const sink = keptText();
  await writeCrossingsCsv(sink, fixture(true));
  expect(sink.text()).toBe(
    [
      "line_a,chainage_a_m,line_b,chainage_b_m,x,y,height_a_m,height_b_m,value_a_nT,value_b_nT,difference_nT,common_level_m,carried_a_nT,carried_b_nT,carried_difference_nT,outlier,reason",
      'A,0,"\'=HYPERLINK(""x""),<b>",0,500000,0,40,50,12,7,5,50,9,7,2,false,',
      "A,10,C,10,500000,5900000,40,60,5,8,-3,60,,8,,false,A has no source (x/y)",
      "",
    ].join("\n"),
  );
});

test("as measured only, the columns of what was carried are empty", async () => {
  const sink = keptText();
  await writeCrossingsCsv(sink, fixture(false));
  for (const row of parsedCsv(sink.text())) {
    expect([row["common_level_m"], row["carried_a_nT"], row["carried_difference_nT"], row["reason"]]).toEqual([
      "",
      "",
      "",
      "",
    ]);
    expect(row["difference_nT"]).not.toBe("");
  }
});

test("crossing_lines.csv: this line less the others, every line of the survey", async () => {
  const sink = keptText();
  await writeCrossingLinesCsv(sink, fixture(true));
  const rows = parsedCsv(sink.text());
  expect(rows.map(({line, status, reason}) => [line, status, reason])).toEqual([
    ["A", "done", ""],
    [`'=HYPERLINK("x"),<b>`, "done", ""],
    ["C", "failed", "no, none"],
    ["lonely", "failed", "one station"],
  ]);
  expect(
    rows.map((row) => [row["crossings"], row["mean_nT"], row["carried_crossings"], row["carried_mean_nT"]]),
  ).toEqual([
    ["2", "1", "1", "2"],
    ["1", "-5", "1", "-2"],
    ["1", "3", "0", ""],
    ["0", "", "", ""],
  ]);
});

test("crossings.geojson keeps RFC 7946, and points lie where the crossings do", async () => {
  const sink = keptText();
  const way = transformation(coordinateSystem("EPSG:32633"), coordinateSystem("EPSG:4326"));
  await writeCrossingsGeojson(sink, fixture(true), way);
  const collection = JSON.parse(sink.text());
  expect(Object.keys(collection)).toEqual(["type", "features"]);
  expect(collection.type).toBe("FeatureCollection");
  expect(collection.features).toHaveLength(2);
  for (const feature of collection.features) {
    expect(Object.keys(feature)).toEqual(["type", "geometry", "properties"]);
    expect(feature.type).toBe("Feature");
    expect(feature.geometry.type).toBe("Point");
    const [longitude, latitude, ...more] = feature.geometry.coordinates;
    expect(more).toEqual([]);
    // The central meridian of zone 33.
    expect(longitude).toBe(15);
    expect(Math.abs(latitude)).toBeLessThanOrEqual(90);
  }
  expect(collection.features[0].geometry.coordinates[1]).toBe(0);
  // Length of the meridian from the equator on WGS 84, m of degrees (series of handbooks, from memory).
  const [, latitude] = collection.features[1].geometry.coordinates;
  const sine = (times: number): number => Math.sin((times * latitude * Math.PI) / 180);
  const meridian = 111132.9525 * latitude - 16038.5086 * sine(2) + 16.8326 * sine(4);
  absoluteClose(
    0.9996 * meridian,
    5_900_000,
    0.05,
    "seven decimals of a degree are a centimetre, the series a few more",
  );
  expect(collection.features[0].properties).toMatchObject({
    line_a: "A",
    line_b: '=HYPERLINK("x"),<b>',
    difference_nT: 5,
    carried_difference_nT: 2,
  });
  expect(collection.features[1].properties).toMatchObject({
    difference_nT: -3,
    carried_difference_nT: null,
    common_level_m: 60,
  });
});
