/**
 * The solver of intervals by what they promise; where means of f are known exactly, for what is left of f, with what the
 * means say added. Readings and questions in such a continuum are orthogonal to the means, and so is what is left.
 */
import type {Continuum} from "../operators/continuum.ts";
import {besideMeans, knownNormSquared, knownPart, knownProduct, knownReadings} from "../operators/known-means.ts";
import {projectOutInPlace, type RegionalBasis} from "../operators/regional.ts";
import type {IntervalKind} from "./interval-kind.ts";
import {type IntervalSolver, type IntervalTerms, intervalSolver} from "./intervals.ts";
import {type BandSolver, simultaneousSolver} from "./simultaneous.ts";

/** Of a simultaneous band with its tally. */
export type LineIntervals = IntervalSolver & Partial<Pick<BandSolver, "tally">>;

interface Kind {
  readonly solver: (...given: Parameters<typeof intervalSolver>) => LineIntervals;
  /** Bound on what is left, from the bound on f and the norm that the means use up. */
  boundLeft(bound: number, used: number): number;
}

const KINDS: Readonly<Record<IntervalKind, Kind>> = {
  // Fixed before any reading is seen, so that a tolerance that goes to nothing leads here.
  single: {solver: intervalSolver, boundLeft: (bound) => bound},
  // All f that agree with what is known; not a number where none does.
  simultaneous: {solver: simultaneousSolver, boundLeft: (bound, used) => Math.sqrt(bound * bound - used * used)},
};

/**
 * @param data Q d/σ in the order of `continuum`
 * @param values of the known means of the continuum, SI, in their order
 */
export function solverByKind(
  kind: IntervalKind,
  continuum: Continuum,
  basis: RegionalBasis,
  data: Float64Array,
  terms: IntervalTerms,
  values = new Float64Array(),
): LineIntervals {
  const {solver, boundLeft} = KINDS[kind];
  if (continuum.known === undefined) return solver(continuum, basis, data, terms);
  const {bound, loosest = 1} = terms;
  const explained = projectOutInPlace(knownReadings(continuum, values), basis);
  const used = Math.sqrt(knownNormSquared(continuum, values));
  // The means may need the whole of the bound, to rounding.
  const left = Math.max(boundLeft(bound, used) || 0, LEAST_LEFT * bound);
  const loosenedFor = (loosened: number): number => boundLeft(loosened * bound, used) / left;
  const rest = solver(
    continuum,
    basis,
    data.map((value, i) => value - explained[i]),
    {...terms, bound: left, loosest: Math.max(loosenedFor(loosest) || 1, 1)},
  );
  return {
    ...rest,
    interval(functional, loosened = 1) {
      const {value, halfWidth} = rest.interval(besideMeans(functional, continuum), loosenedFor(loosened));
      return {value: value + knownPart(continuum, functional, values), halfWidth};
    },
    resolvingPower: (point, multiplier) =>
      rest.resolvingPower(point, multiplier) + knownProduct(continuum, point, point),
  };
}

const LEAST_LEFT = 1e-6;
