/**
 * The normal equation (A*A + α) f = A*d for any multiplier α, A and d whitened by the noise and
 * freed of the regional, f on panels with its L² norm. However it is solved, the questions are these.
 *
 * misfit(α) grows and norm(α) falls; d misfit / d norm² = −α (Miller, SIAM J. Math. Anal. 1 (1970) 52, from memory).
 */
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
  /** The same readings whitened by `factor` times the noise. */
  withNoise(factor: number): Solver;
  /** f on the panels, SI. */
  estimate(multiplier: number): Float64Array;
}
