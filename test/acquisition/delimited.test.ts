import {describe, expect, test} from "vitest";
import {openDelimitedSurvey} from "../../lib/acquisition/delimited.ts";
import type {AcquisitionSettings} from "../../lib/acquisition/settings.ts";
import {WGS84} from "../../lib/geometry/ellipsoid.ts";
import {geodesicDistance} from "../../lib/geometry/geodesic.ts";
import {memorySource} from "../formats/memory.ts";
import {failuresOf, linesOf, settingsWith} from "./settings.ts";

const open = (text: string, own: Partial<AcquisitionSettings> = {}) =>
  openDelimitedSurvey([memorySource(text)], settingsWith(own));
const rounded = (values: ArrayLike<number>, digits = 6) => Array.from(values, (v) => Number(v.toFixed(digits)) + 0);

describe("a table of lines", () => {
  const TWO =
    "Line,Easting (m),Northing (m),Height_m,Gz mGal\nA,100,0,10,1\nA,110,0,11,2\nA,120,0,12,3\nB,120,50,10,4\nB,100,50,9,-5\n";

  test("is read by its obvious names, in SI, row numbers kept", async () => {
    const survey = await open(TWO, {clearance: undefined});
    expect(survey.choices).toEqual([
      {role: "x", column: "Easting (m)", reason: "recognised"},
      {role: "y", column: "Northing (m)", reason: "recognised"},
      {role: "line", column: "Line", reason: "recognised"},
      {role: "clearance", column: "Height_m", reason: "recognised"},
      {role: "value", column: "Gz mGal", reason: "recognised"},
    ]);
    const [a, b] = await linesOf(survey);
    expect([...a!.stations.row]).toEqual([2, 3, 4]);
    expect(rounded(a!.stations.chainage)).toEqual([0, 10, 20]);
    expect([...a!.stations.clearance!]).toEqual([10, 11, 12]);
    expect(a!.stations.elevation).toBeUndefined();
    // 1 mGal = 1e-5 m/s².
    expect(rounded(b!.channels[0]!.values, 12)).toEqual([4e-5, -5e-5]);
    expect(b!.channels[0]!.noise).toBeCloseTo(0.02e-5, 15);
    expect([a!.direction, b!.direction]).toEqual([1, -1]);
    expect(rounded(b!.stations.chainage)).toEqual([20, 0]);
    // North of an axis that runs east is to its left.
    expect(b!.stations.offset[0]! - a!.stations.offset[0]!).toBeCloseTo(50, 9);
    expect(survey.axes).toMatchObject([{group: "G1", azimuth: 90, lines: 2}]);
    expect(rounded(survey.axes[0]!.origin!)).toEqual([100, 25]);
    expect(survey.notices.map(({code}) => code)).toEqual(["crs/metres-assumed"]);
  });

  test("can be walked again, with the same result", async () => {
    const survey = await open(TWO, {clearance: undefined});
    const bare = async () => (await linesOf(survey)).map(({locate: _, ...rest}) => rest);
    expect(await bare()).toEqual(await bare());
  });

  test("locates chainage on the line, also beyond its ends", async () => {
    const [, b] = await linesOf(await open(TWO));
    for (const at of [-30, 0, 10, 45]) expect(rounded(b!.locate!(at))).toEqual([100 + at, 50]);
  });

  test("gives the same places whichever way a line was flown", async () => {
    const rows = Array.from({length: 30}, (_, i) => `L,${500000 + 7.3 * i},${4e6 + 3.1 * i + (i % 3)},${i % 7}`);
    const other = ["M,500000,4000050,1", "M,500200,4000140,2"];
    const header = "line,x,y,value";
    const forth = await open([header, ...rows, ...other].join("\n"));
    const back = await open([header, ...rows.toReversed(), ...other].join("\n"));
    expect(back.axes).toEqual(forth.axes);
    const [[f], [b]] = [await linesOf(forth), await linesOf(back)];
    expect(b!.stations.chainage.toReversed()).toEqual(f!.stations.chainage);
    expect(b!.stations.offset.toReversed()).toEqual(f!.stations.offset);
    expect(b!.channels[0]!.values.toReversed()).toEqual(f!.channels[0]!.values);
    expect(b!.direction).toBe(-f!.direction);
    expect(b!.locate!(17)[0]).toBeCloseTo(f!.locate!(17)[0], 6);
  });

  test("keeps a given chainage as it is", async () => {
    const survey = await open("chainage;value\n5,5;1\n7;2\n6;3\n");
    const [line] = await linesOf(survey);
    expect([...line!.stations.chainage]).toEqual([5.5, 7, 6]);
    expect(line).toMatchObject({id: "1", group: "G1", locate: undefined});
    expect(survey.axes[0]).toMatchObject({azimuth: undefined, origin: undefined});
  });

  test("keeps the coordinates beside a given chainage for delivery", async () => {
    const [line] = await linesOf(await open("chainage,x,y,value\n0,10,20,1\n10,10,30,2\n20,10,40,3\n"));
    expect([...line!.stations.y!]).toEqual([20, 30, 40]);
    expect(rounded(line!.locate!(25))).toEqual([10, 45]);
  });

  test("leaves out rows that lack a reading or a height, and counts them", async () => {
    const text = "x,y,height,value\n0,0,5,1\n1,0,,1\n2,0,5,NaN\n3,0,5,*\n4,0,5,2\n";
    const [line] = await linesOf(await open(text, {clearance: undefined}));
    expect([...line!.stations.row]).toEqual([2, 6]);
    expect(line!.omitted).toBe(3);
  });

  test("tells lines with one identifier apart, also across files", async () => {
    const header = "line,chainage,value\n";
    const first = memorySource(`${header}A,0,1\nA,1,1\nB,0,1\nB,1,1\nA,5,1\nA,6,1\nA.1,0,1\nA.1,1,1\n`, "a.csv");
    const second = memorySource(`${header}B,0,1\nB,2,1\n`, "b.csv");
    const survey = await openDelimitedSurvey([first, second], settingsWith());
    // A.1 is taken by a line of the file itself.
    expect((await linesOf(survey)).map(({id}) => id)).toEqual(["A.2", "B.1", "A.3", "A.1", "B.2"]);
    const notice = survey.notices.find(({code}) => code === "line/repeated-identifier");
    expect(notice?.weight).toBe("doubt");
    expect(notice?.message).toMatch(/"A", "B"/);
  });

  test("puts lines more than 20° off on an axis of their own", async () => {
    const line = (id: string, azimuth: number, length: number) => {
      const [s, c] = [Math.sin((azimuth * Math.PI) / 180), Math.cos((azimuth * Math.PI) / 180)];
      return [0, 0.5, 1].map((t) => `${id},${t * length * s},${t * length * c},1`);
    };
    const rows = [line("tie", 5, 300), line("A", 90, 1000), line("B", 275, 1000), line("C", 88, 1000)].flat();
    const survey = await open(["line,x,y,value", ...rows].join("\n"));
    expect(survey.axes.map(({group, lines}) => [group, lines])).toEqual([
      ["G1", 3],
      ["G2", 1],
    ]);
    expect(survey.axes[0]!.azimuth).toBeCloseTo((90 + 95 + 88) / 3, 2);
    expect(survey.axes[1]!.azimuth).toBeCloseTo(5, 6);
    expect((await linesOf(survey)).map(({group}) => group)).toEqual(["G2", "G1", "G1", "G1"]);
  });

  test("counts chainage from the smallest projection of any station of the group", async () => {
    const survey = await open("line,x,y,value\nA,50,0,1\nA,90,0,1\nB,10,9,1\nB,70,9,1\n");
    const [a, b] = await linesOf(survey);
    expect(rounded([...a!.stations.chainage, ...b!.stations.chainage])).toEqual([40, 80, 0, 60]);
  });

  test("says when a line bends more than its spacing allows", async () => {
    const rows = (sag: number) =>
      Array.from({length: 200}, (_, i) => `${i * 5},${sag * (1 - ((i - 100) / 100) ** 2)},1`).join("\n");
    // The extra length of a parabola of sag s over L is 8s²/3L: 107 m for 200 m, 0.7 m for 16 m.
    const bent = (await linesOf(await open(`x,y,value\n${rows(200)}`)))[0]!;
    const straight = (await linesOf(await open(`x,y,value\n${rows(16)}`)))[0]!;
    expect(bent.notices.map(({code}) => code)).toContain("line/bends");
    expect(bent.notices[0]!.line).toBe("1");
    expect(straight.notices).toEqual([]);
  });

  test("keeps repeated stations, and says so", async () => {
    const [line] = await linesOf(await open("x,y,value\n0,0,1\n5,0,2\n5,0,3\n10,0,4\n"));
    expect(line!.stations.count).toBe(4);
    expect(line!.notices.map(({code, weight}) => [code, weight])).toEqual([["line/repeated-stations", "remark"]]);
  });

  test("reads further channels beside the first", async () => {
    const [line] = await linesOf(
      await open("x,y,value,lower\n0,0,1,5\n1,0,2,6\n", {
        columns: new Map([["value.2", "lower"]]),
        channels: [
          {role: "value", observable: "gravity", unit: undefined, noise: 1},
          {role: "value.2", observable: "field-vertical", unit: "pT", noise: 2},
        ],
      }),
    );
    expect(line!.channels.map(({role}) => role)).toEqual(["value", "value.2"]);
    expect(line!.channels[1]!.values[1]).toBeCloseTo(6e-12, 20);
    expect(line!.channels[1]!.noise).toBeCloseTo(2e-12, 20);
  });

  describe("a second sensor", () => {
    const channels = ["value", "value.2"].map((role) => ({role, observable: "gravity", unit: undefined, noise: 1}));
    const second = (text: string, own: Partial<AcquisitionSettings> = {}) =>
      open(text, {
        channels,
        ...own,
        columns: new Map([["value.2", "upper"], ...(text.includes("high") ? [["clearance.2", "high"] as const] : [])]),
      });

    test("without a height of its own stands where the first one does, and that is said", async () => {
      const survey = await second("x,y,value,upper\n0,0,1,5\n1,0,2,6\n");
      const found = survey.notices.find(({code}) => code === "channel/height-of-first")!;
      expect(found.weight).toBe("remark");
      expect(found.message).toMatch(
        /^value\.2 has no height of its own.*--column elevation\.2=NAME or --column clearance\.2=NAME/,
      );
      expect((await linesOf(survey))[0]!.channels[1]!.above).toBeUndefined();
    });

    test("with one stands so much higher, and nothing is said", async () => {
      const survey = await second("x,y,clearance,value,upper,high\n0,0,10,1,5,12.5\n1,0,10,2,6,13\n", {
        clearance: undefined,
      });
      expect(survey.notices.map(({code}) => code)).not.toContain("channel/height-of-first");
      expect(rounded((await linesOf(survey))[0]!.channels[1]!.above!)).toEqual([2.5, 3]);
    });
  });
});

