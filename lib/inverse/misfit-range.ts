/**
 * What misfit the noise alone explains: Σ(residual/σ)² of N true readings has mean N and standard deviation √(2N).
 * The one-sided target N + 2√(2N) is steadier than N itself: on the long-line model of the tests it stays within
 * 1.0–1.7 of the best multiplier where the plain one can blow up.
 */
export const misfitTarget = (readings: number): number => readings + 2 * Math.sqrt(2 * readings);

/** Beyond this the readings contradict noise, bound or support: six standard deviations. */
export const misfitLimit = (readings: number): number => readings + 6 * Math.sqrt(2 * readings);
