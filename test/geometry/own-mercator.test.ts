import {expect, test} from "vitest";
import {InputError} from "../../lib/errors.ts";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {WGS84} from "../../lib/geometry/ellipsoid.ts";
import {geodesic} from "../../lib/geometry/geodesic.ts";
import {ownMercator, ownObliqueMercator} from "../../lib/geometry/own-mercator.ts";
import {ownProjection} from "../../lib/geometry/own-projection.ts";
import {
  gridConvergence,
  largestScaleError,
  projectionScale,
  scaleErrorAt,
} from "../../lib/geometry/projection-scale.ts";
import {absoluteClose} from "../harness/assert-close.ts";

const wgs84 = coordinateSystem("EPSG:4326");

test("a short survey keeps its distances", () => {
  const longitudes = [12.3, 12.35, 12.32];
  const latitudes = [47.1, 47.12, 47.2];
  const {project, unproject} = ownMercator(longitudes, latitudes, wgs84);
  for (const [i, j] of [
    [0, 1],
    [1, 2],
    [2, 0],
  ] as const) {
    const [p, q] = [project(longitudes[i]!, latitudes[i]!), project(longitudes[j]!, latitudes[j]!)];
    const {distance} = geodesic(WGS84, longitudes[i]!, latitudes[i]!, longitudes[j]!, latitudes[j]!);
    absoluteClose(Math.hypot(q[0] - p[0], q[1] - p[1]) / distance, 1, 2e-7, "1 + d²/2R² with d below 4 km");
  }
  const [x, y] = project(12.31, 47.15);
  const [longitude, latitude] = unproject(x, y);
  absoluteClose(longitude, 12.31, 1e-11, "rounding");
  absoluteClose(latitude, 47.15, 1e-11, "rounding");
});

test("x runs east, y north, from the mean position", () => {
  for (const {project} of [
    ownMercator([20, 20.2], [-30, -30.2], wgs84),
    ownObliqueMercator([20, 20.2], [-30, -30.2], wgs84, 70),
  ]) {
    const [centreX, centreY] = project(20.1, -30.1);
    expect(Math.hypot(centreX, centreY)).toBeLessThan(20); // the centre is rounded to 1e-4°, 11 m
    const [eastX, eastY] = project(20.11, -30.1);
    expect(eastX - centreX).toBeGreaterThan(900);
    expect(Math.abs(eastY - centreY)).toBeLessThan(1);
    expect(project(20.1, -30.09)[1] - centreY).toBeGreaterThan(1000);
  }
});

test("a survey across the antimeridian is one survey", () => {
  const {project, system} = ownMercator([179.9, -179.9], [-17, -17], wgs84);
  expect(system.title).toContain("180°");
  const [west, east] = [project(179.9, -17), project(-179.9, -17)];
  const {distance} = geodesic(WGS84, 179.9, -17, -179.9, -17);
  absoluteClose(east[0] - west[0], distance, 1e-2, "two points 21 km apart on one parallel, bowed by millimetres");
});

test("the scale of a transverse Mercator grows as 1 + d²/2R²", () => {
  const {system} = ownMercator([0], [0], wgs84);
  absoluteClose(scaleErrorAt(system, 0, 0), 0, 1e-9, "central difference, see projection-scale.ts");
  const d = (6378137 * (3 * Math.PI)) / 180;
  // On the equator R² is M N there; the next term of the series is d⁴/24R⁴ = 3e-7.
  const r2 = 6378137 ** 2 * (1 - (2 - 1 / 298.257223563) / 298.257223563);
  absoluteClose(scaleErrorAt(system, 3, 0), (d * d) / (2 * r2), 2e-6, "next terms of the series, and e² in them");
});

