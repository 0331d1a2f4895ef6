/**
 * Coordinates against PROJ (Debian's proj-bin, by its programs cs2cs, proj, geod and projinfo).
 * PROJ is written in C++ independently of proj4; the systems are named to it by EPSG code, so
 * its own database supplies the parameters.
 */
import {readFileSync} from "node:fs";
import {expect, test} from "vitest";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {geographicOf} from "../../lib/geometry/crs-definition.ts";
import {WGS84} from "../../lib/geometry/ellipsoid.ts";
import {DATUMS, GEOGRAPHIC, PROJECTED} from "../../lib/geometry/epsg-table.ts";
import {geodesic} from "../../lib/geometry/geodesic.ts";
import {ownMercator, ownObliqueMercator} from "../../lib/geometry/own-mercator.ts";
import {projectionScale} from "../../lib/geometry/projection-scale.ts";
import {transformation} from "../../lib/geometry/transformation.ts";
import {absoluteClose} from "../harness/assert-close.ts";
import {runPython} from "../harness/python.ts";

/** Runs each command with its own lines of input; gives back the lines that each printed. */
function runEach(jobs: readonly {command: readonly string[]; lines: readonly string[]}[]): string[][] {
  const script = `
import json, subprocess, sys
answers = []
for job in json.load(sys.stdin):
    done = subprocess.run(job["command"], input="\\n".join(job["lines"]) + "\\n", capture_output=True, text=True)
    if done.returncode != 0:
        sys.exit(" ".join(job["command"]) + ": " + done.stderr)
    answers.append(done.stdout.splitlines())
json.dump(answers, sys.stdout)
`;
  return JSON.parse(runPython(script, JSON.stringify(jobs)));
}

const numbers = (line: string): number[] => line.trim().split(/\s+/).map(Number);
const rows = (table: string): Map<string, string[]> =>
  new Map(
    table
      .trim()
      .split("\n")
      .map((line) => line.split("|"))
      .map(([code, ...fields]) => [code!, fields]),
  );

/** A generator of numbers in [0, 1), the same every time (Lehmer's, modulus 2³¹ − 1). */
function sequence(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647;
  };
}

test("systems of every kind agree with cs2cs to 1 mm", () => {
  const [projected, geographic, datums] = [rows(PROJECTED), rows(GEOGRAPHIC), rows(DATUMS)];
  const places = new Map<string, [number, number][]>();
  for (const line of readFileSync(new URL("../reference/epsg-check.csv", import.meta.url), "utf8").split("\n")) {
    if (!/^\d/.test(line)) continue;
    const [code, longitude, latitude] = line.split(",");
    places.set(code!, [...(places.get(code!) ?? []), [Number(longitude), Number(latitude)]]);
  }
  const codes = [...places.keys()];
  expect(codes.length).toBeGreaterThan(250);
  const answers = runEach(
    codes.map((code) => {
      const base = projected.get(code)![1]!;
      expect(datums.has(geographic.get(base)![1]!)).toBe(true);
      return {
        command: ["cs2cs", "-f", "%.6f", `EPSG:${base}`, `EPSG:${code}`],
        // The authority lists latitude first in every geographic system of the dataset; cs2cs reads
        // degrees, even for the few systems that count in grads.
        lines: places.get(code)!.map(([longitude, latitude]) => `${latitude} ${longitude}`),
      };
    }),
  );
  for (const [i, code] of codes.entries()) {
    const system = coordinateSystem(`EPSG:${code}`);
    const unit = system.metresPerUnit!;
    const {apply} = transformation(geographicOf(system), system);
    for (const [k, [longitude, latitude]] of places.get(code)!.entries()) {
      const [x, y] = apply(longitude, latitude);
      const [first, second] = numbers(answers[i]![k]!) as [number, number];
      // cs2cs prints in the order of the authority: easting first or northing first.
      const straight = Math.hypot(x - first, y - second);
      const crossed = Math.hypot(x - second, y - first);
      absoluteClose(
        Math.min(straight, crossed) * unit,
        0,
        1e-3,
        `EPSG:${code} at ${longitude}, ${latitude}: the table's promise`,
      );
    }
  }
});

