import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {insidePolygon, polygonOf, selfCrossing} from "../../lib/geometry/polygon.ts";
import {failure} from "../formats/memory.ts";

const ring = (...positions: readonly (readonly [number, number])[]) => Float64Array.from(positions.flat());
const square = (from: number, to: number) => ring([from, from], [to, from], [to, to], [from, to], [from, from]);
const of = (...rings: Float64Array[]) => polygonOf(rings, "zones.geojson, feature 1", "zones.geojson");

describe("a polygon", () => {
  test("holds what its outer ring holds and no hole does", () => {
    const polygon = of(square(0, 10), square(4, 6));
    const inside = (x: number, y: number) => insidePolygon(polygon, x, y);
    expect([inside(1, 1), inside(5, 5), inside(5, 3), inside(11, 5), inside(-1, 5)]).toEqual([
      true,
      false,
      true,
      false,
      false,
    ]);
  });

  test("may touch itself at a position, turn either way, and have a hole that lies outside", () => {
    const touching = ring([0, 0], [4, 0], [2, 2], [4, 4], [0, 4], [2, 2], [0, 0]);
    expect(() => of(touching, square(20, 30))).not.toThrow();
    const turned = of(square(0, 10).reverse());
    expect(insidePolygon(turned, 5, 5)).toBe(true);
  });

  test.each<[string, Float64Array, string, RegExp]>([
    [
      "a bow tie",
      ring([0, 0], [2, 2], [2, 0], [0, 2], [0, 0]),
      "polygon/crosses-itself",
      /crosses itself near \(1\.0000000, 1\.0000000\).*position 1 .*position 3/,
    ],
    [
      "an open ring",
      ring([0, 0], [1, 0], [1, 1], [0, 1]),
      "polygon/unclosed",
      /begins at \(0, 0\) and ends at \(0, 1\)/,
    ],
    ["two corners", ring([0, 0], [1, 1], [0, 0]), "polygon/too-short", /3 positions/],
    ["the antimeridian", ring([179, 0], [-179, 0], [-179, 1], [179, 0]), "polygon/antimeridian", /MultiPolygon/],
  ])("is refused with %s", async (_, bad, code, words) => {
    const found = await failure(() => of(bad));
    expect(found.code).toBe(code);
    expect(found.message).toMatch(/^zones\.geojson, feature 1/);
    expect(found.message).toMatch(words);
    expect((await failure(() => of(square(0, 90), bad))).message).toMatch(/hole 1/);
  });

  test("a crossing is found exactly when some pair of edges crosses, in whichever order", () => {
    // Whole numbers: cross products are exact, so both searches decide the same question.
    const corner = fc.tuple(fc.integer({min: -20, max: 20}), fc.integer({min: -20, max: 20}));
    fc.assert(
      fc.property(fc.array(corner, {minLength: 3, maxLength: 9}), (corners) => {
        const closed = ring(...corners, corners[0]!);
        expect(selfCrossing(closed) !== undefined).toBe(anyPairCrosses(closed));
      }),
      {seed: 7, numRuns: 500},
    );
  });
});

function anyPairCrosses(r: Float64Array): boolean {
  const at = (i: number) => [r[2 * i]!, r[2 * i + 1]!] as const;
  const side = (a: readonly number[], b: readonly number[], p: readonly number[]) =>
    Math.sign((b[0]! - a[0]!) * (p[1]! - a[1]!) - (b[1]! - a[1]!) * (p[0]! - a[0]!));
  for (let i = 0; i + 1 < r.length / 2; ++i)
    for (let j = 0; j < i; ++j) {
      const [a, b, c, d] = [at(i), at(i + 1), at(j), at(j + 1)];
      if (side(a, b, c) * side(a, b, d) < 0 && side(c, d, a) * side(c, d, b) < 0) return true;
    }
  return false;
}
