/**
 * The solver for long lines of any heights, spacings and channels: nothing of the whole line is diagonalised.
 *
 *   Q (BBᵀ + α) c = d, c orthogonal to the regional;   f_α = Bᵀc,   r = α c the residual,
 *
 * by generalised minimal residuals, B by multipoles, preconditioned by the inverses on windows (`patches.ts`) freed of the
 * regional: P − PR (RᵀPR)⁻¹ RᵀP. A search asks for many multipliers. Of what was found at earlier ones the products are known,
 * Q (BBᵀ + α) c_j = d + (α − α_j) c_j, so that the best of their combinations is the start at the next.
 *
 * Misfit, norm and estimate are those of the normal equation (measured: to 1e-8 of the dense solver's). Degrees of
 * freedom and evidence count modes window by window, and are approximations: within 1 % of the dense ones (measured).
 */
import {NumericalError} from "../errors.ts";
import {luInPlace, luSolveInPlace} from "../numeric/lu.ts";
import {recent} from "../numeric/recent.ts";
import type {MultipoleOperator} from "../operators/multipole.ts";
import {pick, type Readings} from "../operators/readings.ts";
import {projectOutInPlace, type RegionalBasis} from "../operators/regional.ts";
import {whitenedOperator} from "../operators/whitened-operator.ts";
import {dot, minimalResidual} from "./minimal-residual.ts";
import type {Solver} from "./solver.ts";
import {windowsCover} from "./windows-cover.ts";

/** The preconditioned residual, which is nearly the error of c, is taken down to this share of c; more than the second is no solution. */
const ENOUGH = 1e-13;
const SOLVED = 1e-8;
const MOST_STEPS = 240;
/** A slope only steers searches. */
const ENOUGH_FOR_SLOPE = 1e-8;
/** The least multiplier tried, over the largest eigenvalue; and the factor to the next, where steps do not get there. */
const LEAST = 1e-7;
const LESS_BOLD = 10;
const STEPS_FOR_LEAST = 40;
/** Solutions kept, by multiplier. */
const KEPT = 5;
/** What a solution adds to the others must be more than rounding of it. */
const NEWS = 1e-9;
/** Steps for the largest eigenvalue: some parts in a thousand, and it only scales searches. */
const POWER_STEPS = 12;
/** Modes of windows below this share of the least multiplier weigh nothing. */
const WEIGHTLESS = 1e-2;

interface Solution {
  readonly alpha: number;
  readonly c: Float64Array;
  /** f √w on the panels. */
  readonly source: Float64Array;
}

interface Figures {
  readonly residualEnergy: number;
  readonly normSquared: number;
}

/**
 * @param readings those of the operator, in any order
 * @param data Q d/σ
 * @param basis of the regional, in whitened readings
 */
