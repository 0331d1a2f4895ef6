import {readFileSync} from "node:fs";
import {expect, test} from "vitest";
import {InputError} from "../../lib/errors.ts";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {geographicOf} from "../../lib/geometry/crs-definition.ts";
import {DATUMS, GEOGRAPHIC, PROJECTED} from "../../lib/geometry/epsg-table.ts";
import {transformation} from "../../lib/geometry/transformation.ts";
import {absoluteClose} from "../harness/assert-close.ts";

/** The code of the error that `work` throws; fails on anything but an InputError. */
function refusal(work: () => unknown): {code: string; message: string} {
  try {
    work();
  } catch (error) {
    if (error instanceof InputError) return {code: error.code, message: error.message};
    throw error;
  }
  throw new Error("nothing was refused");
}

test("systems of every kind land where PROJ puts them", () => {
  // test/reference/epsg-table.py: PROJ through libproj, projection only.
  const rows = readFileSync(new URL("../reference/epsg-check.csv", import.meta.url), "utf8")
    .split("\n")
    .filter((line) => /^\d/.test(line))
    .map((line) => line.split(",").map(Number));
  expect(rows.length).toBeGreaterThan(500);
  for (const [code, longitude, latitude, x, y] of rows as [number, number, number, number, number][]) {
    const system = coordinateSystem(`EPSG:${code}`);
    const geographic = geographicOf(system);
    const unit = system.metresPerUnit!;
    const there = transformation(geographic, system).apply(longitude, latitude);
    absoluteClose(there[0] * unit, x * unit, 1e-3, `EPSG:${code} x: the table was kept to 1 mm`);
    absoluteClose(there[1] * unit, y * unit, 1e-3, `EPSG:${code} y: the table was kept to 1 mm`);
    const back = transformation(system, geographic).apply(x, y);
    absoluteClose(back[1], latitude, 1e-8, `EPSG:${code} latitude: 1 mm`);
    // 1 mm of longitude at the latitude; the area centres of polar systems come no nearer than 89°.
    const east = Math.cos((latitude * Math.PI) / 180);
    absoluteClose(((back[0] - longitude + 540) % 360) * east, 180 * east, 1e-8, `EPSG:${code} longitude: 1 mm`);
  }
});

test("a code gives kind, unit and datum", () => {
  const utm = coordinateSystem("EPSG:32633");
  expect(utm).toMatchObject({name: "EPSG:32633", title: "WGS 84 / UTM zone 33N", kind: "projected", metresPerUnit: 1});
  expect(utm.datum).toMatchObject({id: "EPSG:6326", nearWgs84: true, primeMeridian: 0});
  const california = coordinateSystem(" epsg:2227 ");
  expect(california.metresPerUnit).toBe(1200 / 3937); // US survey foot, by definition
  const degrees = coordinateSystem("EPSG:4326");
  expect(degrees.kind).toBe("geographic");
  expect("metresPerUnit" in degrees).toBe(false);
  expect(coordinateSystem("EPSG:27700").datum.nearWgs84).toBe(false);
  expect(coordinateSystem("EPSG:27572").datum.primeMeridian).toBeCloseTo(2.33722917, 8); // Paris, EPSG:8903
});

test("the systems that surveys mostly use are all there", () => {
  const zones = (first: number, last: number): number[] => Array.from({length: last - first + 1}, (_, i) => first + i);
  const wanted = [
    ...zones(32601, 32660),
    ...zones(32701, 32760),
    ...zones(25828, 25837),
    ...zones(26901, 26923),
    ...zones(28348, 28358),
    ...zones(7846, 7859),
    ...zones(31978, 31985),
    ...zones(2443, 2461),
    ...zones(6669, 6687),
    ...zones(31466, 31469),
    ...zones(2046, 2055),
    ...[4326, 4258, 4269, 4283, 7844, 4167, 4674, 6668, 4612, 4148],
    ...[3035, 2193, 27700, 28992, 2056, 21781, 3067, 3006, 2180, 2154, 2157, 29903, 5514, 31370, 3413, 3031, 7755],
  ];
  for (const code of wanted) expect(coordinateSystem(`EPSG:${code}`).name).toBe(`EPSG:${code}`);
});

