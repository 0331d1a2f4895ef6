/**
 * The normal equation (A*A + α) f = A*d for any multiplier α, A and d whitened by the noise and
 * freed of the regional, f on panels with its L² norm. However it is solved, the questions are these.
 *
 * misfit(α) grows and norm(α) falls; d misfit / d norm² = −α (Miller, SIAM J. Math. Anal. 1 (1970) 52, from memory).
 */
import type {RegionalBasis} from "../operators/regional.ts";

/** What the modes carry, one entry each. */
export interface ModalEnergies {
  /** λ_k, decreasing. */
  readonly eigenvalues: Float64Array;
  /** c_k², c_k = u_kᵀd; of pooled lines their sum. */
  readonly energies: Float64Array;
  /** How many lines share each mode, where lines are pooled; absent: one. */
  readonly repeats?: Float64Array;
}

/** The modes on the side of the readings: fit = R Rᵀ + U diag(λ/(λ + α)) Uᵀ, U orthogonal to R. */
export interface DataSide {
  readonly eigenvalues: Float64Array;
  /** modes × readings: u_k, row-major. */
  readonly left: Float64Array;
  readonly coefficients: Float64Array;
  /** Q d/σ. */
  readonly data: Float64Array;
  /** R. */
  readonly regional: RegionalBasis;
}

export interface Solver {
  /** Number of readings. */
  readonly data: number;
  readonly unknowns: number;
  /** Modes kept; undefined where nothing was diagonalised. */
  readonly modes: number | undefined;
  /** Largest eigenvalue of A*A, and the least multiplier that double precision can serve. */
  readonly largest: number;
  readonly least: number;
  /** Σ (residual/σ)², α in [0, ∞]; at 0 over the modes kept. */
  misfit(multiplier: number): number;
  /** ‖f‖, SI·√m. */
  norm(multiplier: number): number;
  /** d‖f‖/dα. */
  normSlope(multiplier: number): number;
  degreesOfFreedom(multiplier: number): number;
  /**
   * For a multiplier, minus the log-likelihood of the readings (up to constants, per reading) and the noise that goes
   * with it, as a multiple of the one that whitened them; undefined where nothing was diagonalised.
   */
  readonly evidence: ((multiplier: number) => {readonly against: number; readonly noise: number}) | undefined;
  /** For rules that weigh the modes one by one; absent where nothing was diagonalised. */
  readonly modal?: ModalEnergies;
  /** For rules that leave readings out; formed when first asked for, absent where readings are not kept. */
  readonly dataSide?: () => DataSide;
  /** The same readings whitened by `factor` times the noise. */
  withNoise(factor: number): Solver;
  /** f on the panels, SI. */
  estimate(multiplier: number): Float64Array;
  /** What the source reads at the stations, SI, where it is finer than the panels; absent where the panels are the source. */
  readonly field?: (multiplier: number) => Float64Array;
}
