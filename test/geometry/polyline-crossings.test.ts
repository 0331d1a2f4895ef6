/** Crossings of polylines: known places, what is and is not a crossing, and every pair of segments tried by hand. */
import {describe, expect, test} from "vitest";
import {type Polyline, polylineCrossings} from "../../lib/geometry/polyline-crossings.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {absoluteClose} from "../harness/assert-close.ts";

const line = (...places: readonly (readonly [number, number])[]): Polyline => ({
  x: Float64Array.from(places, ([x]) => x),
  y: Float64Array.from(places, ([, y]) => y),
});

/** Straight, `steps` even segments. */
const straight = (from: readonly [number, number], to: readonly [number, number], steps: number): Polyline =>
  line(
    ...Array.from(
      {length: steps + 1},
      (_, k) => [from[0] + ((to[0] - from[0]) * k) / steps, from[1] + ((to[1] - from[1]) * k) / steps] as const,
    ),
  );

interface Place {
  readonly first: number;
  readonly second: number;
  readonly firstAt: number;
  readonly secondAt: number;
  readonly x: number;
  readonly y: number;
}

function places(polylines: readonly Polyline[]): readonly Place[] {
  const found = polylineCrossings(polylines);
  return Array.from({length: found.count}, (_, i) => ({
    first: found.first[i]!,
    second: found.second[i]!,
    firstAt: found.firstAt[i]!,
    secondAt: found.secondAt[i]!,
    x: found.x[i]!,
    y: found.y[i]!,
  }));
}

describe("known places", () => {
  test("a grid of lines, each across each", () => {
    // 100 segments each, more than one run; no crossing lies at a vertex.
    const lines = [0, 1, 2].map((k) => straight([10 * k + 5.3, 0], [10 * k + 5.3, 50], 100));
    const ties = [0, 1].map((k) => straight([0, 20 * k + 10.2], [40, 20 * k + 10.2], 90));
    const found = places([...lines, ...ties]);
    expect(found.map(({first, second}) => [first, second])).toEqual([
      [0, 3],
      [0, 4],
      [1, 3],
      [1, 4],
      [2, 3],
      [2, 4],
    ]);
    for (const {first, second, firstAt, secondAt, x, y} of found) {
      const because = "a few roundings of coordinates up to 50";
      absoluteClose(x, 10 * first + 5.3, 1e-12, because);
      absoluteClose(y, 20 * (second - 3) + 10.2, 1e-12, because);
      absoluteClose(firstAt, 2 * (20 * (second - 3) + 10.2), 1e-10, "the same, in segments of half a unit");
      absoluteClose(secondAt, (10 * first + 5.3) / (40 / 90), 1e-10, "the same, in segments of 4/9");
    }
  });

  test("a skew pair by its equation, far from the origin", () => {
    // y = x/3 and y = 4 − x meet at (3, 1).
    const [e, n] = [500_000, 5_900_000];
    const found = places([line([e, n], [e + 9, n + 3]), line([e, n + 4], [e + 4, n])]);
    expect(found).toHaveLength(1);
    absoluteClose(found[0]!.x, e + 3, 1e-8, "the last digit of 500,000 is 6e-11, the angle costs little");
    absoluteClose(found[0]!.y, n + 1, 1e-8, "the last digit of 5,900,000 is 9e-10");
    absoluteClose(found[0]!.firstAt, 1 / 3, 1e-8, "the same");
    absoluteClose(found[0]!.secondAt, 3 / 4, 1e-8, "the same");
  });

  test("a zig-zag meets a straight line once a leg", () => {
    const zigzag = line(...Array.from({length: 101}, (_, k) => [k, k % 2 === 0 ? -1 : 1] as const));
    const found = places([straight([0, 0], [100, 0], 7), zigzag]);
    expect(found).toHaveLength(100);
    found.forEach(({x}, k) => {
      absoluteClose(x, k + 0.5, 1e-9, "roundings of coordinates up to 100");
    });
  });
});

