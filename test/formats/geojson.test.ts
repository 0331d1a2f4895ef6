import {describe, expect, test} from "vitest";
import {parseGeoJson, readGeoJson} from "../../lib/formats/geojson.ts";
import {failure, memorySource} from "./memory.ts";

const RING = [
  [13, 54],
  [14, 54],
  [14, 55],
  [13, 54],
];
const polygon = (coordinates: unknown = [RING]) => ({type: "Polygon", coordinates});
const feature = (geometry: unknown, properties: unknown = {name: "dyke"}) => ({type: "Feature", properties, geometry});
const collection = (...features: unknown[]) => ({type: "FeatureCollection", features});
const parse = (value: unknown) => parseGeoJson(JSON.stringify(value), "zones.geojson");

describe("GeoJSON", () => {
  test("gives features with names, polygons and lines", () => {
    const hole = RING.map(([x, y]) => [x! / 2, y!, 99]);
    const {features} = parse(
      collection(
        feature(polygon([RING, hole])),
        feature({type: "MultiPolygon", coordinates: [[RING], [RING]]}, {name: 7}),
        feature({type: "LineString", coordinates: RING.slice(0, 2)}, null),
        feature({type: "MultiLineString", coordinates: [RING, RING]}, {name: "  "}),
      ),
    );
    expect(features.map(({number, name}) => [number, name])).toEqual([
      [1, "dyke"],
      [2, "7"],
      [3, undefined],
      [4, undefined],
    ]);
    expect(features.map(({polygons, lines}) => [polygons.map((rings) => rings.length), lines.length])).toEqual([
      [[2], 0],
      [[1, 1], 0],
      [[], 1],
      [[], 2],
    ]);
    // A third number is a height and is passed over.
    expect([...features[0]!.polygons[0]![1]!]).toEqual([6.5, 54, 7, 54, 7, 55, 6.5, 54]);
    expect(features[0]!.words).toBe('zones.geojson, feature 1 ("dyke")');
  });

  test("may be one feature or a bare geometry, with a byte-order mark", async () => {
    for (const root of [feature(polygon()), polygon()]) {
      const text = `\uFEFF${JSON.stringify(root)}`;
      expect((await readGeoJson(memorySource(text, "a.json"))).features).toHaveLength(1);
    }
  });

  test("may name WGS 84 as it did before RFC 7946", () => {
    for (const name of ["urn:ogc:def:crs:OGC:1.3:CRS84", "urn:ogc:def:crs:EPSG::4326", "EPSG:4326", "OGC:CRS84"])
      expect(parse({...collection(feature(polygon())), crs: {type: "name", properties: {name}}}).features).toHaveLength(
        1,
      );
    expect(parse({...collection(feature(polygon())), crs: null}).features).toHaveLength(1);
  });

  const point = {type: "Point", coordinates: [1, 2]};
  const at = (...position: unknown[]) => feature(polygon([[position, ...RING.slice(1)]]));
  test.each<[string, unknown, string, RegExp]>([
    [
      "another system",
      {...collection(feature(polygon())), crs: {type: "name", properties: {name: "EPSG:25833"}}},
      "geojson/foreign-crs",
      /in EPSG:25833;.*ogr2ogr -t_srs EPSG:4326/,
    ],
    ["a system in a link", {...polygon(), crs: {type: "link", properties: {href: "x"}}}, "geojson/foreign-crs", /link/],
    [
      "swapped coordinates",
      collection(feature(polygon()), at(54, 113)),
      "geojson/latitude-range",
      /feature 2 \("dyke"\), position 1 is \(54, 113\).*swapped/,
    ],
    ["metres", at(412388, 5987567), "geojson/longitude-range", /looks like metres.*ogr2ogr/],
    ["text for a number", at("13", 54), "geojson/position", /feature 1 \("dyke"\), position 1 is \["13",54\]/],
    ["one number", at(13), "geojson/position", /position 1/],
    ["positions that are none", feature(polygon([[1, 2]])), "geojson/position", /list of coordinates/],
    ["a polygon without rings", feature(polygon([])), "geojson/no-geometry", /feature 1/],
    ["a point", collection(feature(point)), "geojson/geometry-kind", /"Point"; Polygon, MultiPolygon/],
    ["no geometry", collection(feature(null)), "geojson/no-geometry", /feature 1 \("dyke"\) has no geometry/],
    ["no feature", collection(), "geojson/no-feature", /no feature/],
    ["a list", [1], "geojson/not-geojson", /feature 1 is \[1\]/],
    ["features that are none", {type: "FeatureCollection", features: 3}, "geojson/not-geojson", /"features" are 3/],
    ["an empty object", {}, "geojson/not-geojson", /no "type"/],
  ])("refuses %s", async (_, value, code, words) => {
    const found = await failure(() => parse(value));
    expect(found.code).toBe(code);
    expect(found.message).toMatch(words);
  });

  test("refuses what is not JSON, with its row, and what is not UTF-8", async () => {
    const broken = await failure(() => parseGeoJson('{\n"type": "Feature",,\n}', "a.json"));
    expect(broken).toMatchObject({code: "geojson/not-json", row: 2});
    const latin = memorySource(Uint8Array.of(0x22, 0xe9, 0x22), "a.json");
    expect((await failure(() => readGeoJson(latin))).code).toBe("geojson/encoding");
    expect((await failure(() => readGeoJson(memorySource("", "a.json")))).code).toBe("geojson/not-json");
  });

  test("is bounded in bytes and in positions", async () => {
    const large = {name: "a.json", size: 1e9, read: () => Promise.reject(new Error("was read"))};
    expect((await failure(() => readGeoJson(large))).code).toBe("geojson/too-large");
    const many = Array.from({length: 200_001}, () => [0, 0]);
    expect((await failure(() => parse({type: "LineString", coordinates: many}))).code).toBe(
      "geojson/too-many-positions",
    );
  });
});
