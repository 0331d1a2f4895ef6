/** How often an interval holds the truth: draws of noise on readings of a truth made in the continuum. */
import {seededRandom} from "../../lib/numeric/random.ts";
import {binomialLimits} from "./binomial-limits.ts";
import {BOUND, type CoverageSetUp, type Kind, SUPPORT, sensorsOf} from "./coverage-kinds.ts";
import {fineNodes, inner, missedBy, readingsOfTruth} from "./fine-continuum.ts";
import {FAMILIES, type Family} from "./truths.ts";

export const DRAWS = 2000;
export const LEVELS = [0.8, 0.95, 0.99] as const;
/** Two-sided confidence of the limits: of 10,000 sound cells one falls below by chance, and one above. */
export const LIMITS = 0.9998;

export interface Cell {
  readonly kind: string;
  readonly setUp: string;
  readonly family: Family;
  readonly level: number;
  readonly share: number;
  readonly lower: number;
  readonly upper: number;
  /** Mean of the half-widths promised together, mGal (mGal·m for a total). */
  readonly halfWidth: number;
  /** Worst bias by the nodes, over the one that the answer states. */
  readonly biasRatio: number;
}

/** Every family for one kind on one set-up at one level. */
export function cellsOf(kind: Kind, setUp: CoverageSetUp, level: number, seed: number): readonly Cell[] {
  const answers = kind.answers(setUp, level);
  const sensors = sensorsOf(setUp);
  const breaks = answers.flatMap((answer) => answer.breaks);
  // A sixth of the lowest height that anything here looks from: five nodes on each integrate its kernels to 1e-8.
  const nodes = fineNodes(SUPPORT.from, SUPPORT.to, 0.5, breaks);
  const asked = answers.map(({q}) => nodes.at.map(q));
  const missed = missedBy(nodes, sensors, answers[0].weights, asked[0]);
  const question = {nodes, q: asked[0], missed, bound: BOUND};
  // A regional far larger than the noise, where the set-up allows for one.
  const regional = sensors.map(({reads, x}) => {
    if (setUp.degree < 1) return 0;
    return reads === "field" ? 40 - 0.07 * x : 3 + 0.002 * x;
  });
  return FAMILIES.map((family, place) => {
    const random = seededRandom(seed * 100 + place);
    const f = family.truth(question, random);
    const clean = readingsOfTruth(nodes, sensors, f).map((value, i) => value + regional[i]);
    const truth = asked.map((q) => inner(nodes, f, q));
    let inside = 0;
    const noisy = new Float64Array(clean.length);
    for (let draw = 0; draw < DRAWS; ++draw) {
      for (let i = 0; i < clean.length; ++i) noisy[i] = clean[i] + sensors[i].noise * random.normal();
      const all = answers.every(({weights, halfWidth}, k) => {
        let value = 0;
        for (let i = 0; i < noisy.length; ++i) value += weights[i] * noisy[i];
        return Math.abs(value - truth[k]) <= halfWidth;
      });
      if (all) ++inside;
    }
    return {
      kind: kind.name,
      setUp: setUp.name,
      family,
      level,
      share: inside / DRAWS,
      ...binomialLimits(inside, DRAWS, LIMITS),
      halfWidth: answers.reduce((sum, {halfWidth}) => sum + halfWidth / answers.length, 0),
      biasRatio: (BOUND * Math.sqrt(inner(nodes, missed, missed))) / answers[0].bias,
    };
  });
}

/** What is wrong with a cell, or undefined: too few covered, or, for the worst truth of one number, too many. */
export function faultOf({family, level, lower, upper}: Cell): string | undefined {
  if (family.place !== "outside" && upper < level) return "covers too seldom";
  if (family.place === "worst" && lower > level) return "covers too often: longer than the promise needs";
  return undefined;
}
