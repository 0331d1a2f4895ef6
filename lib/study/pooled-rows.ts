/**
 * The first walk over a grid: what fixes the one multiplier. Rows with modes all add their energies; of complete level
 * rows, which are solved anew at every multiplier, a sample that is spread over the grid stands for the rest.
 */
import type {RuleQuestion} from "../inverse/rules/rule.ts";
import {type PooledSolver, pooledLevelSolver} from "../solvers/level.ts";
import type {LevelSystem} from "../solvers/level-system.ts";
import type {ModalEnergies, Solver} from "../solvers/solver.ts";
import {evidenceOf, modalSums} from "../solvers/spectral.ts";
import {onModes} from "./modal-rows.ts";
import type {RowGeometry} from "./row-geometry.ts";

/** Multipliers at which the largest norm of a row is noted, per decade. */
const NORM_POINTS = 8;
/**
 * Level rows in the sample: as many as hold so many readings, within limits. The misfit of 80,000 readings varies by
 * half a per cent by chance.
 */
const SAMPLE_READINGS = 80_000;
const LEAST_ROWS = 16;
const MOST_ROWS = 200;

/** Every so many rows one is in the sample. */
export const sampleStep = (rows: number, readings: number): number =>
  Math.max(1, Math.floor(rows / Math.min(MOST_ROWS, Math.max(LEAST_ROWS, Math.ceil(SAMPLE_READINGS / readings)))));

/** Sums over all rows of one geometry. */
interface Pool {
  readonly eigenvalues: Float64Array;
  readonly energies: Float64Array;
  /** Of the regional, a row. */
  readonly terms: number;
  rows: number;
  readings: number;
  outside: number;
}

interface LevelPool {
  readonly system: LevelSystem;
  readonly data: Float64Array[];
}

export interface PooledRows {
  /** @param data Q d/σ */
  add(key: string, geometry: RowGeometry, data: Float64Array): void;
  readonly rows: number;
  readonly levelRows: number;
  /** For the rule; undefined while there are no rows. */
  question(): Omit<RuleQuestion, "supportLength"> | undefined;
}

/** One part of the pool as a solver, with the readings less terms of the regional. */
interface Part {
  readonly solver: PooledSolver;
  readonly freedom: number;
  readonly rows: number;
}

export function pooledRows(): PooledRows {
  const modal = modalPool();
  const level = new Map<string, LevelPool>();
  const levelRows = (): number => [...level.values()].reduce((sum, {data}) => sum + data.length, 0);
  return {
    add(key, geometry, data) {
      const {rows} = geometry;
      if ("modes" in rows) {
        modal.add(key, geometry, rows, data);
        return;
      }
      const pool = level.get(key) ?? {system: rows.system(), data: []};
      level.set(key, pool);
      pool.data.push(rows.sorted(data));
    },
    get rows() {
      return modal.rows() + levelRows();
    },
    get levelRows() {
      return levelRows();
    },
    question() {
      const parts: Part[] = [...level.values()].map(({system, data}) => ({
        solver: pooledLevelSolver(system, data),
        freedom: data.length * (system.cells.readings - system.basis.terms),
        rows: data.length,
      }));
      const own = modal.part();
      if (own !== undefined) parts.push(own);
      if (parts.length === 0) return undefined;
      const [only] = parts;
      const solver = parts.length === 1 ? only!.solver : together(parts);
      const lines = parts.reduce((sum, {rows}) => sum + rows, 0);
      return {solver, lines, largestNorm: solver.largestNorm};
    },
  };
}

const withoutSource = {
  estimate: (): Float64Array => new Float64Array(),
  withNoise(): never {
    throw new Error("pooled rows share one noise");
  },
};

