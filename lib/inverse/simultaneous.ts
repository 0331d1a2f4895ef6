/**
 * A band for all numbers asked of f at once: with the stated probability it holds every one of them.
 *
 * Let U be the data modes of the readings, whitened and free of the regional: Uᵀd = UᵀPf + Uᵀn, where Uᵀn are as many
 * independent standard normal deviates as there are modes, K. On one event of the stated probability ‖Uᵀn‖ ≤ χ, with χ²
 * the quantile of chi-squared with K degrees of freedom. On that event f lies in
 *
 *   F = {‖UᵀPf − Uᵀd‖ ≤ χ, ‖f‖ ≤ M},    and q(f) between the least and the greatest value of q on F, for every q.
 *
 * Both are found without looking at f. For any α > 0, F lies in the ellipsoid ‖UᵀPf − Uᵀd‖² + α‖f‖² ≤ χ² + αM². With
 * f_α the minimiser of the left side, J(α) the minimum and H = P*UUᵀP + α, the left side is J(α) + ⟨f − f_α, H(f − f_α)⟩,
 * so that by Cauchy and Schwarz
 *
 *   |q(f) − q(f_α)| ≤ √(χ² + αM² − J(α)) √⟨q, H⁻¹q⟩.
 *
 * This holds for all α and q on the same event, so α may be chosen for each q, for its upper and its lower end apart, and
 * from the readings. The best α gives the end itself: Lagrange's dual of a linear function under two convex quadratic
 * constraints has no gap where F has an inner point (Slater), its multipliers are the weights of the two constraints,
 * and only their ratio α is not given at once. The end is quasi-convex in α, since the dual is convex in both multipliers,
 * and α → ∞ gives M‖q‖, the bound alone.
 *
 * F shrinks where the readings use up the bound, which no estimate fixed beforehand can follow: the band may be narrower
 * there than an interval for one number. It leans on the bound the more, and is empty soon after where that is too small.
 *
 * Readings enter through modes of λM² above `SEEN` alone. That costs the band little and makes χ small: K counts what
 * the readings can tell of f, not how many there are; and K is fixed before any reading is seen.
 *
 * On a long line every window has modes, and an event, of its own, and the chance to fail is shared equally among all
 * windows that there can be (Bonferroni). The regional is taken out of each window by its own stations alone.
 * A mean longer than a window lies between the means of the ends of its pieces, or within the bound alone.
 *
 * Source: Miller, SIAM J. Math. Anal. 1 (1970) 52, for the ellipsoid with α = (χ/M)² (from memory).
 */
import {ModelError} from "../errors.ts";
import {chiSquaredQuantile} from "../numeric/chi-squared.ts";
import {findRoot, minimise} from "../numeric/roots.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import {enough} from "./enough.ts";
import type {Interval, IntervalSolver, IntervalTerms} from "./intervals.ts";
import {type Window, windowsOf} from "./windows.ts";

/** Least λM² of a mode that is read. A heuristic, for width alone: see the header. */
const SEEN = 0.1;
/** Search range of α in units of χ²/M²; beyond it is the bound alone. */
const RANGE = [1e-6, 1e4] as const;
/** Of the bracket in ln α; the end is flat there, and wrong by the square of it. */
const TOLERANCE = 3e-5;
/** A band no narrower than this share of what the bound alone gives owes nothing to the readings. */
const NOTHING_ADDED = 0.999;

export interface BandSolver extends IntervalSolver {
  /** How many numbers were asked for so far, and for how many of them the readings added nothing to the bound. */
  tally(): {readonly asked: number; readonly boundAlone: number};
}

/** What a window says, over the modes that are read. */
interface Said {
  readonly window: Window;
  readonly modes: number;
  readonly chi2: number;
}

/**
 * @param basis regional at the stations in the order of `continuum`
 * @param data Q d/σ in that order
 */
