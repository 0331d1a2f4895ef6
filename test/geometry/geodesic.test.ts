import fc from "fast-check";
import {expect, test} from "vitest";
import {NumericalError} from "../../lib/errors.ts";
import {curvatureRadii, GRS80, WGS84} from "../../lib/geometry/ellipsoid.ts";
import {geodesic, geodesicDistance} from "../../lib/geometry/geodesic.ts";
import {absoluteClose} from "../harness/assert-close.ts";

const degrees = (d: number, m: number, s: number): number => Math.sign(d) * (Math.abs(d) + m / 60 + s / 3600);

test("Flinders Peak to Buninyong", () => {
  // GDA94 Technical Manual's sample line, from memory: 54 972.271 m at 306°52'05.37", confirmed with PROJ's geod.
  const {distance, azimuth} = geodesic(
    GRS80,
    degrees(144, 25, 29.5244),
    degrees(-37, 57, 3.7203),
    degrees(143, 55, 35.3839),
    degrees(-37, 39, 10.1561),
  );
  absoluteClose(distance, 54972.271, 5e-4, "printed to 1 mm");
  absoluteClose(azimuth, degrees(306, 52, 5.37), 0.005 / 3600, "printed to 0.01 arc-seconds");
});

test("along the equator it is an arc of a circle, along a short meridian the radius of curvature", () => {
  absoluteClose(
    geodesicDistance(WGS84, 10, 0, 40, 0),
    (6378137 * Math.PI) / 6,
    1e-7,
    "rounding of 3,340 km: 16 digits leave 1e-9",
  );
  const {meridian, primeVertical} = curvatureRadii(WGS84, 52);
  const step = 1e-3;
  absoluteClose(
    geodesicDistance(WGS84, 7, 52 - step, 7, 52 + step),
    (2 * step * meridian * Math.PI) / 180,
    1e-5,
    "222 m; Vincenty's series leave nanometres, the curvature's change less",
  );
  absoluteClose(
    geodesicDistance(WGS84, 7, 52, 7 + step, 52),
    ((step * Math.PI) / 180) * primeVertical * Math.cos((52 * Math.PI) / 180),
    1e-5,
    "68 m along the parallel, which bows by micrometres",
  );
});

test("a quarter of the meridian", () => {
  // 10 001 965.729 m for WGS 84 (from memory of its published derived constants).
  absoluteClose(geodesicDistance(WGS84, 0, 0, 0, 90), 10001965.729, 1e-3, "printed to 1 mm");
});

test("both ways are as long, across the antimeridian too", () => {
  fc.assert(
    fc.property(
      fc.double({min: -180, max: 180, noNaN: true}),
      fc.double({min: -80, max: 80, noNaN: true}),
      fc.double({min: -60, max: 60, noNaN: true}),
      fc.double({min: -5, max: 5, noNaN: true}),
      (longitude, latitude, east, north) => {
        const there = geodesicDistance(WGS84, longitude, latitude, longitude + east, latitude + north);
        const back = geodesicDistance(WGS84, longitude + east - 360, latitude + north, longitude, latitude);
        absoluteClose(back, there, 1e-5, "0.1 mm is what the series promise; both ways share most of it");
      },
    ),
    {seed: 21},
  );
});

test("one point twice is no distance; opposite points are refused", () => {
  expect(geodesic(WGS84, 3, 4, 3, 4)).toEqual({distance: 0, azimuth: 0});
  expect(geodesicDistance(WGS84, 3, 4, 363, 4)).toBe(0);
  expect(() => geodesic(WGS84, 0, 0.1, 179.9, 0)).toThrow(NumericalError);
  expect(() => geodesic(WGS84, 0, Number.NaN, 1, 0)).toThrow(NumericalError);
});
