/**
 * The operator in the continuum: what one reading says about f ∈ L²(S), with nothing lost inside panels.
 *
 * Panels a quarter of the height wide fit data well, but the part of a source that averages away inside them
 * still counts as bias. Here inner products of readings are integrals by Gauss–Legendre nodes on elements that
 * are short near the stations and long far from them, and responses to functionals are closed forms.
 */
import type {Support} from "../geometry/interval.ts";
import {gaussLegendre} from "../numeric/quadrature.ts";
import {supportLogarithm} from "../potential/gram.ts";
import {poissonKernel} from "../potential/poisson.ts";

/** Stations in increasing chainage and the support below them; noise whitens every response. */
export interface Continuum {
  readonly support: Support;
  readonly count: number;
  readonly x: Float64Array;
  readonly z: Float64Array;
  /** L_S(x + iz) of `potential/gram.ts` at every station. */
  readonly logRe: Float64Array;
  readonly logIm: Float64Array;
  /** Standard deviation of the readings, SI. */
  readonly noise: number;
  /** `order[k]` is the place in the line of the k-th station from the left. */
  readonly order: Int32Array;
}

export function continuumOf(x: Float64Array, z: Float64Array, support: Support, noise: number): Continuum {
  const order = Int32Array.from(x.keys()).sort((i, j) => x[i] - x[j] || i - j);
  const sorted = (values: Float64Array): Float64Array => Float64Array.from(order, (i) => values[i]);
  const xs = sorted(x);
  const zs = sorted(z);
  const logRe = new Float64Array(x.length);
  const logIm = new Float64Array(x.length);
  for (let i = 0; i < x.length; ++i) {
    const {re, im} = supportLogarithm(support, xs[i], zs[i]);
    logRe[i] = re;
    logIm[i] = im;
  }
  return {support, count: x.length, x: xs, z: zs, logRe, logIm, noise, order};
}

/** Nodes and weights that integrate products of responses over the support. */
export interface Nodes {
  readonly count: number;
  readonly at: Float64Array;
  readonly rootWeight: Float64Array;
}

/** Nodes an element. */
const ORDER = 16;
/**
 * Length of an element over its distance from the nearest station. At 2 the kernels' poles lie on the Bernstein
 * ellipse of ρ = 1 + √2, so that products are integrated to about 32 ρ^(−32) = 2e-11, their poles being double (Trefethen, Approximation Theory
 * and Approximation Practice (2013), ch. 19, from memory).
 */
const REACH = 2;

/** Halvings that fix an element's length: to 1 % of what they began with. */
const BISECTIONS = 7;

/** Nodes for the stations `first … last − 1`. */
export function nodesFor(continuum: Continuum, first: number, last: number): Nodes {
  const rule = gaussLegendre(ORDER);
  const at: number[] = [];
  const rootWeight: number[] = [];
  for (const {from, to} of continuum.support) {
    let left = from;
    while (left < to) {
      const right = longestElement(continuum, first, last, left, to);
      // What would be left over as a sliver is shared between two equal elements.
      const rest = to - right;
      const end = rest > 0 && rest < right - left ? Math.min(right, 0.5 * (left + to)) : right;
      const half = 0.5 * (end - left);
      for (let k = 0; k < ORDER; ++k) {
        at.push(left + half * (1 + rule.nodes[k]));
        rootWeight.push(Math.sqrt(half * rule.weights[k]));
      }
      left = end;
    }
  }
  return {count: at.length, at: Float64Array.from(at), rootWeight: Float64Array.from(rootWeight)};
}

/** The end of the longest element from `left` on that is no longer than REACH times its distance from the stations. */
function longestElement(continuum: Continuum, first: number, last: number, left: number, to: number): number {
  const allowed = (right: number): boolean => right - left <= REACH * distance(continuum, first, last, left, right);
  let out = Math.min(to, left + REACH * distance(continuum, first, last, left, left));
  if (allowed(out)) return out;
  let inside = left + REACH * distance(continuum, first, last, left, out);
  for (let step = 0; step < BISECTIONS; ++step) {
    const middle = 0.5 * (inside + out);
    if (allowed(middle)) inside = middle;
    else out = middle;
  }
  return inside;
}

/** Least distance between the stations `first … last − 1` and the stretch [a, b] of the boundary, m. */
function distance(continuum: Continuum, first: number, last: number, a: number, b: number): number {
  let least = Infinity;
  for (let i = first; i < last; ++i) {
    const x = continuum.x[i];
    const across = x < a ? a - x : x > b ? x - b : 0;
    const d2 = across * across + continuum.z[i] * continuum.z[i];
    if (d2 < least) least = d2;
  }
  return Math.sqrt(least);
}

/** (last − first) × nodes, row-major: whitened responses at the nodes times the root of their weights. */
export function nodeMatrix(continuum: Continuum, nodes: Nodes, first: number, last: number): Float64Array {
  const matrix = new Float64Array((last - first) * nodes.count);
  for (let i = first; i < last; ++i) {
    const row = (i - first) * nodes.count;
    for (let k = 0; k < nodes.count; ++k)
      matrix[row + k] =
        (poissonKernel(nodes.at[k] - continuum.x[i], continuum.z[i]) * nodes.rootWeight[k]) / continuum.noise;
  }
  return matrix;
}

/** G R for `terms` vectors over all stations (terms × count, row-major), G the whitened Gram matrix; no matrix is stored. */
export function gramTimes(continuum: Continuum, vectors: Float64Array, terms: number): Float64Array {
  const nodes = nodesFor(continuum, 0, continuum.count);
  const result = new Float64Array(terms * continuum.count);
  const row = new Float64Array(continuum.count);
  for (let k = 0; k < nodes.count; ++k) {
    for (let i = 0; i < continuum.count; ++i)
      row[i] = (poissonKernel(nodes.at[k] - continuum.x[i], continuum.z[i]) * nodes.rootWeight[k]) / continuum.noise;
    for (let t = 0; t < terms; ++t) {
      const start = t * continuum.count;
      let dot = 0;
      for (let i = 0; i < continuum.count; ++i) dot += row[i] * vectors[start + i];
      for (let i = 0; i < continuum.count; ++i) result[start + i] += dot * row[i];
    }
  }
  return result;
}

/** ‖Σ c_i p_i‖² in L²(S), for whitened responses p_i. */
export function responseNormSquared(continuum: Continuum, weights: Float64Array): number {
  const nodes = nodesFor(continuum, 0, continuum.count);
  let total = 0;
  for (let k = 0; k < nodes.count; ++k) {
    let sum = 0;
    for (let i = 0; i < continuum.count; ++i)
      sum += weights[i] * poissonKernel(nodes.at[k] - continuum.x[i], continuum.z[i]);
    const term = (sum * nodes.rootWeight[k]) / continuum.noise;
    total += term * term;
  }
  return total;
}