export function iterativeSolver(
  operator: MultipoleOperator,
  readings: Readings,
  data: Float64Array,
  basis: RegionalBasis,
): Solver {
  const n = readings.count;
  const {panels} = operator;
  const whitened = whitenedOperator(operator, readings);
  const onPanels = new Float64Array(panels.count);
  const gramInto = (target: Float64Array, vector: Float64Array): Float64Array =>
    projectOutInPlace(whitened.applyInto(target, whitened.adjointInto(onPanels, vector)), basis);
  const largest = largestOf(gramInto, n, basis);
  const order = Int32Array.from(readings.x.keys()).sort((i, j) => readings.x[i] - readings.x[j] || i - j);
  const cover = windowsCover(pick(readings, order), panels, WEIGHTLESS * LEAST * largest);
  const inverse = (vector: Float64Array, alpha: number): Float64Array => {
    const sorted = cover.inverse(
      Float64Array.from(order, (i) => vector[i]),
      alpha,
    );
    const placed = new Float64Array(n);
    for (let k = 0; k < n; ++k) placed[order[k]] = sorted[k];
    return placed;
  };

  /** The last few, since a slope and a count are asked for where a solution was. */
  const frees = recent<number, ReturnType<typeof withoutRegional>>(KEPT);
  const freeAt = (alpha: number) => frees(alpha, () => withoutRegional((vector) => inverse(vector, alpha), basis));
  const solutions: Solution[] = [];
  const figures = new Map<number, Figures>();
  const slopes = new Map<number, number>();

  /** c for a right-hand side free of the regional. */
  const solve = (
    right: Float64Array,
    alpha: number,
    start: Float64Array | undefined,
    share: number,
    mostSteps = MOST_STEPS,
  ): Float64Array => {
    const free = freeAt(alpha);
    const apply = (vector: Float64Array): Float64Array => {
      const image = gramInto(new Float64Array(n), vector);
      for (let i = 0; i < n; ++i) image[i] += alpha * vector[i];
      return free.apply(image);
    };
    const wanted = free.apply(right);
    const scale = Math.sqrt(dot(wanted, wanted));
    const {solution, left} = minimalResidual(apply, wanted, {enough: share * scale, mostSteps}, start);
    // Written so that NaN fails.
    if (!(left <= SOLVED * scale)) throw tooSmall(alpha);
    return solution;
  };
  const solutionAt = (alpha: number, mostSteps = MOST_STEPS): Solution => {
    const known = solutions.find((each) => each.alpha === alpha);
    if (known !== undefined) return known;
    const c = solve(data, alpha, bestOf(solutions, data, alpha), ENOUGH, mostSteps);
    const source = whitened.adjointInto(new Float64Array(panels.count), c);
    const found = {alpha, c, source};
    solutions.push(found);
    if (solutions.length > KEPT) solutions.shift();
    figures.set(alpha, {residualEnergy: alpha * alpha * dot(c, c), normSquared: dot(source, source)});
    return found;
  };
  const figuresAt = (alpha: number): Figures => {
    if (!figures.has(alpha)) solutionAt(alpha);
    return figures.get(alpha)!;
  };
  /** ½ d‖f‖²/dα = −⟨f, Bᵀ M c⟩, M the inverse free of the regional. */
  const slopeAt = (alpha: number): number => {
    const known = slopes.get(alpha);
    if (known !== undefined) return known;
    const {c, source} = solutionAt(alpha);
    const again = solve(c, alpha, undefined, ENOUGH_FOR_SLOPE);
    const slope = -dot(source, whitened.adjointInto(onPanels, again));
    slopes.set(alpha, slope);
    return slope;
  };
  let least = LEAST * largest;
  for (; least < largest; least *= LESS_BOLD) {
    try {
      solutionAt(least, STEPS_FOR_LEAST);
      break;
    } catch (error) {
      if (!(error instanceof NumericalError)) throw error;
    }
  }
  const energy = dot(data, data);
  const freedom = n - basis.terms;

  const withNoise = (noise: number): Solver => {
    const shrink = 1 / (noise * noise);
    const served = (multiplier: number): number => Math.max(multiplier / shrink, least);
    const norm = (multiplier: number): number =>
      multiplier === Infinity ? 0 : Math.sqrt(figuresAt(served(multiplier)).normSquared);
    return {
      data: n,
      unknowns: panels.count,
      modes: undefined,
      largest: largest * shrink,
      least: least * shrink,
      norm,
      misfit: (multiplier) =>
        (multiplier === Infinity ? energy : figuresAt(served(multiplier)).residualEnergy) * shrink,
      normSlope: (multiplier) => slopeAt(served(multiplier)) / norm(multiplier) / shrink,
      degreesOfFreedom(multiplier) {
        if (multiplier === Infinity) return 0;
        const alpha = served(multiplier);
        const seen = cover.trace((lambda) => lambda / (lambda + alpha));
        return seen - basis.terms + alpha * freeAt(alpha).traceTaken;
      },
      evidence(multiplier) {
        const alpha = served(multiplier);
        const {residualEnergy, normSquared} = figuresAt(alpha);
        const quadratic = (residualEnergy + alpha * normSquared) * shrink;
        const logDeterminant =
          cover.trace((lambda) => Math.log1p(lambda / alpha)) +
          freeAt(alpha).logDeterminant +
          basis.terms * Math.log(alpha);
        return {
          against: Math.log(quadratic / freedom) + logDeterminant / freedom,
          noise: Math.sqrt(quadratic / freedom),
        };
      },
      estimate(multiplier) {
        if (multiplier === Infinity) return new Float64Array(panels.count);
        const {source} = solutionAt(served(multiplier));
        return source.map((value, j) => value / whitened.rootWidth[j]);
      },
      withNoise: (factor) => withNoise(noise * factor),
    };
  };
  return withNoise(1);
}

