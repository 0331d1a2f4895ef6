/** GeoJSON files on the command line: supports, strips and transects, and what is wrong with them. */
import {createHash} from "node:crypto";
import {readFileSync} from "node:fs";
import {dirname, join} from "node:path";
import {describe, expect, test} from "vitest";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {transformation} from "../../lib/geometry/transformation.ts";
import {parsedCsv} from "../harness/text-sink.ts";
import {contents, fileWith, gridBytes, run, temporaryFolder} from "./harness.ts";

const UTM = "EPSG:32755";
const degrees = transformation(coordinateSystem(UTM), coordinateSystem("EPSG:4326"));
/** The grid of the harness has its first pixel at (500000, 7000000). */
const at = (x: number, y: number) => degrees.apply(500_000 + x, 7_000_000 + y);
const box = (x0: number, y0: number, x1: number, y1: number) => [
  at(x0, y0),
  at(x1, y0),
  at(x1, y1),
  at(x0, y1),
  at(x0, y0),
];
const feature = (geometry: unknown, name?: string) => ({
  type: "Feature",
  properties: name === undefined ? {} : {name},
  geometry,
});
const polygon = (ring: unknown, name?: string) => feature({type: "Polygon", coordinates: [ring]}, name);
const mapFile = (name: string, ...features: unknown[]) =>
  fileWith(name, JSON.stringify({type: "FeatureCollection", features}));

/** Lines L1 and L2 towards east, 40 m apart, over a strip of mass at 200 to 260 m. */
function lineText(): string {
  const rows = ["line,x,y,clearance,gravity"];
  for (const [name, y] of [
    ["L1", 0],
    ["L2", 40],
  ] as const)
    for (let i = 0; i < 50; ++i) {
      const angle = Math.atan2(10 * i - 200, 30) - Math.atan2(10 * i - 260, 30);
      rows.push(`${name},${500_000 + 10 * i},${7_000_000 + y},30,${((0.6 * angle) / Math.PI).toFixed(5)}`);
    }
  return `${rows.join("\n")}\n`;
}
const GIVEN = ["--observable", "gravity", "--noise", "0.02", "--bound", "rms:1", "--crs", UTM];
const table = (out: string, name: string) => parsedCsv(readFileSync(join(out, name), "utf8"));

describe("polygons on the command line", () => {
  test("cut supports and strips, carry names through, and are digested; a line that meets none is skipped", async () => {
    const support = mapFile("zones.geojson", polygon(box(100, -20, 400, 20), "west"));
    const strips = mapFile(
      "strips.json",
      polygon(box(200, -20, 260, 20), "=dyke"),
      polygon(box(600, 900, 700, 950), "far"),
    );
    const out = join(temporaryFolder(), "out");
    const result = await run([
      "continue",
      fileWith("lines.csv", lineText()),
      ...GIVEN,
      "--support",
      support,
      "--strips",
      strips,
      "--out",
      out,
    ]);
    expect({status: result.status, err: result.status === 0 ? "" : result.err}).toEqual({status: 0, err: ""});
    const [strip, ...others] = table(out, "strips.csv");
    expect(others).toEqual([]);
    // A cell never starts a formula.
    expect(strip).toMatchObject({line: "L1", strip: "'=dyke"});
    expect(Number(strip!["from_m"])).toBeCloseTo(200, 2);
    expect(Number(strip!["to_m"])).toBeCloseTo(260, 2);
    const [one, two] = table(out, "lines.csv");
    expect(one!["status"]).toMatch(/^(done|doubtful)$/);
    expect(two).toMatchObject({line: "L2", status: "skipped", modes: ""});
    expect(two!["reason"]).toMatch(/meets no polygon of --support/);
    const record = JSON.parse(readFileSync(join(out, "record.json"), "utf8"));
    const sha256 = createHash("sha256").update(readFileSync(support)).digest("hex");
    expect(record.inputs.map(({file}: {file: string}) => file)).toEqual(["lines.csv", "zones.geojson", "strips.json"]);
    expect(record.inputs[1].sha256).toBe(sha256);
    expect(record.settings.model.support).toEqual([{area: 'zones.geojson, feature 1 ("west")'}]);
    expect(record.outcomes).toMatchObject({skipped: 1, failed: 0});
    expect(readFileSync(join(out, "report.html"), "utf8")).toContain("zones.geojson, feature 1");
  });

  test("stand in a job file, from its folder", async () => {
    const strips = mapFile("strips.geojson", polygon(box(200, -20, 260, 60), "dyke"));
    const folder = dirname(strips);
    fileWith("lines.csv", lineText(), folder);
    const keys = [
      'survey = "lines.csv"',
      'observable = "gravity"',
      "noise = 0.02",
      `crs = "${UTM}"`,
      'strips = "strips.geojson"',
      'support = ["0:500", "strips.geojson"]',
    ];
    const job = fileWith("survey.toml", keys.join("\n"), folder);
    const out = join(temporaryFolder(), "out");
    expect((await run(["continue", "--job", job, "--bound", "rms:1", "--out", out, "--quiet"])).status).toBe(0);
    expect(table(out, "strips.csv").map(({line, strip}) => `${line} ${strip}`)).toEqual(["L1 dyke", "L2 dyke"]);
    expect((await run(["continue", "--job", job, "--explain"])).out).toMatch(/strips +file, row 5/);
  });

  const ring = box(100, -20, 400, 20);
  const bow = [ring[0], ring[2], ring[1], ring[3], ring[0]];
  const one = (geometry: unknown) => mapFile("a.geojson", geometry);
  test.each<[string, () => readonly string[], string, RegExp]>([
    [
      "a polygon that crosses itself",
      () => ["--support", mapFile("a.geojson", polygon(ring), polygon(bow, "bow"))],
      "polygon/crosses-itself",
      // The diagonals of the box meet at 250 m east and 0 m north: 147.00252° E, 27.12247° S.
      /^a\.geojson, feature 2 \("bow"\) crosses itself near \(147\.0025\d+, -27\.1224\d+\)/,
    ],
    [
      "swapped coordinates",
      () => ["--support", one(polygon(ring.map(([x, y]) => [y, x])))],
      "geojson/latitude-range",
      /feature 1, position 1 .*swapped/,
    ],
    [
      "a strip without a name",
      () => ["--strips", one(polygon(ring))],
      "strip/no-name",
      /feature 1 has no property "name"/,
    ],
    [
      "two strips of one name",
      () => ["--strips", mapFile("a.geojson", polygon(ring, "s"), polygon(ring, "s"))],
      "option/two-strips",
      /feature 2 \("s"\) bears the name.*MultiPolygon/,
    ],
    [
      "a strip named as one of chainage",
      () => ["--strip", "s=0:9", "--strips", one(polygon(ring, "s"))],
      "option/two-strips",
      /bears the name/,
    ],
    [
      "a line for a support",
      () => ["--support", one(feature({type: "LineString", coordinates: ring}))],
      "polygon/none",
      /is a line; a polygon was needed/,
    ],
    ["a file that is not there", () => ["--support", "/nowhere/a.geojson"], "host/not-found", /nowhere/],
    ["a map of another kind", () => ["--support", "zones.shp"], "option/not-a-map-file", /ends in \.geojson or \.json/],
    ["strips of another ending", () => ["--strips", "zones.csv"], "option/not-a-map-file", /ends in \.geojson/],
    [
      "transects across a table",
      () => ["--profiles", one(polygon(ring))],
      "survey/not-a-grid",
      /--profiles a\.geojson/,
    ],
    ["another way of sampling", () => ["--sampling", "nearest"], "option/unknown-word", /bilinear or cubic/],
    ["half a row", () => ["--every", "1.5"], "option/out-of-range", /whole number/],
  ])("%s: status 2, and nothing is left", async (_, args, code, words) => {
    const out = join(temporaryFolder(), "out");
    const survey = fileWith("lines.csv", lineText());
    const result = await run(["continue", survey, ...GIVEN, ...args(), "--out", out, "--json"]);
    const error = JSON.parse(result.err);
    expect({status: result.status, code: error.code}).toEqual({status: 2, code});
    expect(error.message).toMatch(words);
    expect(contents(out)).toEqual([]);
  });

  test("x, y of no known system: --crs is asked for", async () => {
    const out = join(temporaryFolder(), "out");
    const given = GIVEN.slice(0, -2);
    const result = await run([
      "continue",
      fileWith("lines.csv", lineText()),
      ...given,
      "--support",
      one(polygon(ring)),
      "--out",
      out,
    ]);
    expect(result.status).toBe(2);
    expect(result.err.replaceAll(/\s+/g, " ")).toMatch(
      /system of x, y of line L1 is not known. Give it with --crs EPSG:n/,
    );
    expect(contents(out)).toEqual([]);
  });
});