test("a line of 1,333 km keeps its length in the oblique projection, not in the transverse one", () => {
  // Stations along the great circle (of the sphere) from 73°E 26°S, much like a long transit.
  const azimuth = 256;
  const [longitudes, latitudes]: [number[], number[]] = [[], []];
  for (let i = 0; i <= 60; ++i) {
    const δ = (i / 60) * (1333 / 6371);
    const [φ, θ] = [(-26 * Math.PI) / 180, (azimuth * Math.PI) / 180];
    const latitude = Math.asin(Math.sin(φ) * Math.cos(δ) + Math.cos(φ) * Math.sin(δ) * Math.cos(θ));
    const turn = Math.atan2(Math.sin(θ) * Math.sin(δ) * Math.cos(φ), Math.cos(δ) - Math.sin(φ) * Math.sin(latitude));
    longitudes.push(73 + (turn * 180) / Math.PI);
    latitudes.push((latitude * 180) / Math.PI);
  }
  const truth = geodesic(WGS84, longitudes[0]!, latitudes[0]!, longitudes[60]!, latitudes[60]!).distance;
  const length = (project: (longitude: number, latitude: number) => readonly [number, number]): number => {
    const [p, q] = [project(longitudes[0]!, latitudes[0]!), project(longitudes[60]!, latitudes[60]!)];
    return Math.hypot(q[0] - p[0], q[1] - p[1]);
  };
  const transverse = ownMercator(longitudes, latitudes, wgs84);
  expect(largestScaleError(transverse.system, longitudes, latitudes)).toBeGreaterThan(4e-3);
  expect(length(transverse.project) - truth).toBeGreaterThan(1500);
  // The direction at the middle, where the projection is centred.
  const middle = geodesic(WGS84, longitudes[30]!, latitudes[30]!, longitudes[60]!, latitudes[60]!).azimuth;
  const chosen = ownProjection(longitudes, latitudes, wgs84, middle);
  expect(chosen.projection.system.title).toContain("oblique");
  expect(chosen.scaleError).toBeLessThan(1e-6); // measured 2e-8: the scale along the line is one on the sphere, nearly so on the ellipsoid
  absoluteClose(length(chosen.projection.project) / truth, 1, 1e-7, "that scale; measured 1e-9");
});

test("a short survey gets the transverse projection, whatever its direction", () => {
  const {projection, scaleError} = ownProjection([12.3, 12.4], [47.1, 47.2], wgs84, 40);
  expect(projection.system.title).toBe("transverse Mercator centred on 12.35° E, 47.15° N");
  expect(scaleError).toBeLessThan(1e-6);
});

test("an oblique projection exactly east and west, or north and south, has no hole", () => {
  for (const latitude of [-60, -26, 0, 45])
    for (const azimuth of [0, 90, 180, 270, -90]) {
      const {project, unproject, system} = ownObliqueMercator([10], [latitude], wgs84, azimuth);
      for (const [longitude, there] of [
        [10, latitude],
        [10.001, latitude],
        [13, latitude + 1],
        [7, latitude - 2],
      ] as const) {
        const [back, backLatitude] = unproject(...project(longitude, there));
        absoluteClose(back, longitude, 1e-9, "0.1 mm, there and back");
        absoluteClose(backLatitude, there, 1e-9, "0.1 mm, there and back");
      }
      absoluteClose(scaleErrorAt(system, 10, latitude), 0, 1e-8, "one at the centre");
    }
});

test("both projections are conformal", () => {
  for (const system of [ownMercator([25], [60], wgs84).system, ownObliqueMercator([25], [60], wgs84, 120).system]) {
    const {largest, least} = projectionScale(system)(28, 58);
    absoluteClose(largest, least, 1e-9, "central difference, see projection-scale.ts");
  }
});

test("the convergence of a transverse Mercator is Δλ sin φ to first order", () => {
  const utm = coordinateSystem("EPSG:32633");
  const {convergence} = projectionScale(utm)(16, 50);
  // Exactly atan(tan Δλ sin φ) on the sphere; the ellipsoid changes 1e-5 of it.
  const sphere = (Math.atan(Math.tan(Math.PI / 180) * Math.sin((50 * Math.PI) / 180)) * 180) / Math.PI;
  absoluteClose(convergence, sphere, 1e-4, "the ellipsoid's part");
  absoluteClose(gridConvergence(utm, 500000, 5500000), 0, 1e-8, "on the central meridian");
  // Hartebeesthoek94 / Lo29: x west, y south, so grid "north" points south.
  absoluteClose(
    Math.abs(projectionScale(coordinateSystem("EPSG:2053"))(29, -25).convergence),
    180,
    1e-6,
    "turned round",
  );
});

test("web Mercator's scale shows", () => {
  expect(scaleErrorAt(coordinateSystem("EPSG:3857"), 10, 60)).toBeGreaterThan(0.9);
  expect(scaleErrorAt(coordinateSystem("EPSG:32633"), 15, 60)).toBeCloseTo(4e-4, 8);
  // State plane in feet: the unit is taken into account.
  expect(scaleErrorAt(coordinateSystem("EPSG:2227"), -121, 37.5)).toBeLessThan(1e-4);
});

test("positions without a centre are refused", () => {
  for (const [longitudes, latitudes] of [
    [[], []],
    [
      [0, 180],
      [0, 0],
    ],
  ] as const)
    expect(() => ownMercator(longitudes, latitudes, wgs84)).toThrow(InputError);
  expect(() => ownMercator([0], [Number.NaN], wgs84)).toThrow(InputError);
});
