/**
 * The operator in the continuum: what one reading says about f ∈ L²(S), with nothing lost inside panels.
 *
 * Panels a quarter of the height wide fit data well, but the part of a source that averages away inside them
 * still counts as bias. Here inner products of readings are integrals by Gauss–Legendre nodes on elements that
 * are short near the sensors and long far from them, and responses to functionals are closed forms.
 */
import {type BoundaryLine, boundaryAt, breaksWithin} from "../geometry/boundary-line.ts";
import type {Interval, Support} from "../geometry/interval.ts";
import {gaussLegendre, type QuadratureRule} from "../numeric/quadrature.ts";
import {kernelAt} from "../potential/kernel.ts";
import {logarithmOver, type Pole} from "../potential/pair.ts";
import {whitenedInto} from "./correlated-noise.ts";
import {pick, type Readings} from "./readings.ts";

/** Readings in increasing chainage and the support below them; noise whitens every response. */
export interface Continuum extends Readings {
  readonly support: Support;
  /** Undefined for a flat one at z = 0. */
  readonly boundary: BoundaryLine | undefined;
  /** Every reading as a pole, for closed forms on a flat boundary; empty on any other. */
  readonly poles: readonly Pole[];
  /** `place[k]` is the place among the readings given of the k-th from the left. */
  readonly place: Int32Array;
  /** What `sharedNodes` has made before, by the readings it is for. */
  readonly shared: Map<string, SharedNodes>;
  /** Means of f that are known exactly: all responses are to what is left of f; see `known-means.ts`. */
  readonly known: KnownMeans | undefined;
}

export interface KnownMeans {
  /** The means m_t as readings, whitened by one. */
  readonly means: Continuum;
  /** Cholesky factor of K, their Gram matrix. */
  readonly factor: Float64Array;
  /** K⁻¹⟨m_t, p_i⟩, means × readings, row-major; p_i whitened. */
  readonly shares: Float64Array;
}

export function continuumOf(readings: Readings, support: Support, boundary?: BoundaryLine): Continuum {
  const {x} = readings;
  const place = Int32Array.from(x.keys()).sort((i, j) => x[i] - x[j] || i - j);
  const sorted = pick(readings, place);
  const poles = boundary === undefined ? Array.from(sorted.x, (_, i) => poleOf(support, sorted, i)) : [];
  return {...sorted, support, boundary, poles, place, shared: new Map(), known: undefined};
}

function poleOf(support: Support, {x, z, aRe, aIm, order}: Readings, i: number): Pole {
  const [logRe, logIm, slopeRe, slopeIm] = logarithmOver(support, x[i], z[i]);
  return {x: x[i], z: z[i], aRe: aRe[i], aIm: aIm[i], order: order[i], logRe, logIm, slopeRe, slopeIm};
}

/** Nodes and weights that integrate products of responses over the support. */
export interface Nodes {
  readonly count: number;
  readonly at: Float64Array;
  /** Height of the boundary there, m. */
  readonly y: Float64Array;
  readonly rootWeight: Float64Array;
  /** Length of the longest element, m. */
  readonly longest: number;
}

/** Nodes for some readings, and what these respond there; see `nodeMatrix`. */
export interface SharedNodes {
  readonly nodes: Nodes;
  readonly matrix: Float64Array;
}

/** A place above the boundary near which nodes must lie close. */
export interface Place {
  readonly x: number;
  readonly z: number;
}

/**
 * Length of an element over its distance from the nearest sensor. At 2 the kernels' poles lie on the Bernstein
 * ellipse of ρ = 1 + √2, so that products are integrated to about ρ^(−32) = 6e-13 by 16 nodes (Trefethen,
 * Approximation Theory and Approximation Practice (2013), ch. 19, from memory). Products of two gradients, whose poles
 * are of order 4, to 3e-9; on slopes the poles lie nearer, by cos θ, and a little more is lost.
 */
const REACH = 2;
/** Nodes for elements up to this share of their distance long, to the same accuracy. */
const ORDERS = [
  [0.25, 5],
  [0.5, 7],
  [1, 10],
  [REACH, 16],
] as const;
/** Halvings that fix an element's length: to 1 % of what they began with. */
const BISECTIONS = 7;