test("a survey's own projections agree with cs2cs", () => {
  const random = sequence(7);
  const wgs84 = coordinateSystem("EPSG:4326");
  const cases = [52, 0, -26, -60, 71].flatMap((latitude) => [
    {projection: ownMercator([11], [latitude], wgs84), latitude},
    ...[0.3, 30, 90, 133.3, 179].map((azimuth) => ({
      projection: ownObliqueMercator([11], [latitude], wgs84, azimuth),
      latitude,
    })),
  ]);
  const points = cases.map(({latitude}) =>
    Array.from({length: 8}, () => [11 + 8 * (random() - 0.5), latitude + 8 * (random() - 0.5)] as const),
  );
  const answers = runEach(
    cases.map(({projection}, i) => ({
      command: ["cs2cs", "-f", "%.7f", wgs84.definition, "+to", projection.system.definition],
      lines: points[i]!.map(([longitude, latitude]) => `${longitude} ${latitude}`),
    })),
  );
  for (const [i, {projection}] of cases.entries())
    for (const [k, [longitude, latitude]] of points[i]!.entries()) {
      const got = projection.project(longitude, latitude);
      const want = numbers(answers[i]![k]!);
      const because = `${projection.system.title}: Hotine's formulas lose digits near 0° and 90°, measured 2 µm`;
      absoluteClose(got[0], want[0]!, 1e-5, because);
      absoluteClose(got[1], want[1]!, 1e-5, because);
    }
});

test("geodesics agree with geod", () => {
  const random = sequence(11);
  const pairs = Array.from({length: 200}, (_, i) => {
    const reach = 10 ** (-4 + (i / 199) * 6); // 1e-4° to 100°
    const [longitude, latitude] = [360 * random() - 180, 160 * random() - 80];
    const there = Math.max(-89, Math.min(89, latitude + reach * (random() - 0.5)));
    return [longitude, latitude, longitude + reach * (random() - 0.5), there] as const;
  });
  const [answers] = runEach([
    {
      command: ["geod", "-I", "-f", "%.12f", "-F", "%.9f", "+ellps=WGS84"],
      lines: pairs.map(([x1, y1, x2, y2]) => `${y1} ${x1} ${y2} ${x2}`),
    },
  ]);
  for (const [i, pair] of pairs.entries()) {
    const [azimuth, , distance] = numbers(answers![i]!) as [number, number, number];
    const got = geodesic(WGS84, ...pair);
    absoluteClose(got.distance, distance, 1e-4, "Vincenty's series: below 0.1 mm");
    const turn = Math.abs(((got.azimuth - azimuth + 540) % 360) - 180);
    // Both ends rounded to 1e-14 of a radian (6e-8 m) bend a short geodesic by that over its length.
    absoluteClose(turn, 0, 1e-8 + 1e-5 / distance, "series below 1e-10 radians, and rounding over the length");
  }
});

test("scale and convergence agree with proj", () => {
  const places: [string, string, number, number][] = [
    ["EPSG:32633", "+proj=utm +zone=33 +ellps=WGS84", 16, 50],
    ["EPSG:32733", "+proj=utm +zone=33 +south +ellps=WGS84", 12.5, -33],
    ["EPSG:2154", "+proj=lcc +lat_0=46.5 +lon_0=3 +lat_1=49 +lat_2=44 +x_0=700000 +y_0=6600000 +ellps=GRS80", -2, 43],
    ["EPSG:3035", "+proj=laea +lat_0=52 +lon_0=10 +x_0=4321000 +y_0=3210000 +ellps=GRS80", 25, 62],
    ["EPSG:3413", "+proj=stere +lat_0=90 +lat_ts=70 +lon_0=-45 +ellps=WGS84", -20, 75],
  ];
  const answers = runEach(
    places.map(([, definition, longitude, latitude]) => ({
      command: ["proj", "-V", "-f", "%.9f", ...definition.split(" ")],
      lines: [`${longitude} ${latitude}`],
    })),
  );
  for (const [i, [name, , longitude, latitude]] of places.entries()) {
    const text = answers[i]!.join("\n");
    const {largest, least, convergence} = projectionScale(coordinateSystem(name))(longitude, latitude);
    const [, most, smallest] = /scale error: (\S+) (\S+)/.exec(text)!.map(Number) as [number, number, number];
    absoluteClose(largest, most, 6e-6, `${name}: printed to five decimals`);
    absoluteClose(least, smallest, 6e-6, `${name}: printed to five decimals`);
    const turned = Number(/Convergence : .*\[ (\S+) \]/.exec(text)![1]);
    absoluteClose(convergence, turned, 1e-6, `${name}: printed to eight decimals, by numerical derivatives there too`);
  }
});