describe("longitude and latitude", () => {
  const along = (n: number, to: readonly [number, number], from: readonly [number, number]) =>
    Array.from({length: n}, (_, i) => from.map((a, k) => a + ((to[k]! - a) * i) / (n - 1)) as [number, number]);
  const csv = (lines: readonly (readonly [number, number])[][]) =>
    ["line,lon,lat,value", ...lines.flatMap((line, l) => line.map(([a, b]) => `L${l},${a},${b},1`))].join("\n");
  const lengths = (line: {
    stations: {chainage: Float64Array; offset: Float64Array; x: Float64Array | undefined; y: Float64Array | undefined};
  }) => {
    const {chainage, offset, x, y} = line.stations;
    let [flown, geodesic] = [0, 0];
    for (let i = 1; i < chainage.length; ++i) {
      flown += Math.hypot(chainage[i]! - chainage[i - 1]!, offset[i]! - offset[i - 1]!);
      geodesic += geodesicDistance(WGS84, x![i - 1]!, y![i - 1]!, x![i]!, y![i]!);
    }
    return {flown, geodesic};
  };

  test("of a small survey keep distances to 1e-6, on one map", async () => {
    const lines = [0, 1, 2].map((k) => along(40, [10.06, 60.03 + 0.002 * k], [10, 60 + 0.002 * k]));
    const survey = await open(csv(lines));
    expect(survey.axes).toHaveLength(1);
    expect(survey.axes[0]!.system).toMatch(/^transverse Mercator/);
    expect(survey.delivered).toBe("EPSG:4326");
    // Within 2 km of the meridian the scale is 1 + 5e-8; the geodesic is good to 0.1 mm a step.
    for (const line of await linesOf(survey)) {
      const {flown, geodesic} = lengths(line);
      expect(Math.abs(flown / geodesic - 1)).toBeLessThan(1e-6);
    }
  });

  test("of a line of 1,300 km along a parallel keep its length, where a transverse map would be 0.2 % off", async () => {
    const [line] = await linesOf(await open(csv([along(600, [71, -28], [58, -27])])));
    const {flown, geodesic} = lengths(line!);
    expect(geodesic).toBeGreaterThan(1.28e6);
    // The line lies within 25 km of the great circle: (25/6371)²/2 = 8e-6.
    expect(Math.abs(flown / geodesic - 1)).toBeLessThan(1e-5);
  });

  test("are located in longitude and latitude again", async () => {
    const survey = await open(csv([along(50, [20.3, 45.2], [20, 45])]));
    const [line] = await linesOf(survey);
    const {chainage, x, y} = line!.stations;
    for (const i of [0, 20, 49]) {
      const [longitude, latitude] = line!.locate!(chainage[i]!);
      // A straight line of degrees bends by some 12 m over these 32 km, and six knots stand for it. Drawn out from
      // the outer two to the end, a parabola is missed by 3/8 κw² = 3/8 · 8 · 12 m / 36 = 1 m, and by less within.
      expect(geodesicDistance(WGS84, longitude, latitude, x![i]!, y![i]!)).toBeLessThan(2);
    }
  });

  test("cross the antimeridian", async () => {
    const points = along(30, [180.05, -17.02], [179.95, -17]).map(([a, b]): [number, number] => [
      a > 180 ? a - 360 : a,
      b,
    ]);
    const [line] = await linesOf(await open(csv([points])));
    const {flown, geodesic} = lengths(line!);
    expect(geodesic).toBeLessThan(12e3);
    expect(Math.abs(flown / geodesic - 1)).toBeLessThan(1e-6);
  });

  test("are delivered in the system asked for", async () => {
    const survey = await open(csv([along(5, [15.01, 10], [15, 10])]), {outCrs: "EPSG:32633"});
    const [line] = await linesOf(survey);
    expect(survey.delivered).toBe("EPSG:32633");
    // 15° E is the central meridian of the zone: easting 500 km.
    expect(line!.stations.x![0]).toBeCloseTo(500000, 6);
    expect(rounded(line!.locate!(line!.stations.chainage[4]!), 2)).toEqual(
      rounded([line!.stations.x![4]!, line!.stations.y![4]!], 2),
    );
  });
});