test("every row of the tables can be read", () => {
  const rows = (table: string): string[][] =>
    table
      .trim()
      .split("\n")
      .map((line) => line.split("|"));
  const datums = new Set(rows(DATUMS).map(([code]) => code));
  const geographic = new Set(rows(GEOGRAPHIC).map(([code]) => code));
  for (const [code, , a, rf] of rows(DATUMS)) {
    expect(Number(a), `datum ${code}`).toBeGreaterThan(6.3e6);
    expect(Number(rf) === 0 || Number(rf) > 290, `datum ${code}`).toBe(true);
  }
  for (const [code, , datum] of rows(GEOGRAPHIC)) expect(datums.has(datum!), `geographic ${code}`).toBe(true);
  expect(rows(PROJECTED).length).toBeGreaterThan(5000);
  for (const row of rows(PROJECTED)) {
    expect(row).toHaveLength(4);
    expect(geographic.has(row[2]!), `projected ${row[0]}`).toBe(true);
    expect(row[3]).not.toMatch(/datum|ellps|towgs84|nadgrids/);
  }
});

test("what is no usable system is refused with advice", () => {
  expect(refusal(() => coordinateSystem("EPSG:999999"))).toMatchObject({
    code: "crs/unknown-code",
    message: expect.stringContaining("PROJ string"),
  });
  expect(refusal(() => coordinateSystem("EPSG:4978")).code).toBe("crs/unknown-code"); // geocentric
  expect(refusal(() => coordinateSystem("EPSG:4979")).code).toBe("crs/unknown-code"); // three-dimensional
  expect(refusal(() => coordinateSystem("EPSG:7405")).code).toBe("crs/unknown-code"); // compound
  expect(refusal(() => coordinateSystem("EPSG:5513"))).toMatchObject({
    code: "crs/unsupported-code",
    message: expect.stringContaining("left-handed"),
  });
  expect(refusal(() => coordinateSystem("EPSG:4807")).code).toBe("crs/not-degrees");
  expect(refusal(() => coordinateSystem("32633"))).toMatchObject({
    code: "crs/unknown-name",
    message: expect.stringContaining("EPSG:32633"),
  });
  expect(refusal(() => coordinateSystem("")).code).toBe("crs/unknown-name");
  expect(refusal(() => coordinateSystem("UTM 33")).code).toBe("crs/unknown-name");
});

test("a PROJ string means what the EPSG code means", () => {
  const pairs: [string, string][] = [
    ["+proj=utm +zone=33 +datum=WGS84 +units=m +no_defs +type=crs", "EPSG:32633"],
    [
      "+proj=lcc +lat_0=36.5 +lon_0=-120.5 +lat_1=38.4333333333333 +lat_2=37.0666666666667 +x_0=2000000.0001016 +y_0=500000.0001016 +datum=NAD83 +units=us-ft",
      "EPSG:2227",
    ],
    ["+proj=tmerc +lat_0=49 +lon_0=-2 +k=0.9996012717 +x_0=400000 +y_0=-100000 +ellps=airy", "EPSG:27700"],
    ["+proj=utm +zone=32 +ellps=WGS72", "EPSG:32232"],
    ["+proj=aea +lat_0=45 +lon_0=-126 +lat_1=50 +lat_2=58.5 +x_0=1000000 +ellps=GRS80", "EPSG:3005"],
  ];
  for (const [text, name] of pairs) {
    const [given, known] = [coordinateSystem(text), coordinateSystem(name)];
    expect(given.metresPerUnit).toBe(known.metresPerUnit);
    const [x, y] = transformation(geographicOf(known), known).apply(...middleOf(name));
    const [gotX, gotY] = transformation(geographicOf(given), given).apply(...middleOf(name));
    absoluteClose(gotX, x, 1e-6, "the same numbers; an ellipsoid printed to 10 digits moves a point by less");
    absoluteClose(gotY, y, 1e-6, "the same numbers; an ellipsoid printed to 10 digits moves a point by less");
  }
});

const middleOf = (name: string): [number, number] =>
  (({"EPSG:2227": [-121, 37.5], "EPSG:27700": [-2, 54], "EPSG:32232": [9, 48], "EPSG:3005": [-125, 54]})[name] as
    | [number, number]
    | undefined) ?? [15.5, 50];

test("a PROJ string that proj4 would misread is refused", () => {
  const bad = [
    "+zone=33 +datum=WGS84",
    "+proj=utm +zone=33", // no ellipsoid: PROJ and proj4 differ in what they take
    "+proj=utm +zone=61 +datum=WGS84",
    "+proj=utm +datum=WGS84",
    "+proj=utm +zone=33 +ellps=nosuch",
    "+proj=utm +zone=33 +datum=potsdam",
    "+proj=utm +zone=33 +datum=WGS84 +towgs84=1,2,3",
    "+proj=utm +zone=33 +ellps=intl +towgs84=1,2",
    "+proj=utm +zone=33 +ellps=intl +nadgrids=x.gsb",
    "+proj=utm +zone=33 +zone=34 +datum=WGS84",
    "+proj=tmerc +lat0=3 +datum=WGS84",
    "+proj=tmerc +lon_0=12d30'E +datum=WGS84",
    "+proj=tmerc +lon_0= +datum=WGS84",
    "+proj=tmerc +units=furlong +datum=WGS84",
    "+proj=tmerc +a=6378137 +datum=WGS84",
    "+proj=tmerc +a=6378137",
    "+proj=tmerc +a=6378 +rf=298",
    "+proj=tmerc +axis=neu +datum=WGS84",
    "+proj=pipeline +step +proj=utm",
    "+proj=geocent +datum=WGS84",
    "+proj=nosuch +datum=WGS84",
    "+init=epsg:32633",
  ];
  for (const text of bad) expect(refusal(() => coordinateSystem(text)).code, text).toBe("crs/bad-proj-string");
});