test("WKT as PROJ writes it means the same system", () => {
  const codes = [32633, 27700, 2227, 2154, 3005, 24200, 2193, 3067, 31467, 28355];
  const places = new Map([
    [32633, [16, 50]],
    [27700, [-3, 54]],
    [2227, [-121, 37.5]],
    [2154, [2, 46]],
    [3005, [-125, 54]],
    [24200, [-77.2, 18.1]],
    [2193, [172, -42]],
    [3067, [25, 64]],
    [31467, [9.5, 50]],
    [28355, [146, -36]],
  ]);
  const forms = ["WKT1_ESRI", "WKT1_GDAL", "WKT2:2019"];
  const texts = runEach(
    codes.flatMap((code) =>
      forms.map((form) => ({command: ["projinfo", "-q", "-o", form, "--single-line", `EPSG:${code}`], lines: []})),
    ),
  );
  let wordByWord = 0;
  for (const [i, code] of codes.entries()) {
    const known = coordinateSystem(`EPSG:${code}`);
    const [longitude, latitude] = places.get(code)! as [number, number];
    const want = transformation(geographicOf(known), known).apply(longitude, latitude);
    for (const [k, form] of forms.entries()) {
      const text = texts[i * forms.length + k]!.join("").trim();
      // Without its own code at the end the first edition must be read word by word.
      const bare = text.replace(/,AUTHORITY\["EPSG","\d+"\]\]$/, "]");
      for (const version of form === "WKT2:2019" ? [text] : [text, bare]) {
        const given = coordinateSystem(version);
        if (given.name === "WKT") ++wordByWord;
        const got = transformation(geographicOf(given), given).apply(longitude, latitude);
        // PROJ prints false origins in feet to three decimals: 0.5e-3 ft.
        const because = `EPSG:${code} as ${form}: rounding of the text`;
        absoluteClose(got[0], want[0], 1e-3, because);
        absoluteClose(got[1], want[1], 1e-3, because);
      }
    }
  }
  expect(wordByWord).toBeGreaterThanOrEqual(2 * codes.length);
});

test("a shift given in numbers agrees with cs2cs", () => {
  const from = "+proj=utm +zone=32 +ellps=intl +towgs84=-87,-98,-121";
  const seven =
    "+proj=tmerc +lat_0=49 +lon_0=-2 +k=0.9996012717 +x_0=400000 +y_0=-100000 +ellps=airy +towgs84=446.448,-125.157,542.06,0.15,0.247,0.842,-20.489";
  const wgs84 = "+proj=longlat +datum=WGS84";
  const jobs: [string, string, number, number][] = [
    [from, wgs84, 612345, 5411111],
    [wgs84, from, 10.5, 48.8],
    [seven, wgs84, 412345, 311111],
    [wgs84, seven, -1.5, 52],
    [from, seven, 112345, 5811111],
  ];
  const answers = runEach(
    jobs.map(([a, b, x, y]) => ({command: ["cs2cs", "-f", "%.10f", a, "+to", b], lines: [`${x} ${y}`]})),
  );
  for (const [i, [a, b, x, y]] of jobs.entries()) {
    const got = transformation(coordinateSystem(a), coordinateSystem(b)).apply(x, y);
    const want = numbers(answers[i]![0]!);
    const both = a !== wgs84 && b !== wgs84;
    const tolerance = b === wgs84 ? 1e-8 : both ? 5e-3 : 1e-3;
    // Between two shifts PROJ carries the height of tens of metres that the first one makes, proj4 drops it:
    // 50 m × 100 m of shift / 6,400 km.
    const because = `${a} to ${b}: ${both ? "the height between the two shifts" : "1 mm, measured 1e-10 m"}`;
    absoluteClose(got[0], want[0]!, tolerance, because);
    absoluteClose(got[1], want[1]!, tolerance, because);
  }
});