describe("lines out of a grid", () => {
  const grid = ["--observable", "field-vertical", "--clearance", "60", "--noise", "1", "--bound", "rms:100"];

  test("along transects have tables like lines that were flown", async () => {
    // The grid is 24 × 5 pixels of 50 × 25 m; the second transect lies off it.
    const transect = (name: string, y: number) =>
      feature({type: "LineString", coordinates: [at(60, y), at(1140, y)]}, name);
    const file = mapFile("transects.geojson", transect("across", -50), transect("off", 500));
    const out = join(temporaryFolder(), "out");
    const result = await run([
      "continue",
      fileWith("grid.tif", gridBytes()),
      ...grid,
      "--profiles",
      file,
      "--sampling",
      "cubic",
      "--out",
      out,
    ]);
    expect(result.status).toBe(0);
    expect(contents(out)).toContain("source.csv");
    expect(table(out, "lines.csv").map(({line, status}) => [line, status === "skipped"])).toEqual([
      ["across", false],
      ["off", true],
    ]);
    const levels = table(out, "levels.csv");
    expect(levels.length).toBe(Number(table(out, "lines.csv")[0]!["stations"]));
    // Read every 25 m, the smaller side of a pixel.
    expect(Number(levels[5]!["chainage_m"]) - Number(levels[4]!["chainage_m"])).toBeCloseTo(25, 6);
    const record = JSON.parse(readFileSync(join(out, "record.json"), "utf8"));
    expect(record.settings.acquisition).toMatchObject({profiles: "transects.geojson", sampling: "cubic"});
    expect(record.inputs.map(({file: name}: {file: string}) => name)).toEqual(["grid.tif", "transects.geojson"]);
  });

  test("every second row", async () => {
    const out = join(temporaryFolder(), "out");
    const result = await run(["continue", fileWith("grid.tif", gridBytes()), ...grid, "--every", "2", "--out", out]);
    expect(result.status).toBe(0);
    expect(table(out, "lines.csv").map(({line}) => line)).toEqual(["row-1", "row-3", "row-5"]);
  });

  test("can be looked at", async () => {
    const file = mapFile(
      "t.geojson",
      feature({type: "LineString", coordinates: [at(60, -50), at(1140, -80)]}, "slant"),
    );
    const result = await run([
      "inspect",
      fileWith("grid.tif", gridBytes()),
      "--profiles",
      file,
      "--observable",
      "field-vertical",
    ]);
    expect(result.status).toBe(0);
    expect(result.out).toMatch(/slant/);
  });
});
