import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {coordinateSystem} from "../../lib/geometry/coordinate-system.ts";
import {areaOf, projectedPolygons} from "../../lib/geometry/map-area.ts";
import {insidePolygon, type Polygon} from "../../lib/geometry/polygon.ts";
import {partsInside, type Track} from "../../lib/geometry/track.ts";
import {transformation} from "../../lib/geometry/transformation.ts";

const ring = (...positions: readonly (readonly number[])[]) => Float64Array.from(positions.flat());
const box = (x0: number, y0: number, x1: number, y1: number) => ring([x0, y0], [x1, y0], [x1, y1], [x0, y1], [x0, y0]);
const solid = (outer: Float64Array, ...holes: Float64Array[]): Polygon => ({outer, holes});
const track = (knots: readonly (readonly [number, number, number])[], beyond: readonly [number, number]): Track => ({
  system: undefined,
  chainage: Float64Array.from(knots, ([at]) => at),
  x: Float64Array.from(knots, ([, x]) => x),
  y: Float64Array.from(knots, ([, , y]) => y),
  beyond,
});
/** Along x from 1000, chainage 0 to 400. */
const STRAIGHT = track(
  [
    [0, 1000, 50],
    [400, 1400, 50],
  ],
  [1, 0],
);

describe("the parts of a track inside polygons", () => {
  test("are what a box, a hole and two polygons leave", () => {
    const holed = solid(box(1100, 0, 1300, 100), box(1150, 20, 1200, 80));
    expect(partsInside(STRAIGHT, [holed])).toEqual([
      {from: 100, to: 150},
      {from: 200, to: 300},
    ]);
    const overlapping = [holed, solid(box(1140, 0, 1210, 100)), solid(box(1350, 0, 1360, 100))];
    expect(partsInside(STRAIGHT, overlapping)).toEqual([
      {from: 100, to: 300},
      {from: 350, to: 360},
    ]);
    expect(partsInside(STRAIGHT, [solid(box(1100, 60, 1300, 100))])).toEqual([]);
  });

  test("go on straight beyond the ends", () => {
    expect(partsInside(STRAIGHT, [solid(box(900, 0, 1100, 100))])).toEqual([{from: -100, to: 100}]);
    expect(partsInside(STRAIGHT, [solid(box(1350, 0, 9000, 100))])).toEqual([{from: 350, to: 8000}]);
    expect(partsInside(STRAIGHT, [solid(box(500, 0, 600, 100))])).toEqual([{from: -500, to: -400}]);
    expect(
      partsInside(
        track(
          [
            [0, 1000, 50],
            [400, 1400, 50],
          ],
          [0, 0],
        ),
        [solid(box(900, 0, 1100, 100))],
      ),
    ).toEqual([{from: 0, to: 100}]);
  });

  test("follow a bent course and chainage that runs at its own pace", () => {
    // Up along x, then along y; chainage counts twice the metres on the second leg.
    const bent = track(
      [
        [0, 0, 0],
        [100, 100, 0],
        [300, 100, 100],
      ],
      [0.6, 0.4],
    );
    expect(partsInside(bent, [solid(box(50, -10, 200, 40))])).toEqual([{from: 50, to: 180}]);
  });

  test("a corner touched adds nothing and a corner passed through cuts once", () => {
    expect(partsInside(STRAIGHT, [solid(ring([1100, 50], [1150, 90], [1050, 90], [1100, 50]))])).toEqual([]);
    const diamond = ring([1100, 50], [1150, 90], [1200, 50], [1150, 10], [1100, 50]);
    expect(partsInside(STRAIGHT, [solid(diamond)])).toEqual([{from: 100, to: 200}]);
  });

  test("agree with looking at every metre", () => {
    const angle = fc.double({min: 0.2, max: 1, noNaN: true});
    fc.assert(
      fc.property(
        fc.array(angle, {minLength: 5, maxLength: 12}),
        fc.double({min: -80, max: 80, noNaN: true}),
        (radii, y) => {
          // A star around (200, 0), crossed at height y.
          const corners = radii.map((r, i) => {
            const turn = (2 * Math.PI * i) / radii.length;
            return [200 + 150 * r * Math.cos(turn), 150 * r * Math.sin(turn)];
          });
          const star = solid(ring(...corners, corners[0]!));
          const parts = partsInside(
            track(
              [
                [0, 0, y],
                [400, 400, y],
              ],
              [1, 0],
            ),
            [star],
          );
          for (let x = 0.5; x < 400; ++x) {
            const nearEdge = parts.some(({from, to}) => Math.abs(from - x) < 2e-3 || Math.abs(to - x) < 2e-3);
            if (!nearEdge) expect(parts.some(({from, to}) => x > from && x < to)).toBe(insidePolygon(star, x, y));
          }
        },
      ),
      {seed: 11, numRuns: 200},
    );
  });
});

describe("polygons on the map", () => {
  const area = (outer: Float64Array) =>
    areaOf({number: 1, words: "a.json, feature 1", name: undefined, polygons: [[outer]], lines: []}, "a.json");
  const way = transformation(coordinateSystem("EPSG:4326"), coordinateSystem("EPSG:32633"));

  test("keep their edges straight in longitude and latitude", () => {
    // One degree along a parallel at 60°: in UTM it bulges by some 120 m from the chord.
    const [drawn] = projectedPolygons(area(ring([12, 60], [13, 60], [13, 61], [12, 60])), way);
    const {outer} = drawn!;
    for (let k = 0; k <= 10; ++k) {
      const [x, y] = way.apply(12 + k / 10, 60);
      let nearest = Infinity;
      for (let i = 2; i < outer.length; i += 2) {
        const [ax, ay, dx, dy] = [
          outer[i - 2]!,
          outer[i - 1]!,
          outer[i]! - outer[i - 2]!,
          outer[i + 1]! - outer[i - 1]!,
        ];
        const t = Math.min(1, Math.max(0, ((x - ax) * dx + (y - ay) * dy) / (dx * dx + dy * dy)));
        nearest = Math.min(nearest, Math.hypot(x - ax - t * dx, y - ay - t * dy));
      }
      // The tolerance of the drawing is 0.01 m.
      expect(nearest).toBeLessThan(0.0101);
    }
    const [westX, westY] = way.apply(12, 60);
    const [eastX, eastY] = way.apply(13, 60);
    const [middleX, middleY] = way.apply(12.5, 60);
    expect(Math.hypot(middleX - (westX + eastX) / 2, middleY - (westY + eastY) / 2)).toBeGreaterThan(100);
  });

  test("two halves cut at the antimeridian join to the millimetre", () => {
    const utm60 = coordinateSystem("EPSG:32660");
    const across = transformation(coordinateSystem("EPSG:4326"), utm60);
    const halves = [
      ring([179.99, 10], [180, 10], [180, 10.01], [179.99, 10.01], [179.99, 10]),
      ring([-180, 10], [-179.99, 10], [-179.99, 10.01], [-180, 10.01], [-180, 10]),
    ];
    const polygons = halves.flatMap((half) => projectedPolygons(area(half), across));
    const [x, y] = across.apply(179.98, 10.005);
    const parts = partsInside(
      track(
        [
          [0, x, y],
          [100, x + 100, y],
        ],
        [1, 0],
      ),
      polygons,
    );
    expect(parts).toHaveLength(1);
    // 0.02° of longitude at 10° N, on the ellipsoid 2,193 m; the scale of UTM there is within 0.1 %.
    expect(parts[0]!.to - parts[0]!.from).toBeGreaterThan(2180);
    expect(parts[0]!.to - parts[0]!.from).toBeLessThan(2205);
  });
});