const tooSmall = (alpha: number): NumericalError =>
  new NumericalError(
    "iterative/multiplier-too-small",
    `The normal equation of the line is not solved at the multiplier ${alpha.toExponential(2)} after ${MOST_STEPS} steps. Take a larger one.`,
  );

/** λ₁ of QBBᵀQ by the power method, from a start that favours no wave. */
function largestOf(
  gramInto: (target: Float64Array, vector: Float64Array) => Float64Array,
  n: number,
  basis: RegionalBasis,
): number {
  // Golden rotation: spread evenly, never twice the same.
  const vector = projectOutInPlace(
    Float64Array.from({length: n}, (_, i) => ((i * 0.6180339887498949) % 1) - 0.5 + 1 / (1 + i)),
    basis,
  );
  const image = new Float64Array(n);
  let largest = 0;
  for (let step = 0; step < POWER_STEPS; ++step) {
    const size = Math.sqrt(dot(vector, vector));
    if (!(size > 0)) return 0;
    for (let i = 0; i < n; ++i) vector[i] /= size;
    gramInto(image, vector);
    largest = Math.sqrt(dot(image, image));
    vector.set(image);
  }
  return largest;
}

/**
 * P freed of the regional, and what it takes away: α tr of it, and ln det RᵀPR.
 * @param inverse P, nearly (BBᵀ + α)⁻¹; a new list
 */
function withoutRegional(inverse: (vector: Float64Array) => Float64Array, {terms, count, rows}: RegionalBasis) {
  const solved = Array.from({length: terms}, (_, t) => inverse(rows.subarray(t * count, (t + 1) * count)));
  const factor = new Float64Array(terms * terms);
  const squares = new Float64Array(terms * terms);
  for (let t = 0; t < terms; ++t)
    for (let u = 0; u < terms; ++u) {
      factor[t * terms + u] = dot(rows.subarray(t * count, (t + 1) * count), solved[u]);
      squares[t * terms + u] = dot(solved[t], solved[u]);
    }
  const pivots = luInPlace(factor, terms);
  const shares = new Float64Array(terms);
  let traceTaken = 0;
  let logDeterminant = 0;
  for (let u = 0; u < terms; ++u) {
    for (let t = 0; t < terms; ++t) shares[t] = squares[t * terms + u];
    traceTaken += luSolveInPlace(shares, factor, pivots)[u];
    logDeterminant += Math.log(Math.abs(factor[u * terms + u]));
  }
  return {
    traceTaken,
    logDeterminant,
    apply(vector: Float64Array): Float64Array {
      const result = inverse(vector);
      for (let t = 0; t < terms; ++t) shares[t] = dot(rows.subarray(t * count, (t + 1) * count), result);
      luSolveInPlace(shares, factor, pivots);
      for (let t = 0; t < terms; ++t) for (let i = 0; i < count; ++i) result[i] -= shares[t] * solved[t][i];
      return result;
    },
  };
}

/** The combination of known solutions nearest to the one at α, in the energy of its equation; undefined where there are none. */
function bestOf(solutions: readonly Solution[], data: Float64Array, alpha: number): Float64Array | undefined {
  const n = data.length;
  const found: {readonly vector: Float64Array; readonly image: Float64Array}[] = [];
  const start = new Float64Array(n);
  // The nearest first: it holds most.
  const near = [...solutions].sort((a, b) => Math.abs(Math.log(a.alpha / alpha)) - Math.abs(Math.log(b.alpha / alpha)));
  for (const {alpha: own, c} of near) {
    const vector = c.slice();
    const image = c.map((value, i) => data[i] + (alpha - own) * value);
    const before = dot(vector, image);
    for (const earlier of found) {
      const share = dot(earlier.vector, image);
      for (let i = 0; i < n; ++i) {
        vector[i] -= share * earlier.vector[i];
        image[i] -= share * earlier.image[i];
      }
    }
    const after = dot(vector, image);
    if (!(after > NEWS * before)) continue;
    const root = Math.sqrt(after);
    for (let i = 0; i < n; ++i) {
      vector[i] /= root;
      image[i] /= root;
    }
    found.push({vector, image});
    const share = dot(vector, data);
    for (let i = 0; i < n; ++i) start[i] += share * vector[i];
  }
  return found.length > 0 ? start : undefined;
}