/** Several geometries, some with modes and some without: sums of all. */
function together(parts: readonly Part[]): PooledSolver {
  const sum = (ask: (solver: Solver, freedom: number) => number): number =>
    parts.reduce((total, {solver, freedom}) => total + ask(solver, freedom), 0);
  const norm = (multiplier: number): number => Math.sqrt(sum((solver) => solver.norm(multiplier) ** 2));
  const freedom = sum((_, own) => own);
  return {
    ...withoutSource,
    data: sum(({data}) => data),
    unknowns: 0,
    modes: undefined,
    largest: parts.reduce((most, {solver}) => Math.max(most, solver.largest), 0),
    least: parts.reduce((most, {solver}) => Math.max(most, solver.least), 0),
    misfit: (multiplier) => sum((solver) => solver.misfit(multiplier)),
    norm,
    normSlope: (multiplier) =>
      sum((solver) => solver.norm(multiplier) * solver.normSlope(multiplier)) / norm(multiplier),
    degreesOfFreedom: (multiplier) => sum((solver) => solver.degreesOfFreedom(multiplier)),
    evidence: (multiplier) => {
      // Each part's quadratic form and logarithm of the determinant, out of what it says of itself.
      let quadratic = 0;
      let logDeterminant = 0;
      for (const {solver, freedom: own} of parts) {
        const {against, noise} = solver.evidence!(multiplier);
        quadratic += own * noise * noise;
        logDeterminant += own * (against - 2 * Math.log(noise));
      }
      return {
        against: Math.log(quadratic / freedom) + logDeterminant / freedom,
        noise: Math.sqrt(quadratic / freedom),
      };
    },
    largestNorm: (multiplier) => parts.reduce((most, {solver}) => Math.max(most, solver.largestNorm(multiplier)), 0),
  };
}

function modalPool() {
  const pools = new Map<string, Pool>();
  const grid: number[] = [];
  const largest: number[] = [];
  const total = (pick: (pool: Pool) => number): number =>
    [...pools.values()].reduce((sum, pool) => sum + pick(pool), 0);
  return {
    rows: (): number => total((pool) => pool.rows),
    add(key: string, {basis}: RowGeometry, {modes}: {modes: Parameters<typeof onModes>[0]}, data: Float64Array): void {
      const {energies, outside} = onModes(modes, data);
      let pool = pools.get(key);
      if (pool === undefined) {
        pool = {
          eigenvalues: modes.eigenvalues,
          energies: new Float64Array(modes.count),
          terms: basis.terms,
          rows: 0,
          readings: 0,
          outside: 0,
        };
        pools.set(key, pool);
      }
      for (let k = 0; k < energies.length; ++k) pool.energies[k] += energies[k];
      pool.rows += 1;
      pool.readings += data.length;
      pool.outside += outside;
      if (grid.length === 0) {
        const top = Math.log10(10 * modes.eigenvalues[0]);
        for (let t = top; t > top - 16; t -= 1 / NORM_POINTS) grid.push(t);
        largest.push(...grid.map(() => 0));
      }
      const {norm} = modalSums(modes.eigenvalues, energies, 0);
      for (let k = 0; k < grid.length; ++k) largest[k] = Math.max(largest[k], norm(10 ** grid[k]));
    },
    part(): Part | undefined {
      if (pools.size === 0) return undefined;
      const modal = sortedByEigenvalue([...pools.values()]);
      const outside = total((pool) => pool.outside);
      const readings = total((pool) => pool.readings);
      const freedom = readings - total((pool) => pool.rows * pool.terms);
      return {
        rows: total((pool) => pool.rows),
        freedom,
        solver: {
          ...withoutSource,
          ...modalSums(modal.eigenvalues, modal.energies, outside),
          data: readings,
          unknowns: 0,
          modes: modal.eigenvalues.length,
          modal,
          evidence: evidenceOf(modal.eigenvalues, modal.energies, outside, freedom, modal.repeats),
          largestNorm(multiplier) {
            const place = (grid[0] - Math.log10(multiplier)) * NORM_POINTS;
            if (!(place > 0)) return largest[0];
            const left = Math.min(Math.floor(place), grid.length - 2);
            // Norms fall with the multiplier: the next smaller multiplier bounds from above.
            return largest[Math.min(left + 1, grid.length - 1)];
          },
        },
      };
    },
  };
}

function sortedByEigenvalue(pools: readonly Pool[]): Required<ModalEnergies> {
  const all = pools.flatMap(({eigenvalues, energies, rows}) =>
    Array.from(eigenvalues, (lambda, k) => ({lambda, energy: energies[k]!, rows})),
  );
  // Sorting is stable: equal eigenvalues keep their order.
  all.sort((a, b) => b.lambda - a.lambda);
  return {
    eigenvalues: Float64Array.from(all, ({lambda}) => lambda),
    energies: Float64Array.from(all, ({energy}) => energy),
    repeats: Float64Array.from(all, ({rows}) => rows),
  };
}
