/**
 * The solver by eigen-decomposition: with B = Σ √λ_k u_k v_kᵀ and c_k = u_kᵀ d,
 *
 *   f_α = Σ √λ_k c_k/(λ_k + α) v_k,   N² = Σ λ_k c_k²/(λ_k + α)²,   E = Σ (α c_k/(λ_k + α))² + ‖d⊥‖².
 *
 * Source: Miller, SIAM J. Math. Anal. 1 (1970) 52; Groetsch, The Theory of Tikhonov Regularization (1984) (both from memory).
 */
import type {WhitenedSystem} from "../operators/whitened.ts";
import {resolved} from "../spectral/resolved.ts";
import {dataCoefficients, USABLE} from "../spectral/singular-system.ts";
import type {Constrained} from "./constraint.ts";
import type {Solver} from "./solver.ts";

/**
 * @param taken terms of the regional that were projected out of the data
 * @param tied what `system` was freed of, where values are met exactly
 */
export function spectralSolver(system: WhitenedSystem, taken: number, tied?: Constrained): Solver {
  const all = resolved(system.matrix, system.rows, system.columns, system.data);
  const {energies} = all;
  const outside = energyOutside(system.data, energies);
  const {rootWidth} = system;
  /** The same readings with `noise` times the standard deviation: λ and c² shrink by its square. */
  const withNoise = (noise: number): Solver => {
    const shrink = 1 / (noise * noise);
    const eigenvalues = all.eigenvalues.map((lambda) => lambda * shrink);
    const shrunk = energies.map((energy) => energy * shrink);
    // Modes below the floor add Bᵀd⊥/α; near the floor itself they would be rounding, and are let go smoothly.
    const floor = 10 * USABLE * (eigenvalues[0] ?? 0);
    const sums = withBelow(modalSums(eigenvalues, shrunk, outside * shrink), all.below * shrink * shrink, floor);
    return {
      ...(tied === undefined ? sums : withLeast(sums, tied.leastNorm)),
      data: system.rows,
      unknowns: system.columns,
      modes: all.count,
      evidence: evidenceOf(eigenvalues, shrunk, outside * shrink, system.rows - taken),
      modal: {eigenvalues, energies: shrunk},
      dataSide: () => {
        const modes = all.modes();
        const {left} = modes;
        const coefficients = dataCoefficients(modes, system.data);
        const over = (values: Float64Array): Float64Array => values.map((value) => value / noise);
        return {eigenvalues, left, coefficients: over(coefficients), data: over(system.data), regional: system.basis};
      },
      estimate(multiplier) {
        // Whitened by more noise, B and d both shrink.
        const density = all.estimate(multiplier / shrink, floor / shrink);
        for (let j = 0; j < density.length; ++j) density[j] = (density[j] + (tied?.least[j] ?? 0)) / rootWidth[j];
        return density;
      },
      withNoise: (factor) => withNoise(noise * factor),
    };
  };
  return withNoise(1);
}

/** Norms with what the modes below the floor add. */
function withBelow(sums: Sums, energy: number, floor: number): Sums {
  if (!(floor > 0)) return sums;
  const norm = (multiplier: number): number =>
    Math.hypot(sums.norm(multiplier), Math.sqrt(energy) / (multiplier + floor));
  return {
    ...sums,
    norm,
    normSlope: (multiplier) => {
      const own = sums.norm(multiplier);
      const slope = own > 0 ? own * sums.normSlope(multiplier) : 0;
      return (slope - energy / (multiplier + floor) ** 3) / norm(multiplier);
    },
  };
}

/** Norms of u₀ + u′ from those of u′. */
function withLeast(sums: Sums, least: number): Sums {
  const norm = (multiplier: number): number => Math.hypot(sums.norm(multiplier), least);
  return {
    ...sums,
    norm,
    normSlope: (multiplier) => (sums.norm(multiplier) * sums.normSlope(multiplier)) / norm(multiplier),
  };
}

/** ‖d⊥‖²: what of the data lies outside the modes. */
export function energyOutside(data: Float64Array, energies: Float64Array): number {
  let outside = 0;
  for (const value of data) outside += value * value;
  for (const energy of energies) outside -= energy;
  return Math.max(outside, 0);
}

type Sums = Pick<Solver, "largest" | "least" | "misfit" | "norm" | "normSlope" | "degreesOfFreedom">;

/** What depends on the modes by their eigenvalues and energies c_k² alone. */
export function modalSums(eigenvalues: Float64Array, energies: Float64Array, outside: number): Sums {
  const sum = (term: (lambda: number, energy: number) => number): number => {
    let total = 0;
    for (let k = eigenvalues.length - 1; k >= 0; --k) total += term(eigenvalues[k], energies[k]);
    return total;
  };
  const norm = (multiplier: number): number =>
    multiplier === Infinity ? 0 : Math.sqrt(sum((lambda, energy) => (lambda * energy) / (lambda + multiplier) ** 2));
  return {
    largest: eigenvalues[0] ?? 0,
    least: eigenvalues.at(-1) ?? 0,
    norm,
    misfit: (multiplier) =>
      outside +
      (multiplier === Infinity
        ? sum((_, energy) => energy)
        : sum((lambda, energy) => energy * (multiplier / (lambda + multiplier)) ** 2)),
    normSlope: (multiplier) =>
      -sum((lambda, energy) => (lambda * energy) / (lambda + multiplier) ** 3) / norm(multiplier),
    degreesOfFreedom: (multiplier) => sum((lambda) => lambda / (lambda + multiplier)),
  };
}

/**
 * The readings' own word on their noise: if f were white with some strength, how likely are they at this ratio of
 * noise to strength, and what noise goes with it?
 * @param freedom readings less terms of the regional
 * @param repeats how many lines share each mode, where lines are pooled
 * Source: generalised maximum likelihood, Wahba, Ann. Stat. 13 (1985) 1378 (from memory).
 */
export const evidenceOf =
  (
    eigenvalues: Float64Array,
    energies: Float64Array,
    outside: number,
    freedom: number,
    repeats?: Float64Array,
  ): NonNullable<Solver["evidence"]> =>
  (multiplier) => {
    let quadratic = outside;
    let logDeterminant = 0;
    for (let k = 0; k < eigenvalues.length; ++k) {
      quadratic += (energies[k] * multiplier) / (eigenvalues[k] + multiplier);
      logDeterminant += (repeats?.[k] ?? 1) * Math.log1p(eigenvalues[k] / multiplier);
    }
    return {against: Math.log(quadratic / freedom) + logDeterminant / freedom, noise: Math.sqrt(quadratic / freedom)};
  };
