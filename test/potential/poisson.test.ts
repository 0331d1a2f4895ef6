import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {harmonicMeasure, poissonKernel, poissonRowInto} from "../../lib/potential/poisson.ts";
import {absoluteClose, assertClose} from "../harness/assert-close.ts";
import {numericTable} from "../harness/reference-table.ts";
import {metres} from "../harness/supports.ts";

const SEED = 20;
const edges = fc
  .tuple(metres(-500, 500), fc.array(metres(0.01, 60), {minLength: 1, maxLength: 12}))
  .map(([start, widths]) => {
    const list = [start];
    for (const width of widths) list.push(list.at(-1)! + width);
    return Float64Array.from(list);
  });

describe("harmonic measure of a panel", () => {
  test("agrees with 60-digit arctangents, thin to wide, above to far, low to high", () => {
    const rows = numericTable("harmonic-measure");
    expect(rows.length).toBeGreaterThan(100);
    const closeness = (scale: number) => ({factor: 8, scale, because: "error analysis in poisson.ts"});
    for (const {x, z, a, b, measure} of rows) {
      assertClose(harmonicMeasure(x, z, a, b), measure, closeness(measure));
      const [entry] = poissonRowInto(new Float64Array(1), 0, Float64Array.of(a, b), x, z);
      assertClose(entry, measure, closeness(measure));
    }
  });

  test("scaling every length by a power of two changes no bit", () => {
    fc.assert(
      fc.property(edges, metres(-800, 800), metres(0.01, 100), fc.constantFrom(0.125, 2, 1024), (e, x, z, scale) => {
        const row = () => new Float64Array(e.length - 1);
        const larger = e.map((t) => scale * t);
        expect(poissonRowInto(row(), 0, larger, scale * x, scale * z)).toEqual(poissonRowInto(row(), 0, e, x, z));
        expect(harmonicMeasure(scale * x, scale * z, larger[0], larger[1])).toBe(harmonicMeasure(x, z, e[0], e[1]));
      }),
      {seed: SEED},
    );
  });

  test("mirroring the line about zero changes no bit", () => {
    fc.assert(
      fc.property(metres(-900, 900), metres(0.01, 100), metres(-500, 500), metres(0.01, 300), (x, z, a, width) => {
        expect(harmonicMeasure(-x, z, -(a + width), -a)).toBe(harmonicMeasure(x, z, a, a + width));
      }),
      {seed: SEED},
    );
  });

  test("panels that touch add up, and everything is seen under half a turn", () => {
    fc.assert(
      fc.property(edges, metres(-800, 800), metres(0.01, 100), (e, x, z) => {
        const row = poissonRowInto(new Float64Array(e.length - 1), 0, e, x, z);
        const sum = row.reduce((total, entry) => total + entry, 0);
        const because = "every entry within 8ε of itself";
        assertClose(sum, harmonicMeasure(x, z, e[0], e.at(-1)!), {factor: 16, scale: sum, because});
      }),
      {seed: SEED},
    );
    absoluteClose(harmonicMeasure(3, 2, -1e9, 1e9), 1, 2e-9, "2z/(π 1e9) is left out at the ends");
  });

  test("a narrow panel approaches the kernel times its width", () => {
    for (const [x, z] of [
      [0, 1],
      [3, 0.5],
      [-40, 20],
    ] as const) {
      const width = 1e-5 * z;
      const mean = harmonicMeasure(x, z, 7 - width / 2, 7 + width / 2) / width;
      // The second derivative of the kernel is at most 2/z² of it: width²/24 of that, and the rounding of 7 ± w/2.
      absoluteClose(mean / poissonKernel(7 - x, z), 1, 1e-9, "width²/(12 z²), and ε × 7/width");
    }
  });

  test("writes its own stretch of the target only", () => {
    const target = new Float64Array(5).fill(-1);
    poissonRowInto(target, 2, Float64Array.of(0, 1, 3), 0.5, 2);
    expect([target[0], target[1], target[4]]).toEqual([-1, -1, -1]);
    expect(target[2]).toBe(harmonicMeasure(0.5, 2, 0, 1));
    expect(target[3]).toBe(harmonicMeasure(0.5, 2, 1, 3));
  });

  test.each([0, -3, Number.NaN])("a station %d m above the boundary is refused by name", (z) => {
    expect(() => poissonRowInto(new Float64Array(1), 0, Float64Array.of(0, 1), 12.5, z)).toThrowError(
      expect.objectContaining({
        code: "potential/station-below-boundary",
        exitStatus: 3,
        message: expect.stringContaining("12.5"),
      }),
    );
  });
});
