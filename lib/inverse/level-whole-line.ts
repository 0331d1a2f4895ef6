/** A level, even line as a whole: (G + a) c = v without windows, and without steps. */
import {recent} from "../numeric/recent.ts";
import type {Continuum} from "../operators/continuum.ts";
import {levelGram} from "../operators/level-gram.ts";
import type {WholeLine} from "./whole-line.ts";

/** Inverses kept, by a: the regional's reader and the means of one search ask for the same few. */
const KEPT = 12;

/** @returns undefined where the line is not level and even */
export function levelWholeLine(continuum: Continuum): WholeLine | undefined {
  const gram = levelGram(continuum);
  if (gram === undefined) return undefined;
  const {count} = continuum;
  const inverses = recent<number, ReturnType<typeof gram.shifted>>(KEPT);
  return {
    gram: (vector) => gram.timesInto(new Float64Array(count), vector),
    solve(a, vector) {
      const inverse = inverses(a, () => gram.shifted(a));
      const [solution] = inverse.solve([vector]);
      // V was cut short of what matters to a: corrected once, that is squared.
      const rest = gram.timesInto(new Float64Array(count), solution!);
      for (let i = 0; i < count; ++i) rest[i] = vector[i] - rest[i] - a * solution![i];
      const [correction] = inverse.solve([rest]);
      for (let i = 0; i < count; ++i) solution![i] += correction![i];
      return solution!;
    },
  };
}