/** Nodes for the readings `first … last − 1`, and for `also` where a point is asked about. */
export function nodesFor(continuum: Continuum, first: number, last: number, also?: Place): Nodes {
  const rules = new Map<number, QuadratureRule>(ORDERS.map(([, order]) => [order, gaussLegendre(order)]));
  const at: number[] = [];
  const rootWeight: number[] = [];
  let longest = 0;
  const lowest = reachingBack(continuum, first, last);
  const far = (a: number, b: number): number => distance(continuum, lowest, last, a, b, also);
  for (const {from, to} of continuum.support) {
    const breaks = breaksOf(continuum, from, to, lowest, last);
    let left = from;
    for (const stop of breaks)
      while (left < stop) {
        const right = longestElement(far, left, stop);
        // What would be left over as a sliver is shared between two equal elements.
        const rest = stop - right;
        const end = rest > 0 && rest < right - left ? Math.min(right, 0.5 * (left + stop)) : right;
        const share = (end - left) / far(left, end);
        const rule = rules.get((ORDERS.find(([most]) => share <= most) ?? ORDERS[3])[1])!;
        const half = 0.5 * (end - left);
        longest = Math.max(longest, end - left);
        for (let k = 0; k < rule.nodes.length; ++k) {
          at.push(left + half * (1 + rule.nodes[k]));
          rootWeight.push(Math.sqrt(half * rule.weights[k]));
        }
        left = end;
      }
  }
  const places = Float64Array.from(at);
  return {
    count: at.length,
    at: places,
    y: places.map((x) => boundaryAt(continuum.boundary, x)),
    rootWeight: Float64Array.from(rootWeight),
    longest,
  };
}

/** Where elements end whatever their length, up to `to`: breaks of the boundary, and ends of stretches that are means. */
function breaksOf(continuum: Continuum, from: number, to: number, first: number, last: number): readonly number[] {
  const ground = [...breaksWithin(continuum.boundary, from, to), to];
  const {stretches, known} = continuum;
  if (stretches === undefined && known === undefined) return ground;
  const own = [...(stretches?.slice(first, last) ?? []), ...(known?.means.stretches ?? [])];
  const ends = own.flatMap((stretch) => (stretch === undefined ? [] : [stretch.from, stretch.to]));
  return [...new Set([...ground, ...ends.filter((end) => end > from && end < to)])].sort((a, b) => a - b);
}

/** The end of the longest element from `left` on that is no longer than REACH times its distance from the sensors. */
function longestElement(far: (a: number, b: number) => number, left: number, to: number): number {
  const allowed = (right: number): boolean => right - left <= REACH * far(left, right);
  let out = Math.min(to, left + REACH * far(left, left));
  if (allowed(out)) return out;
  let inside = left + REACH * far(left, out);
  // On, if need be, until there is an element at all: at the foot of a cliff that overtops a sensor.
  for (let step = 0; step < BISECTIONS || !(inside > left); ++step) {
    const middle = 0.5 * (inside + out);
    if (allowed(middle)) inside = middle;
    else out = middle;
  }
  return inside;
}

/** Whitened, a reading of correlated noise holds some of the one before it, which may stand left of `first`. */
function reachingBack({correlated, before}: Continuum, first: number, last: number): number {
  let lowest = first;
  for (let i = first; correlated && i < last; ++i) if (before[i] >= 0 && before[i] < lowest) lowest = before[i];
  return lowest;
}

/** Least distance between the sensors `first … last − 1` (and `also`) and the stretch [a, b] of the boundary, m. */
function distance(continuum: Continuum, first: number, last: number, a: number, b: number, also?: Place): number {
  const top = Math.max(boundaryAt(continuum.boundary, a), boundaryAt(continuum.boundary, b));
  let least = Infinity;
  const {x, z, stretches} = continuum;
  /** False where readings from here on are farther off than one before. */
  const nearer = (i: number): boolean => {
    const across = x[i] < a ? a - x[i] : x[i] > b ? x[i] - b : 0;
    if (across * across >= least) return false;
    if (stretches?.[i] !== undefined) return true;
    const above = z[i] - top;
    least = Math.min(least, across * across + (above > 0 ? above * above : 0));
    return true;
  };
  const middle = firstFrom(x, a, first, last);
  for (let i = middle; i < last && nearer(i); ++i);
  for (let i = middle - 1; i >= first && nearer(i); --i);
  if (also !== undefined) {
    const across = also.x < a ? a - also.x : also.x > b ? also.x - b : 0;
    const above = Math.max(also.z - top, 0);
    least = Math.min(least, across * across + above * above);
  }
  return Math.sqrt(least);
}