export function simultaneousSolver(
  continuum: Continuum,
  basis: RegionalBasis,
  data: Float64Array,
  {bound, confidence, loosest = 1, layout = "by size"}: IntervalTerms,
): BandSolver {
  const windows = windowsOf(continuum, basis, data, bound, loosest, layout, "window");
  const tail = (1 - confidence) / windows.possible;
  const remembered = new Map<Window, Said>();
  let asked = 0;
  let boundAlone = 0;

  const saidBy = (functional: Functional): Said => {
    const window = windows.for(functional);
    const found = remembered.get(window);
    if (found !== undefined) return found;
    const {eigenvalues} = window.modes;
    let modes = 0;
    while (modes < eigenvalues.length && eigenvalues[modes] * bound * bound > SEEN) ++modes;
    const said = {window, modes, chi2: modes === 0 ? 0 : chiSquaredQuantile(tail, modes)};
    checkHolds(said, bound);
    remembered.set(window, said);
    return said;
  };

  const short = (functional: Functional, most: number): readonly [lower: number, upper: number] => {
    const alone = most * Math.sqrt(functional.normSquared);
    const said = saidBy(functional);
    const {window, modes, chi2} = said;
    if (modes === 0 || !(alone > 0)) return [-alone, alone];
    const eta = windows.seenBy(window, functional);
    const lambda = window.modes.eigenvalues;
    // q = Σ η_k/√λ_k v_k and what no mode sees; as sums of squares, so that nothing cancels in ⟨q, H⁻¹q⟩.
    let unseen = functional.normSquared;
    for (let k = 0; k < modes; ++k) unseen -= (eta[k] * eta[k]) / lambda[k];
    unseen = Math.max(unseen, 0);
    const end = (logA: number, sign: 1 | -1): number => {
      const a = Math.exp(logA);
      let centre = 0;
      let form = unseen / a;
      let least = 0;
      for (let k = 0; k < modes; ++k) {
        const over = 1 / (lambda[k] + a);
        centre += eta[k] * window.data[k] * over;
        form += (eta[k] * eta[k] * over) / lambda[k];
        least += window.data[k] * window.data[k] * over;
      }
      // Less than nothing left: no f is within this bound, and its square root says so as NaN.
      return sign * centre + Math.sqrt((chi2 + a * (most * most - least)) * form);
    };
    const unit = Math.log(chi2 / (most * most));
    const reach = (sign: 1 | -1): number =>
      Math.min(
        alone,
        minimise((logA) => end(logA, sign), unit + Math.log(RANGE[0]), unit + Math.log(RANGE[1]), TOLERANCE).value,
      );
    return [-reach(-1), reach(1)];
  };

  const long = (functional: Functional, most: number): readonly [lower: number, upper: number] => {
    let low = 0;
    let high = 0;
    for (const {mean, share} of functional.cut!(Math.ceil((functional.to - functional.from) / windows.piece))) {
      const [lower, upper] = short(mean, most);
      low += share * lower;
      high += share * upper;
    }
    const alone = most * Math.sqrt(functional.normSquared);
    return [Math.max(low, -alone), Math.min(high, alone)];
  };

  return {
    interval(functional, loosened = 1): Interval {
      const most = loosened * bound;
      const [lower, upper] =
        functional.cut !== undefined && functional.to - functional.from > windows.reach
          ? long(functional, most)
          : short(functional, most);
      const halfWidth = 0.5 * (upper - lower);
      ++asked;
      if (functional.normSquared > 0 && halfWidth >= NOTHING_ADDED * most * Math.sqrt(functional.normSquared))
        ++boundAlone;
      return {value: 0.5 * (lower + upper), halfWidth};
    },
    resolvingPower: windows.resolvingPower,
    kernelWeights: windows.kernelWeights,
    tally: () => ({asked, boundAlone}),
  };
}

/**
 * Whether there is any f in F: the ellipsoids of all α hold it, and none can hold what has less than nothing left.
 * @throws {ModelError} `bound/band-empty`, with the cheaper cure
 */
function checkHolds({window, modes, chi2}: Said, bound: number): void {
  if (modes === 0) return;
  const lambda = window.modes.eigenvalues;
  const energy = window.data.subarray(0, modes).map((d) => d * d);
  const sum = (term: (k: number) => number): number => energy.reduce((total, e, k) => total + e * term(k), 0);
  const left = (logA: number): number => {
    const a = Math.exp(logA);
    return chi2 + a * (bound * bound - sum((k) => 1 / (lambda[k] + a)));
  };
  // The minimiser's norm is M there, and M² Σ λ/(λ + a)² d² is not that small, nor that large, beyond these ends.
  const {value} = minimise(left, Math.log(1e-3 * lambda[modes - 1]), Math.log(1e3 * lambda[0]), TOLERANCE);
  if (value >= -1e-9 * chi2) return;
  const noise = Math.sqrt(1 - value / chi2);
  const misfit = (a: number): readonly [number, number] => [
    sum((k) => (a / (lambda[k] + a)) ** 2) - chi2,
    sum((k) => (2 * a * lambda[k]) / (lambda[k] + a) ** 3),
  ];
  const a = findRoot(misfit, 1e-9 * lambda[modes - 1], 1e9 * (lambda[0] + sum(() => 1)), {logarithmic: true});
  const stronger = Math.sqrt(sum((k) => lambda[k] / (lambda[k] + a) ** 2)) / bound;
  const reliefs = [
    {words: `the noise ${enough(noise)} times larger`, factor: noise},
    {words: `the bound ${enough(stronger)} times larger`, factor: stronger},
  ].sort((one, other) => one.factor - other.factor);
  throw new ModelError(
    "bound/band-empty",
    `No source within the bound is as near to the readings as the simultaneous band allows: χ² of ${modes} modes is ${(chi2 - value).toPrecision(4)} at least, and may be ${chi2.toPrecision(4)}. The bound or the noise is wrong. Cheapest cure: ${reliefs[0].words}; else ${reliefs[1].words}.`,
  );
}
