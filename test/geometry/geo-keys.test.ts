import {expect, test} from "vitest";
import {crsFromGeoKeys} from "../../lib/geometry/geo-keys.ts";

test("a code in the keys is the system", () => {
  const found = crsFromGeoKeys({GTModelTypeGeoKey: 1, ProjectedCSTypeGeoKey: 25833, ProjLinearUnitsGeoKey: 9001});
  expect(found.system?.name).toBe("EPSG:25833");
  expect(found).toMatchObject({metresPerUnit: 1, notices: []});
  const degrees = crsFromGeoKeys({GTModelTypeGeoKey: 2, GeographicTypeGeoKey: 4326});
  expect(degrees.system?.kind).toBe("geographic");
  expect(degrees.metresPerUnit).toBeUndefined();
});

test("a described system leaves its unit and a doubt", () => {
  const found = crsFromGeoKeys({
    GTModelTypeGeoKey: 1,
    ProjectedCSTypeGeoKey: 32767,
    ProjLinearUnitsGeoKey: 9003,
    GTCitationGeoKey: "mine grid",
  });
  expect(found.system).toBeUndefined();
  expect(found.metresPerUnit).toBe(1200 / 3937);
  expect(found.notices[0]).toMatchObject({
    code: "crs/grid-system-unknown",
    weight: "doubt",
    message: expect.stringContaining("mine grid"),
  });
  expect(crsFromGeoKeys({ProjLinearUnitsGeoKey: 32767, ProjLinearUnitSizeGeoKey: 0.2}).metresPerUnit).toBe(0.2);
});

test("without a usable code or unit nothing is made up", () => {
  for (const keys of [
    {},
    {GTModelTypeGeoKey: 3, ProjLinearUnitsGeoKey: 9001},
    {GTModelTypeGeoKey: 2, GeographicTypeGeoKey: 32767},
    {GTModelTypeGeoKey: 1, ProjectedCSTypeGeoKey: 1},
    {ProjLinearUnitsGeoKey: 32767, ProjLinearUnitSizeGeoKey: -1},
  ]) {
    const found = crsFromGeoKeys(keys);
    expect(found.system).toBeUndefined();
    expect(found.metresPerUnit).toBeUndefined();
    expect(found.notices).toHaveLength(1);
  }
});

test("a unit that contradicts the code is a doubt", () => {
  const found = crsFromGeoKeys({GTModelTypeGeoKey: 1, ProjectedCSTypeGeoKey: 32633, ProjLinearUnitsGeoKey: 9002});
  expect(found.notices.map((notice) => notice.code)).toEqual(["crs/grid-unit-differs"]);
  expect(found.metresPerUnit).toBe(1);
});
