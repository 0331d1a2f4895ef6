/**
 * The normal equation of level lines in O(n log n) a multiplier: nothing is diagonalised.
 *
 * The inner products of evenly spaced readings at one height are those of an endless source zone, a symmetric Toeplitz
 * matrix T, less what the zone does not hold, which is smooth and of low rank: BBᵀ = T − VVᵀ, for any observable, any
 * apron and any gaps in the zone. With c = (BBᵀ + α)⁻¹(d − Rβ), Rᵀc = 0, R the regional:
 *
 *   f_α = Bᵀc,   r = α c the residual.
 *
 * Source and residual are refined together, as the solution of r + B f = d, Bᵀr = α f: what rounding leaves of f is then
 * about ε √(λ₁/α) of it, where f = Bᵀc alone would keep ε λ₁/α (Björck, BIT 7 (1967) 257, from memory).
 *
 * Derived for this project.
 */
import {NumericalError} from "../errors.ts";
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {largestEigenvalue} from "../numeric/largest-eigenvalue.ts";
import {lazily} from "../numeric/lazily.ts";
import {transformsFor} from "../numeric/toeplitz-inverse.ts";
import {type LowRank, lowRank, type ShiftedInverse, shiftedInverse} from "../numeric/toeplitz-less.ts";
import type {LevelCells} from "../operators/level-cells.ts";
import {projectOutInPlace, type RegionalBasis} from "../operators/regional.ts";

/** What is left of T − BBᵀ − VVᵀ on the diagonal when V is long enough, over the diagonal of T: rounding of the products. */
const LEFT_OVER = 4e-15;
/**
 * Corrections end when the next would be this share of the source, if it shrinks as the last did, or when they shrink no
 * more; then the next must be less than the third. How the first shrinks is not known yet, and it must be less itself.
 */
const ENOUGH = 1e-13;
const FIRST_ENOUGH = 1e-6;
const SOLVED = 1e-9;
const MOST_CORRECTIONS = 12;
/** Steps for the largest eigenvalue: a part in a thousand, and it only scales searches. */
const LANCZOS_STEPS = 24;

/** f √w on the cells, and r at the readings. */
export interface Pair {
  readonly source: Float64Array;
  readonly residual: Float64Array;
}

export interface LevelSystem {
  readonly cells: LevelCells;
  readonly basis: RegionalBasis;
  /** Largest eigenvalue of QBBᵀQ, Q what takes the regional out. */
  readonly largest: number;
  at(alpha: number): AtMultiplier;
}

export interface AtMultiplier {
  readonly alpha: number;
  /** Source and residual of each vector of readings, refined. */
  refined(vectors: readonly Float64Array[]): Pair[];
  /** The same as it comes: to some ε λ₁/α of it. */
  plain(vectors: readonly Float64Array[]): Pair[];
  degreesOfFreedom(): number;
  /** ln det(1 + BBᵀ/α) on what is orthogonal to the regional. */
  logDeterminant(): number;
  /** The same for a multiplier within `NEAR` of this one, whose inverse serves: corrections are some more. */
  near(alpha: number): AtMultiplier;
  /** Bytes that it holds. */
  readonly held: number;
}

/** How far, as a share of it, a multiplier may lie from one whose inverse is at hand. */
export const NEAR = 0.03;

/** @param basis of the regional, in whitened readings */
export function levelSystem(cells: LevelCells, basis: RegionalBasis): LevelSystem {
  const n = cells.readings;
  const diagonals = cells.endless(n);
  const missing = whatIsMissing(cells, diagonals);
  const freedom = n - basis.terms;
  const transforms = transformsFor(n);
  const inverseAt = (alpha: number): ShiftedInverse => shiftedInverse(diagonals, missing, alpha, transforms);
  /** @param serves the inverse at this multiplier or one near it. @param exact that at this one */
  const answers = (alpha: number, serves: ShiftedInverse, exact: () => ShiftedInverse): AtMultiplier => {
    const free = lazily(() => withoutRegional((rights) => refined(cells, alpha, rights, serves.rough), basis, alpha));
    const plain = lazily(() =>
      withoutRegional(
        (rights) =>
          exact()
            .rough(rights)
            .map((c) => pairOf(cells, alpha, c)),
        basis,
        alpha,
      ),
    );
    return {
      alpha,
      refined: (vectors) => free().apply(vectors),
      plain: (vectors) => plain().apply(vectors),
      degreesOfFreedom: () => freedom - alpha * (exact().trace - free().traceTaken),
      logDeterminant: () => exact().logDeterminant + free().logDeterminant - freedom * Math.log(alpha),
      near: (own) =>
        answers(
          own,
          serves,
          lazily(() => inverseAt(own)),
        ),
      held: serves.held + 32 * basis.terms * (n + cells.count),
    };
  };
  return {
    cells,
    basis,
    largest: largestOf(cells, basis),
    at(alpha) {
      const inverse = inverseAt(alpha);
      return answers(alpha, inverse, () => inverse);
    },
  };
}

const pairOf = (cells: LevelCells, alpha: number, c: Float64Array): Pair => ({
  residual: c.map((value) => alpha * value),
  source: cells.adjointInto(new Float64Array(cells.count), c),
});

/** λ₁ of QBBᵀQ, Q what takes the regional out. */
function largestOf(cells: LevelCells, basis: RegionalBasis): number {
  const onCells = new Float64Array(cells.count);
  const product = (vector: Float64Array): Float64Array =>
    projectOutInPlace(
      cells.applyInto(new Float64Array(cells.readings), cells.adjointInto(onCells, projectOutInPlace(vector, basis))),
      basis,
    );
  return largestEigenvalue(product, cells.readings, LANCZOS_STEPS);
}