describe("lines that names do not part", () => {
  test("are parted by their turns", async () => {
    const rows: string[] = [];
    // Three lines of 60 stations, 5 m apart, joined by half circles of radius 20 m at 5 m steps.
    for (let k = 0; k < 3; ++k) {
      for (let i = 0; i < 60; ++i) rows.push(`${k % 2 === 0 ? i * 5 : 295 - i * 5},${k * 40},1`);
      const side = k % 2 === 0 ? 1 : -1;
      if (k < 2)
        for (let a = 0.25; a < Math.PI; a += 0.25)
          rows.push(`${(k % 2 === 0 ? 295 : 0) + side * 20 * Math.sin(a)},${k * 40 + 20 - 20 * Math.cos(a)},1`);
    }
    const survey = await open(`x,y,value\n${rows.join("\n")}`, {split: "auto"});
    const lines = await linesOf(survey);
    expect(lines.map(({id}) => id)).toEqual(["1", "2", "3"]);
    expect(lines.map(({direction}) => direction)).toEqual([1, -1, 1]);
    // A heading is told from five stations, so some stations of a turn stay with a line.
    for (const line of lines) expect(Math.abs(line.stations.count - 60)).toBeLessThan(10);
    expect(survey.notices.map(({code}) => code)).toContain("line/turns-left-out");
  });

  test("are not parted by a gap straight on", async () => {
    const rows = Array.from({length: 100}, (_, i) => `${i * 5 + (i > 50 ? 200 : 0)},0,1`);
    expect((await open(`x,y,value\n${rows.join("\n")}`, {split: "auto"})).lineCount).toBe(1);
  });
});

describe("a line that cannot be used", () => {
  test("fails alone, and says where", async () => {
    const survey = await open("line,x,y,value\nA,0,0,1\nA,1,0,1\nB,5,0,1\nC,7,0,1\nC,7,0,2\nD,8,0,\n");
    expect(await failuresOf(survey)).toEqual(
      new Map([
        ["B", "line/one-station"],
        ["C", "line/one-place"],
        ["D", "line/no-station"],
      ]),
    );
    for await (const record of survey.lines())
      if ("failure" in record && record.id === "C") {
        expect(record.failure.message).toMatch(/Line "C" \(lines\.csv, from row 5\) .*two different places/);
        expect(record.failure.place).toEqual({file: "lines.csv", row: 5});
      }
  });
});
