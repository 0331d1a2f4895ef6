/**
 * Means of f that are known exactly. With m_t the means (one over the length on their stretches), K their Gram matrix and
 * v their values, f = Σ (K⁻¹v)_t m_t + f′, f′ orthogonal to every m_t. Readings and questions then need to be about f′
 * alone, p ← p − Σ (K⁻¹⟨m, p⟩)_t m_t: the limit of readings whose noise goes to nothing, without what rounding makes of
 * such a noise. Source: Lawson & Hanson, Solving Least Squares Problems (1974), ch. 20 (from memory).
 */
import type {Interval} from "../geometry/interval.ts";
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {transposedMatVecInto} from "../numeric/matmul.ts";
import {type Continuum, continuumOf, type KnownMeans} from "./continuum.ts";
import {type Functional, meanOver} from "./functional.ts";
import {readingsOf} from "./readings.ts";

const MEAN = {re: 1, im: 0, order: 0} as const;

/** The continuum with the means over `stretches` of the support known; they are kept in this order. */
export function withKnownMeans(continuum: Continuum, stretches: readonly Interval[]): Continuum {
  if (stretches.length === 0) return continuum;
  const {support, boundary, count} = continuum;
  const known = stretches.length;
  const readings = readingsOf(
    // Chainage only keeps them in order here, and height says nothing.
    stretches.map((stretch, t) => ({
      x: Float64Array.of(t),
      z: new Float64Array(1),
      response: MEAN,
      noise: 1,
      stretch,
    })),
  );
  const means = continuumOf(readings, support, boundary);
  const factor = new Float64Array(known * known);
  const shares = new Float64Array(known * count);
  stretches.forEach((stretch, t) => {
    const mean = meanOver(stretch, support, boundary);
    mean.respondInto(factor.subarray(t * known, (t + 1) * known), means, 0, known);
    mean.respondInto(shares.subarray(t * count, (t + 1) * count), continuum, 0, count);
  });
  choleskyInPlace(factor, known);
  const one = new Float64Array(known);
  for (let i = 0; i < count; ++i) {
    for (let t = 0; t < known; ++t) one[t] = shares[t * count + i];
    choleskySolveInto(one, factor, one, known);
    for (let t = 0; t < known; ++t) shares[t * count + i] = one[t];
  }
  return {...continuum, shared: new Map(), known: {means, factor, shares}};
}

/** q without its part along the known means of a continuum, its norm that of the rest. */
export function besideMeans(functional: Functional, continuum: Continuum): Functional {
  const rest = functional.normSquared - knownProduct(continuum, functional, functional);
  const {cut} = functional;
  return {
    ...functional,
    // What rounding leaves of a mean that is known is nothing.
    normSquared: rest > ROUNDING * functional.normSquared ? rest : 0,
    ...(cut === undefined
      ? {}
      : {cut: (parts) => cut(parts).map(({mean, share}) => ({mean: besideMeans(mean, continuum), share}))}),
  };
}

/** Far above ε times the number of known means, far below any part of a functional that matters. */
const ROUNDING = 1e-13;

/** ⟨m, q⟩ᵀ K⁻¹ ⟨m, r⟩: what two functionals have in common through the known means alone; 0 where there are none. */
export function knownProduct({known}: Continuum, one: Functional, other: Functional): number {
  if (known === undefined) return 0;
  const onMeans = (functional: Functional): Float64Array =>
    functional.respondInto(new Float64Array(known.means.count), known.means, 0, known.means.count);
  return timesKnown(known, onMeans(one), onMeans(other));
}

/** q(f) of the least f that meets the values of the known means. */
export function knownPart({known}: Continuum, functional: Functional, values: Float64Array): number {
  if (known === undefined) return 0;
  const {means} = known;
  return timesKnown(known, functional.respondInto(new Float64Array(means.count), means, 0, means.count), values);
}

const timesKnown = ({factor, means}: KnownMeans, one: Float64Array, other: Float64Array): number =>
  choleskySolveInto(new Float64Array(means.count), factor, one, means.count).reduce(
    (sum, share, t) => sum + share * other[t],
    0,
  );

/** ‖f‖² of the least f that meets the values of the known means. */
export const knownNormSquared = ({known}: Continuum, values: Float64Array): number =>
  known === undefined ? 0 : timesKnown(known, values, values);

/** What the least f that meets the values puts into the readings, whitened. */
export const knownReadings = ({known, count}: Continuum, values: Float64Array): Float64Array =>
  known === undefined
    ? new Float64Array(count)
    : transposedMatVecInto(new Float64Array(count), known.shares, values, values.length, count);
