/**
 * The World Magnetic Model against published test values. Those of WMM2025 belong to dates from 2025 on; rows of
 * WMM2020 (its distributed README) to dates before: the notes that came with the coefficients of 2025 still print the latter
 * as examples, so each is asked for on its own day here.
 */
import geomagnetism from "geomagnetism";
import {describe, expect, test} from "vitest";
import {geomagneticDirection} from "../../lib/geometry/geomagnetic-field.ts";
import {absoluteClose} from "../harness/assert-close.ts";

/** Day, latitude, longitude, height km, total intensity nT, inclination, declination. */
const PUBLISHED = [
  ["2025-01-01", 14, 143, 66, 35898.7, 12.82, -0.19],
  ["2025-01-01", 0, 21, 18, 32594.76, -26.06, 1.29],
  ["2025-01-01", -59, -8, 39, 28589.82, -58.55, -15.75],
  ["2026-07-02", 65, 85, 0, 61037.23, 81.5, 14.31],
  ["2020-01-01", 14, 143, 66, 35847.5, 13.08, 0.12],
  ["2020-01-01", 0, 21, 18, 32745.6, -26.46, 1.05],
  ["2020-07-02", -36, -137, 6, 41630.3, -52.21, 20.16],
  ["2020-07-02", 26, 81, 63, 45914.9, 40.84, 0.43],
] as const;

/** At the ellipsoid: from the coefficients of WMM2025 by spherical harmonics written elsewhere. */
const COMPUTED = [
  ["2025-01-01", 80, 0, 83.21, 1.28],
  ["2025-01-01", 0, 120, -14.93, -0.16],
  ["2025-01-01", -80, 240, -72, 68.78],
  ["2027-07-02", 80, 0, 83.24, 2.59],
] as const;

describe("the direction of the main field", () => {
  test.each(PUBLISHED)("on %s at %d°, %d°, %d km is the published one", (day, latitude, longitude, km, f, i, d) => {
    const there = geomagnetism.model(new Date(`${day}T00:00:00Z`)).point([latitude, longitude, km]);
    // Half a day of the middle of the year turns the field by less than 1e-3°.
    absoluteClose(there.incl, i, 0.007, "printed to a hundredth of a degree");
    absoluteClose(there.decl, d, 0.007, "printed to a hundredth of a degree");
    absoluteClose(there.f, f, 0.3, "the library's own digits, 0.15 nT; half a day of change, 0.1 nT");
    // Heights are left out in the program: a hundredth of a degree a kilometre at most.
    const {inclination, declination} = geomagneticDirection(day, longitude, latitude);
    absoluteClose(inclination, i, 0.007 + 0.01 * km, "as promised for a kilometre of height");
    absoluteClose(declination, d, 0.007 + 0.01 * km, "as promised for a kilometre of height");
  });

  test.each(COMPUTED)(
    "on %s at %d°, %d° on the ground is that of the coefficients",
    (day, latitude, longitude, i, d) => {
      const {inclination, declination} = geomagneticDirection(day, longitude, latitude);
      absoluteClose(inclination, i, 0.007, "given to a hundredth of a degree");
      absoluteClose(declination, d, 0.007, "given to a hundredth of a degree");
    },
  );

  test("takes the model of its own five years", () => {
    // A value of WMM2020 carried on to 2025 by its own change is 0.5° off at 80° N: no test of 2025.
    const before = geomagneticDirection("2024-06-01", 0, 80).declination;
    const after = geomagneticDirection("2025-06-01", 0, 80).declination;
    expect(after - before).toBeGreaterThan(0);
    expect(after - before).toBeLessThan(1);
  });

  test.each(["2014-12-16", "2029-11-13"])("is there on %s, an end of the models", (day) => {
    expect(geomagneticDirection(day, 10, 50).inclination).toBeGreaterThan(60);
  });

  test.each([
    ["1998-07-01", /outside the World Magnetic Models/],
    ["2014-12-15", /outside the World Magnetic Models/],
    ["2029-11-14", /--inclination and --declination/],
    ["2026-13-01", /not a date/],
    ["2026-02-30", /not a date/],
    ["2026-7-1", /YYYY-MM-DD/],
    ["1 July 2026", /not a date/],
    ["", /not a date/],
  ])("%s is refused", (day, words) => {
    expect(() => geomagneticDirection(day, 10, 50)).toThrowError(
      expect.objectContaining({code: "direction/date", exitStatus: 2, message: expect.stringMatching(words)}),
    );
  });
});