/** V with T − BBᵀ = VVᵀ. */
export function whatIsMissing(cells: LevelCells, diagonals: Float64Array): LowRank {
  const n = cells.readings;
  const unit = new Float64Array(n);
  const onCells = new Float64Array(cells.count);
  const column = (target: Float64Array, j: number): Float64Array => {
    unit[j] = 1;
    cells.applyInto(target, cells.adjointInto(onCells, unit));
    unit[j] = 0;
    for (let i = 0; i < n; ++i) target[i] = diagonals[Math.abs(i - j)] - target[i];
    return target;
  };
  const diagonal = cells.rowEnergies.map((energy) => diagonals[0] - energy);
  return lowRank(diagonal, column, LEFT_OVER * diagonals[0]);
}

/**
 * Solutions of r + B f = d, Bᵀr = α f, each corrected by what is left of both.
 * @param once (BBᵀ + α)⁻¹, nearly
 * @throws {NumericalError} `level/multiplier-too-small` where corrections do not converge
 */
function refined(
  cells: LevelCells,
  alpha: number,
  rights: readonly Float64Array[],
  once: (rights: readonly Float64Array[]) => Float64Array[],
): Pair[] {
  const n = cells.readings;
  const pairs = once(rights).map((c) => pairOf(cells, alpha, c));
  const last = rights.map(() => 1);
  const next = rights.map(() => 1);
  const done = rights.map(() => false);
  const seen = new Float64Array(n);
  const onCells = new Float64Array(cells.count);
  const left = rights.map(() => new Float64Array(cells.count));
  for (let pass = 0; pass < MOST_CORRECTIONS; ++pass) {
    const open = pairs.flatMap((_, k) => (done[k] ? [] : [k]));
    if (open.length === 0) break;
    const missing = open.map((k) => {
      const {source, residual} = pairs[k];
      const right = new Float64Array(n);
      // The first sources are those of the residuals: nothing is left of the second equation.
      if (pass > 0) {
        const own = cells.adjointInto(left[k], residual);
        for (let j = 0; j < own.length; ++j) own[j] = alpha * source[j] - own[j];
        cells.applyInto(right, own);
      }
      cells.applyInto(seen, source);
      for (let i = 0; i < n; ++i) right[i] += alpha * (rights[k][i] - residual[i] - seen[i]);
      return right;
    });
    const changes = once(missing);
    open.forEach((k, at) => {
      const {source, residual} = pairs[k];
      cells.adjointInto(onCells, changes[at]);
      let change = 0;
      for (let j = 0; j < source.length; ++j) {
        const step = (onCells[j] - left[k][j]) / alpha;
        source[j] += step;
        change += step * step;
      }
      for (let i = 0; i < n; ++i) residual[i] += changes[at][i];
      const share = Math.sqrt(change / (dot(source, source) || 1));
      next[k] = share * (share / last[k]);
      done[k] = (!(next[k] > ENOUGH) && (pass > 0 || share < FIRST_ENOUGH)) || !(share < 0.5 * last[k]);
      last[k] = share;
    });
  }

  // Written so that NaN fails.
  if (!next.every((share) => share < SOLVED)) throw tooSmall(alpha);
  return pairs;
}

const tooSmall = (alpha: number): NumericalError =>
  new NumericalError(
    "level/multiplier-too-small",
    `The normal equation of the level line is not served at the multiplier ${alpha.toExponential(2)}: rounding leaves nothing. Take a larger one.`,
  );

/** What is α M v and BᵀM v for M = K⁻¹ − K⁻¹R (RᵀK⁻¹R)⁻¹ RᵀK⁻¹, K = BBᵀ + α. */
function withoutRegional(
  solve: (rights: readonly Float64Array[]) => Pair[],
  {terms, count, rows}: RegionalBasis,
  alpha: number,
) {
  const regional = Array.from({length: terms}, (_, t) => rows.subarray(t * count, (t + 1) * count));
  const solved = solve(regional);
  const size = new Float64Array(terms * terms);
  const squares = new Float64Array(terms * terms);
  for (let t = 0; t < terms; ++t)
    for (let u = 0; u < terms; ++u) {
      size[t * terms + u] = dot(regional[t], solved[u].residual) / alpha;
      squares[t * terms + u] = dot(solved[t].residual, solved[u].residual) / (alpha * alpha);
    }
  choleskyInPlace(size, terms);
  let traceTaken = 0;
  let logDeterminant = 0;
  const one = new Float64Array(terms);
  for (let u = 0; u < terms; ++u) {
    for (let t = 0; t < terms; ++t) one[t] = squares[t * terms + u];
    traceTaken += choleskySolveInto(one, size, one, terms)[u];
    logDeterminant += 2 * Math.log(size[u * terms + u]);
  }
  return {
    traceTaken,
    logDeterminant,
    apply(vectors: readonly Float64Array[]): Pair[] {
      const pairs = solve(vectors);
      for (const pair of pairs) {
        const shares = choleskySolveInto(
          new Float64Array(terms),
          size,
          Float64Array.from(regional, (row) => dot(row, pair.residual) / alpha),
          terms,
        );
        for (let t = 0; t < terms; ++t) {
          const {source, residual} = solved[t];
          for (let i = 0; i < count; ++i) pair.residual[i] -= shares[t] * residual[i];
          for (let j = 0; j < source.length; ++j) pair.source[j] -= shares[t] * source[j];
        }
      }
      return pairs;
    },
  };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i] * b[i];
  return sum;
}