test("WKT with an EPSG code at its root is that system", () => {
  const first = `PROJCS["WGS 84 / UTM zone 33N",GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563,AUTHORITY["EPSG","7030"]],AUTHORITY["EPSG","6326"]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433],AUTHORITY["EPSG","4326"]],PROJECTION["Transverse_Mercator"],PARAMETER["central_meridian",15],UNIT["metre",1],AUTHORITY["EPSG","32633"]]`;
  expect(coordinateSystem(first)).toEqual(coordinateSystem("EPSG:32633"));
  const second = `GEOGCRS["WGS 84",DATUM["World Geodetic System 1984",ELLIPSOID["WGS 84",6378137,298.257223563]],CS[ellipsoidal,2],AXIS["lat",north],AXIS["lon",east],ANGLEUNIT["degree",0.0174532925199433],ID["EPSG",4326]]`;
  expect(coordinateSystem(second)).toEqual(coordinateSystem("EPSG:4326"));
});

test("older WKT without a code is read word by word", () => {
  const text = `PROJCS["Zone 3",GEOGCS["GCS_A",DATUM["D_A",SPHEROID["GRS_1980",6378137.0,298.257222101]],PRIMEM["Greenwich",0.0],UNIT["Degree",0.0174532925199433]],PROJECTION["Lambert_Conformal_Conic"],PARAMETER["False_Easting",6561666.666666666],PARAMETER["False_Northing",1640416.666666667],PARAMETER["Central_Meridian",-120.5],PARAMETER["Standard_Parallel_1",37.06666666666667],PARAMETER["Standard_Parallel_2",38.43333333333333],PARAMETER["Latitude_Of_Origin",36.5],UNIT["Foot_US",0.3048006096012192]]`;
  const given = coordinateSystem(text);
  expect(given).toMatchObject({kind: "projected", title: "Zone 3", name: "WKT"});
  expect(given.datum.name).toBe("D_A");
  const known = coordinateSystem("EPSG:2227");
  const [x, y] = transformation(geographicOf(known), known).apply(-121, 37.5);
  const [gotX, gotY] = transformation(geographicOf(given), given).apply(-121, 37.5);
  // False easting of EPSG:2227 is 2000000.0001016 m in EPSG's rounding of feet: 0.0003 ft.
  absoluteClose(gotX, x, 1e-3, "the two give the false origin to 0.3 mm");
  absoluteClose(gotY, y, 1e-3, "the two give the false origin to 0.3 mm");
});

test("WKT that cannot be relied on is refused", () => {
  const geographic = `GEOGCS["g",DATUM["d",SPHEROID["s",6378137,298.257]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]]`;
  const projected = (body: string): string => `PROJCS["p",${geographic},${body}]`;
  const bad = [
    `PROJCS["p",${geographic}`,
    `${geographic}]`,
    `COMPD_CS["c",${geographic}]`,
    `GEOCCS["c",DATUM["d",SPHEROID["s",6378137,298.257]]]`,
    projected(`PROJECTION["Krovak"],UNIT["metre",1]`),
    projected(`PROJECTION["Transverse_Mercator"]`),
    projected(`PROJECTION["Transverse_Mercator"],PARAMETER["azimuth",1],UNIT["metre",1]`),
    projected(`PROJECTION["Transverse_Mercator"],UNIT["metre",1],AXIS["x",SOUTH],AXIS["y",WEST]`),
    projected(`PROJECTION["Transverse_Mercator"],UNIT["metre",1],EXTENSION["PROJ4","+proj=merc"]`),
    `GEOGCS["g",DATUM["d",SPHEROID["s",6378137,298.257]],UNIT["grad",0.0157]]`,
    `GEOGCS["g",DATUM["d"],UNIT["degree",0.0174532925199433]]`,
    `GEOGCRS["g",DATUM["d",ELLIPSOID["s",6378137,298.257]],CS[ellipsoidal,2]]`,
    `${"A[".repeat(50)}1${"]".repeat(50)}`,
  ];
  for (const text of bad) expect(refusal(() => coordinateSystem(text)).code, text).toBe("crs/bad-wkt");
});