describe("at a vertex", () => {
  const across = line([-1, 0], [1, 0]);
  test.each([
    ["passed by one", line([0, -1], [0, 0], [0, 1]), across],
    ["passed by both", line([0, -1], [0, 0], [0, 1]), line([-1, 0], [0, 0], [1, 0])],
    ["touched from above", line([-1, 1], [0, 0], [1, 1]), across],
    ["touched from below", line([-1, -1], [0, 0], [1, -1]), across],
    ["two corners that touch", line([-1, -1], [0, 0], [1, -1]), line([-1, 1], [0, 0], [1, 1])],
    ["an end on the other line", line([0, 0], [0, 1]), across],
    ["a station given twice", line([0, -1], [0, 0], [0, 0], [0, 1]), across],
    [
      "a station given three times on both",
      line([0, -1], [0, 0], [0, 0], [0, 0], [0, 1]),
      line([-1, 0], [0, 0], [0, 0], [1, 0]),
    ],
  ])("%s: once", (_, a, b) => {
    const found = places([a, b]);
    expect(found).toHaveLength(1);
    expect([found[0]!.x, found[0]!.y]).toEqual([0, 0]);
    expect(places([b, a])).toHaveLength(1);
  });
});

describe("no crossing", () => {
  test.each([
    ["one polyline with itself", [line([0, 0], [2, 2], [2, 0], [0, 2])]],
    ["the same line twice", [straight([0, 0], [10, 3], 40), straight([0, 0], [10, 3], 40)]],
    ["the same line at other stations", [straight([0, 0], [64, 32], 64), straight([8, 4], [72, 36], 16)]],
    ["parallel lines", [straight([0, 0], [10, 0], 40), straight([0, 0.1], [10, 0.1], 40)]],
    ["one that stops short", [line([0, 1e-6], [0, 1]), line([-1, 0], [1, 0])]],
    ["points", [line([0, 0]), line([0, 0], [0, 0])]],
    ["nothing", []],
  ])("%s", (_, polylines) => {
    expect(places(polylines)).toEqual([]);
  });
});

/** Every segment against every other; general position, so that no vertex lies on a segment. */
function byHand(polylines: readonly Polyline[]): string[] {
  const found: string[] = [];
  const side = (p: Polyline, i: number, q: Polyline, k: number): number =>
    (p.x[i + 1]! - p.x[i]!) * (q.y[k]! - p.y[i]!) - (p.y[i + 1]! - p.y[i]!) * (q.x[k]! - p.x[i]!);
  polylines.forEach((a, p) => {
    polylines.slice(p + 1).forEach((b, q) => {
      for (let i = 0; i + 1 < a.x.length; ++i)
        for (let j = 0; j + 1 < b.x.length; ++j)
          if (side(a, i, b, j) * side(a, i, b, j + 1) < 0 && side(b, j, a, i) * side(b, j, a, i + 1) < 0)
            found.push(`${p} ${p + 1 + q} ${i} ${j}`);
    });
  });
  return found;
}

test("finds what trying every pair of segments finds, on random walks, curves and lines along each other", () => {
  const {uniform, normal} = seededRandom(31);
  let total = 0;
  for (let round = 0; round < 30; ++round) {
    const polylines = Array.from({length: 8}, (_, p): Polyline => {
      const count = 2 + Math.floor(150 * uniform());
      const [step, jitter] = [uniform(), p % 3 === 0 ? 0.5 : 0.02];
      let azimuth = 2 * Math.PI * uniform();
      // Two of three share an azimuth and run within a step of each other.
      if (p % 3 > 0) azimuth = 0.7;
      let [x, y] = [p % 3 > 0 ? p * 0.01 : 20 * normal(), p % 3 > 0 ? 0 : 20 * normal()];
      const places: [number, number][] = [];
      for (let k = 0; k < count; ++k) {
        places.push([x, y]);
        azimuth += p % 2 === 0 ? 0.05 * normal() : 0;
        x += step * Math.sin(azimuth) + jitter * normal();
        y += step * Math.cos(azimuth) + jitter * normal();
      }
      return line(...places);
    });
    const found = places(polylines).map(
      ({first, second, firstAt, secondAt}) => `${first} ${second} ${Math.floor(firstAt)} ${Math.floor(secondAt)}`,
    );
    const wanted = byHand(polylines);
    total += wanted.length;
    expect([...found].sort()).toEqual([...wanted].sort());
  }
  expect(total).toBeGreaterThan(1000);
});
