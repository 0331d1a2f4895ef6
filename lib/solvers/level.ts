/** The solver for level lines: the questions of `solver.ts` to the system of `level-system.ts`. */
import {NumericalError} from "../errors.ts";
import {lazily} from "../numeric/lazily.ts";
import type {LevelCells} from "../operators/level-cells.ts";
import type {Panels} from "../operators/panels.ts";
import {asFewMultiplier, isFewMultiplier} from "./few-multipliers.ts";
import {type AtMultiplier, type LevelSystem, NEAR, type Pair} from "./level-system.ts";
import type {Solver} from "./solver.ts";

/** The least multiplier tried, over the largest eigenvalue; and the factor to the next, where rounding leaves no solution. */
const LEAST = 1e-10;
const LESS_BOLD = 10;
/** Of pooled lines, whose solutions are not refined. */
const LEAST_POOLED = 1e-7;
/** Sources kept, by multiplier: a search ends at one of its last few. */
const KEPT = 4;

/** What is known at one multiplier, of all lines together. */
interface Figures {
  readonly residualEnergy: number;
  readonly normSquared: number;
  /** Of the line with the largest. */
  readonly largestNormSquared: number;
  /** ½ d‖f‖²/dα. */
  slope(): number;
  degreesOfFreedom(): number;
  logDeterminant(): number;
}

/**
 * @param data Q d/σ
 * @param panels that the estimate is given on, as averages over them
 */
export function levelSolver(system: LevelSystem, data: Float64Array, panels: Panels): Solver {
  const {cells} = system;
  const n = cells.readings;
  const pairs = new Map<number, Pair>();
  /** A search ends in small steps, and the last inverse serves them. */
  let last: AtMultiplier | undefined;
  const answersAt = (alpha: number): AtMultiplier => {
    if (last?.alpha === alpha) return last;
    const few = isFewMultiplier(alpha, system.largest);
    if (!few && last !== undefined && Math.abs(alpha / last.alpha - 1) < NEAR) return last.near(alpha);
    last = system.at(alpha);
    return last;
  };
  const solveAt = (alpha: number): Figures => {
    const at = answersAt(alpha);
    const [pair] = at.refined([data]);
    pairs.delete(alpha);
    pairs.set(alpha, pair!);
    if (pairs.size > KEPT) pairs.delete(pairs.keys().next().value as number);
    return figuresOf([pair!], {
      // As dear as the rest, and asked for by few; nothing here may hold on to sources and inverses.
      slope: lazily(() => {
        const own = pairAt(alpha);
        return slopeOf([own], answersAt(alpha).refined([own.residual]), alpha);
      }),
      traces: at === last ? tracesOf(at) : lazily(() => tracesOf(system.at(alpha))()),
    });
  };
  const figuresAt = remembered(solveAt);
  const least = leastServed(LEAST * system.largest, system.largest, figuresAt);
  const pairAt = (alpha: number): Pair => {
    figuresAt(alpha);
    if (!pairs.has(alpha)) solveAt(alpha);
    return pairs.get(alpha)!;
  };
  const withNoise = (noise: number): Solver => {
    const shrink = 1 / (noise * noise);
    const served = (multiplier: number): number =>
      Math.max(asFewMultiplier(multiplier / shrink, system.largest), least);
    return {
      ...answers(system, 1, dot(data, data), least, figuresAt, shrink),
      estimate(multiplier) {
        if (multiplier === Infinity) return new Float64Array(panels.count);
        return averagedOnto(panels, cells, pairAt(served(multiplier)).source);
      },
      field(multiplier) {
        const seen = new Float64Array(n);
        if (multiplier === Infinity) return seen;
        cells.applyInto(seen, pairAt(served(multiplier)).source);
        return seen.map((value) => value * cells.noise);
      },
      withNoise: (factor) => withNoise(noise * factor),
    };
  };
  return withNoise(1);
}

export interface PooledSolver extends Solver {
  /** The largest norm of a single line, SI·√m. */
  largestNorm(multiplier: number): number;
}

/** Lines of one geometry with one multiplier. @param rows Q d/σ of each */
export function pooledLevelSolver(system: LevelSystem, rows: readonly Float64Array[]): PooledSolver {
  let last: {readonly alpha: number; readonly at: AtMultiplier; readonly pairs: readonly Pair[]} | undefined;
  const solvedAt = (alpha: number): NonNullable<typeof last> => {
    if (last?.alpha === alpha) return last;
    const at = system.at(alpha);
    last = {alpha, at, pairs: at.plain(rows)};
    return last;
  };
  const slopeAt = (alpha: number): number => {
    const {at, pairs} = solvedAt(alpha);
    return slopeOf(pairs, at.plain(pairs.map(({residual}) => residual)), alpha);
  };
  const figuresAt = remembered((alpha) => {
    const {at, pairs} = solvedAt(alpha);
    return figuresOf(pairs, {slope: lazily(() => slopeAt(alpha)), traces: tracesOf(at)});
  });
  const least = leastServed(LEAST_POOLED * system.largest, system.largest, figuresAt);
  const energy = rows.reduce((sum, row) => sum + dot(row, row), 0);
  return {
    ...answers(system, rows.length, energy, least, figuresAt, 1),
    largestNorm: (multiplier) =>
      multiplier === Infinity ? 0 : Math.sqrt(figuresAt(Math.max(multiplier, least)).largestNormSquared),
    estimate: () => new Float64Array(),
    withNoise(): never {
      throw new Error("pooled rows share one noise");
    },
  };
}