/** Place of the first of the increasing x among `first … last − 1` that is not below `least`; `last` where there is none. */
export function firstFrom(x: Float64Array, least: number, first: number, last: number): number {
  let low = first;
  let high = last;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (x[middle] < least) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Kernel of reading i at a node, not whitened. */
const rawAt = (continuum: Continuum, nodes: Nodes, i: number, k: number): number =>
  kernelAt(
    continuum.aRe[i],
    continuum.aIm[i],
    continuum.order[i],
    nodes.at[k] - continuum.x[i],
    continuum.z[i] - nodes.y[k],
  );

/** A mean as a function: one over its length on the stretch. */
export const meanAt = ({from, to}: Interval, t: number): number => (t >= from && t <= to ? 1 / (to - from) : 0);

/** Whether responses are whitened kernels of white noise and nothing else: the common case, and the short road. */
const isPlain = ({correlated, stretches, known}: Continuum): boolean =>
  !correlated && stretches === undefined && known === undefined;

/** Whitened responses of the readings `first … last − 1` at a node, to the head of `column`. */
function columnInto(
  column: Float64Array,
  continuum: Continuum,
  nodes: Nodes,
  first: number,
  last: number,
  k: number,
): Float64Array {
  const {stretches, known, count} = continuum;
  whitenedInto(column, continuum, first, last, (i) => {
    const stretch = stretches?.[i];
    return stretch === undefined ? rawAt(continuum, nodes, i, k) : meanAt(stretch, nodes.at[k]);
  });
  known?.means.stretches?.forEach((stretch, t) => {
    const mean = meanAt(stretch!, nodes.at[k]);
    if (mean > 0) for (let i = first; i < last; ++i) column[i - first] -= known.shares[t * count + i] * mean;
  });
  return column;
}

/** Whitened kernel, where the noise is white. */
const responseAt = (continuum: Continuum, nodes: Nodes, i: number, k: number): number =>
  rawAt(continuum, nodes, i, k) / continuum.noise[i];

/** (last − first) × nodes, row-major: whitened responses at the nodes times the root of their weights. */
export function nodeMatrix(continuum: Continuum, nodes: Nodes, first: number, last: number): Float64Array {
  const matrix = new Float64Array((last - first) * nodes.count);
  if (!isPlain(continuum)) return nodeMatrixByColumnsInto(matrix, continuum, nodes, first, last);
  for (let i = first; i < last; ++i) {
    const row = (i - first) * nodes.count;
    for (let k = 0; k < nodes.count; ++k) matrix[row + k] = responseAt(continuum, nodes, i, k) * nodes.rootWeight[k];
  }
  return matrix;
}

function nodeMatrixByColumnsInto(
  matrix: Float64Array,
  continuum: Continuum,
  nodes: Nodes,
  first: number,
  last: number,
): Float64Array {
  const column = new Float64Array(last - first);
  for (let k = 0; k < nodes.count; ++k) {
    columnInto(column, continuum, nodes, first, last, k);
    for (let i = 0; i < column.length; ++i) matrix[i * nodes.count + k] = column[i] * nodes.rootWeight[k];
  }
  return matrix;
}

/** Entries of a matrix that is worth remembering: 64 MB. A heuristic. */
const REMEMBERED = 8e6;

/** Nodes and responses of the readings `first … last − 1`, made once; undefined where they are too many to keep. */
export function sharedNodes(continuum: Continuum, first: number, last: number): SharedNodes | undefined {
  const key = `${first}-${last}`;
  const {shared} = continuum;
  const found = shared.get(key);
  if (found !== undefined) {
    // Asked for again, it is the youngest.
    shared.delete(key);
    shared.set(key, found);
    return found;
  }
  // Every break begins an element of five nodes at least.
  if ((last - first) * 5 * (continuum.boundary?.x.length ?? 0) > REMEMBERED) return undefined;
  const nodes = nodesFor(continuum, first, last);
  if ((last - first) * nodes.count > REMEMBERED) return undefined;
  const made: SharedNodes = {nodes, matrix: nodeMatrix(continuum, nodes, first, last)};
  // Two are enough: points are asked for along the line, each of its window and of the whole line.
  if (shared.size > 1) shared.delete(shared.keys().next().value!);
  shared.set(key, made);
  return made;
}
