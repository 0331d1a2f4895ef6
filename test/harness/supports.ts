/** Random supports for properties: one to four parts of 5–200 m, 1–150 m apart. */
import fc from "fast-check";
import type {Support} from "../../lib/geometry/interval.ts";

export const metres = (min: number, max: number) => fc.double({min, max, noNaN: true});

export const unions: fc.Arbitrary<Support> = fc
  .array(fc.tuple(metres(1, 150), metres(5, 200)), {minLength: 1, maxLength: 4})
  .map((pieces) => {
    let at = -200;
    return pieces.map(([gap, length]) => {
      const from = at + gap;
      at = from + length;
      return {from, to: at};
    });
  });