type Answers = Omit<Solver, "estimate" | "withNoise">;

/** @param shrink one over the square of the noise that the readings are whitened by, in units of that of the system */
function answers(
  {cells, basis, largest}: LevelSystem,
  lines: number,
  energy: number,
  least: number,
  figuresAt: (alpha: number) => Figures,
  shrink: number,
): Answers {
  const served = (multiplier: number): number => Math.max(asFewMultiplier(multiplier / shrink, largest), least);
  const at = (multiplier: number): Figures => figuresAt(served(multiplier));
  const norm = (multiplier: number): number => (multiplier === Infinity ? 0 : Math.sqrt(at(multiplier).normSquared));
  const freedom = lines * (cells.readings - basis.terms);
  return {
    data: lines * cells.readings,
    unknowns: lines * cells.count,
    modes: undefined,
    largest: largest * shrink,
    least: least * shrink,
    norm,
    misfit: (multiplier) => (multiplier === Infinity ? energy : at(multiplier).residualEnergy) * shrink,
    normSlope: (multiplier) => at(multiplier).slope() / norm(multiplier) / shrink,
    degreesOfFreedom: (multiplier) => (multiplier === Infinity ? 0 : at(multiplier).degreesOfFreedom()),
    evidence: (multiplier) => {
      const {residualEnergy, normSquared, logDeterminant} = at(multiplier);
      const quadratic = (residualEnergy + served(multiplier) * normSquared) * shrink;
      return {
        against: Math.log(quadratic / freedom) + logDeterminant() / freedom,
        noise: Math.sqrt(quadratic / freedom),
      };
    },
  };
}

/** @param again M r of each pair's residual r, so that BᵀM c = source/α */
const slopeOf = (pairs: readonly Pair[], again: readonly Pair[], alpha: number): number =>
  pairs.reduce((sum, {source}, k) => sum - dot(source, again[k]!.source), 0) / alpha;

interface Traces {
  readonly degreesOfFreedom: number;
  readonly logDeterminant: number;
}

/** Numbers, found at once: the inverse is let go. */
function tracesOf(at: AtMultiplier): () => Traces {
  const found = {degreesOfFreedom: at.degreesOfFreedom(), logDeterminant: at.logDeterminant()};
  return () => found;
}

function figuresOf(
  pairs: readonly Pair[],
  {slope, traces}: {readonly slope: () => number; readonly traces: () => Traces},
): Figures {
  const lines = pairs.length;
  const norms = pairs.map(({source}) => dot(source, source));
  return {
    residualEnergy: pairs.reduce((sum, {residual}) => sum + dot(residual, residual), 0),
    normSquared: norms.reduce((sum, own) => sum + own, 0),
    largestNormSquared: norms.reduce((most, own) => Math.max(most, own), 0),
    slope,
    degreesOfFreedom: () => lines * traces().degreesOfFreedom,
    logDeterminant: () => lines * traces().logDeterminant,
  };
}

/** A few numbers a multiplier: all are kept. */
function remembered(solveAt: (alpha: number) => Figures): (alpha: number) => Figures {
  const kept = new Map<number, Figures>();
  return (alpha) => {
    const found = kept.get(alpha) ?? solveAt(alpha);
    kept.set(alpha, found);
    return found;
  };
}

/** The least multiplier that is served: where sources have gaps, rounding reaches further up. */
function leastServed(from: number, largest: number, figuresAt: (alpha: number) => Figures): number {
  for (let alpha = from; ; alpha *= LESS_BOLD) {
    try {
      figuresAt(alpha);
      return alpha;
    } catch (error) {
      if (!(error instanceof NumericalError) || alpha > largest) throw error;
    }
  }
}

/** Averages over the panels of what lies on the cells as f √w; both cover the same support. */
function averagedOnto(panels: Panels, {from, to, count}: LevelCells, onCells: Float64Array): Float64Array {
  const density = new Float64Array(panels.count);
  let cell = 0;
  for (let j = 0; j < panels.count; ++j) {
    while (cell > 0 && from[cell] > panels.from[j]) --cell;
    let sum = 0;
    for (; cell < count && from[cell] < panels.to[j]; ++cell) {
      const shared = Math.min(to[cell], panels.to[j]) - Math.max(from[cell], panels.from[j]);
      if (shared > 0) sum += (shared * onCells[cell]) / Math.sqrt(to[cell] - from[cell]);
    }
    if (cell > 0) --cell;
    density[j] = sum / panels.width[j];
  }
  return density;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i] * b[i];
  return sum;
}
