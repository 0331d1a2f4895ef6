/** The shortest interval blind to the regional, over a and the readers of the regional. */
import type {SharedPart} from "./far-stations.ts";
import {halfWidthOf} from "./half-width.ts";
import type {RegionalReader} from "./regional-reader.ts";

/** The regional asks for less than a factor e³ of the a that is best without it. */
const MOST_STEPS = 20;
const MOST_PLACES = 4;
/** A half-width within this factor of the least there can be is good enough; and a reader after the next must be worth so much. */
const NEAR_ENOUGH = 1.001;
const WORTH = 0.999;

/** An estimate at one a, with what it has in common with the regional and its readers. */
export interface Blinded {
  readonly variance: number;
  readonly left: number;
  /** γ = Rᵀc, one a term. */
  readonly gamma: Float64Array;
  /** cᵀW and cᵀGW. */
  on(reader: RegionalReader): {readonly taken: Float64Array; readonly crossed: Float64Array};
}

export interface Choice {
  readonly step: number;
  readonly place: number;
  readonly deviation: number;
  readonly bias: number;
  readonly halfWidth: number;
}

/** s and b of c − Wγ. */
export function freed(
  {variance, left, gamma, on}: Blinded,
  reader: RegionalReader,
  {near, beyond}: SharedPart,
  bound: number,
): {readonly deviation: number; readonly bias: number} {
  const terms = gamma.length;
  const {taken, crossed} = on(reader);
  let squares = variance;
  let rest = left;
  for (let t = 0; t < terms; ++t) {
    squares -= 2 * gamma[t] * taken[t];
    rest += 2 * gamma[t] * (near[t] - crossed[t]) + 2 * Math.abs(gamma[t]) * beyond[t];
    for (let u = 0; u < terms; ++u) {
      squares += gamma[t] * gamma[u] * reader.products[t * terms + u];
      rest += gamma[t] * gamma[u] * reader.gram[t * terms + u];
    }
  }
  return {deviation: Math.sqrt(Math.max(squares, 0)), bias: bound * Math.sqrt(Math.max(rest, 0))};
}

/**
 * From the a that is best without the regional, and the reader made for it, downhill: for each reader by steps in a.
 * The two are apart, for where the regional says most of a half-width it is the reader that matters, elsewhere a; and
 * with the one tied to the other the half-width jumps from reader to reader. A reader is a solution over the whole line,
 * and made for what is to be gained alone.
 *
 * @param own the reader made for the a of step 0
 * @param plain ‖c‖ and M‖q − Σ c_i p_i‖ at step 0: without the regional the half-width is the least there can be
 */
export function shortestFree(
  measured: (step: number, place: number) => {readonly deviation: number; readonly bias: number},
  own: number,
  plain: Pick<Choice, "deviation" | "bias">,
  confidence: number,
): Choice {
  const least = halfWidthOf(plain.deviation, plain.bias, confidence);
  const at = (step: number, place: number): Choice => {
    const {deviation, bias} = measured(step, place);
    return {step, place, deviation, bias, halfWidth: halfWidthOf(deviation, bias, confidence)};
  };
  const overSteps = (start: Choice): Choice => {
    let best = start;
    for (const way of [1, -1]) {
      for (let step = start.step + way; Math.abs(step) <= MOST_STEPS; step += way) {
        const next = at(step, start.place);
        if (!(next.halfWidth < best.halfWidth)) break;
        best = next;
      }
      if (best !== start) break;
    }
    return best;
  };
  const begun = at(0, own);
  if (begun.halfWidth <= NEAR_ENOUGH * least) return begun;
  let best = overSteps(begun);
  for (const way of [1, -1]) {
    const start = best;
    for (let place = own + way; Math.abs(place - own) <= MOST_PLACES; place += way) {
      if (best.halfWidth <= NEAR_ENOUGH * least) return best;
      const next = overSteps(at(best.step, place));
      const isWorthMore = next.halfWidth < WORTH * best.halfWidth;
      if (next.halfWidth < best.halfWidth) best = next;
      if (!isWorthMore) break;
    }
    if (best !== start) break;
  }
  return best;
}
