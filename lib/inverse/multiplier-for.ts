/** The multiplier at which a norm or a misfit takes a value: monotone functions, safeguarded Newton in ln α. */
import {ModelError, NumericalError} from "../errors.ts";
import type {Solver} from "../solvers/solver.ts";
import {searchedMultiplier} from "./searched-multiplier.ts";

const STEPS = 200;

/**
 * α with ‖f_α‖ = bound, to 1e-12 relative, by Newton on φ(α) = 1/N − 1/M, which is nearly linear, kept
 * inside a shrinking bracket in ln α.
 * Source: Reinsch, Numer. Math. 16 (1971) 451; Moré & Sorensen, SIAM J. Sci. Stat. Comput. 4 (1983) 553 (both from memory).
 *
 * @returns 0 when even α = 0 stays within the bound: the bound is not active
 * @throws {ModelError} `bound/below-ties` when values met exactly need more than the bound
 * @throws {NumericalError} `bound/no-root`
 */
export function multiplierForNorm(solver: Solver, bound: number): number {
  if (solver.norm(0) <= bound) return 0;
  const least = solver.norm(Infinity);
  if (!(least < bound))
    throw new ModelError(
      "bound/below-ties",
      `The values to be met exactly need a source of ${(least / bound).toPrecision(4)} times the bound. Loosen --bound, or give the ties a tolerance.`,
    );
  const searched = searchedMultiplier(solver, solver.norm, bound, 1e-12);
  if (searched !== undefined) return searched;
  let low = Math.log(solver.least) - 40;
  let high = Math.log(solver.largest);
  while (solver.norm(Math.exp(high)) > bound) high += 5;
  let t = 0.5 * (low + high);
  for (let step = 0; step < STEPS; ++step) {
    const alpha = Math.exp(t);
    const norm = solver.norm(alpha);
    if (Math.abs(norm - bound) <= 1e-12 * bound) return alpha;
    if (norm > bound) low = t;
    else high = t;
    const phi = 1 / norm - 1 / bound;
    const slope = -solver.normSlope(alpha) / (norm * norm);
    const next = alpha - phi / slope;
    t = next > Math.exp(low) && next < Math.exp(high) ? Math.log(next) : 0.5 * (low + high);
    if (high - low < 1e-15 * Math.abs(high)) return Math.exp(t);
  }
  throw new NumericalError(
    "bound/no-root",
    `The multiplier for the norm bound ${bound} was not found in ${STEPS} steps. Please report this with the data.`,
  );
}

/**
 * α with misfit E(α) = target, to 1e-10 relative, by Newton in ln α (dE/dα = −2αN dN/dα) inside a bracket.
 *
 * @returns undefined when every multiplier fits worse; Infinity when no source at all fits better than the target
 * @throws {NumericalError} `bound/no-root`
 */
export function multiplierForMisfit(solver: Solver, target: number): number | undefined {
  if (solver.misfit(Infinity) <= target) return Infinity;
  if (solver.misfit(0) >= target) return undefined;
  const searched = searchedMultiplier(solver, solver.misfit, target, 1e-10);
  if (searched !== undefined) return searched;
  let low = Math.log(solver.least) - 40;
  let high = Math.log(solver.largest) + 1;
  while (solver.misfit(Math.exp(high)) < target) high += 3;
  let t = 0.5 * (low + high);
  for (let step = 0; step < STEPS; ++step) {
    const alpha = Math.exp(t);
    const misfit = solver.misfit(alpha);
    if (Math.abs(misfit - target) <= 1e-10 * target || high - low < 1e-14) return alpha;
    if (misfit < target) low = t;
    else high = t;
    const slope = -2 * alpha * alpha * solver.norm(alpha) * solver.normSlope(alpha);
    const next = t + (target - misfit) / slope;
    t = next > low && next < high ? next : 0.5 * (low + high);
  }
  throw new NumericalError(
    "bound/no-root",
    `The multiplier for misfit ${target} was not found in ${STEPS} steps. Please report this with the data.`,
  );
}
