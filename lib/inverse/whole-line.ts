/**
 * (G + a) c = v over a whole long line, by generalised minimal residuals with the line's windows as preconditioner.
 *
 * G + a inverts a smoothing operator: its inverse reaches some heights and hardly beyond. So each reading is answered by
 * the inverse on a window well around it, whatever the heights, spacings and components of the readings, and a few steps
 * bring an interval within 1e-4 of the best where without the windows eighty do not (measured on lines of 1,000 stations,
 * 75 heights long). What a window is given must not be tapered: the kinks of a taper are short waves, which the inverse
 * raises by λ_0/a. That makes the preconditioner unsymmetric, and conjugate gradients, tried with tapers, stood still at
 * λ_0/a = 1e7.
 * Sources: Cai & Sarkis, SIAM J. Sci. Comput. 21 (1999) 792; Saad & Schultz, SIAM J. Sci. Stat. Comput. 7 (1986) 856
 * (both from memory).
 */

import {boundaryAt} from "../geometry/boundary-line.ts";
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
import {type Continuum, gramTimes, nodeMatrix, nodesFor} from "../operators/continuum.ts";
import {multipoleOperator} from "../operators/multipole.ts";
import {panelsOn} from "../operators/panels.ts";
import {whitenedOperator} from "../operators/whitened-operator.ts";
import type {DataModes} from "../spectral/singular-system.ts";

/** The readings `first … last − 1` and their modes. */
export interface Block {
  readonly first: number;
  readonly last: number;
  readonly modes: DataModes;
}

/** A block of a cover and the part of it that is no other block's, m of chainage. */
export interface Patch {
  readonly block: Block;
  readonly from: number;
  readonly to: number;
}

export interface WholeLine {
  /** G v. */
  gram(vector: Float64Array): Float64Array;
  /** (G + a)⁻¹ v. */
  solve(a: number, vector: Float64Array): Float64Array;
}

/** Steps end when the residual has fallen this far. Any c is a valid estimate, so this costs length alone. */
const ENOUGH = 1e-8;
const MOST_STEPS = 60;
/** Entries of readings × nodes that are kept for the products, 240 MB; beyond, kernels are computed anew each time. A heuristic. */
const KEPT = 3e7;
/** Panels of the products that lead to a solution, over the lowest height: what they average away is short waves, of which G holds least. */
const PANEL = 0.125;

/**
 * @param patches side by side from the first reading to the last
 * @param kept entries of readings × nodes that may be kept
 */
export function wholeLine(continuum: Continuum, patches: readonly Patch[], kept = KEPT): WholeLine {
  const {x, count} = continuum;
  const own = ownReadings(x, patches);
  const nodes = nodesFor(continuum, 0, count);
  const matrix = count * nodes.count <= kept ? nodeMatrix(continuum, nodes, 0, count) : undefined;
  const onNodes = new Float64Array(nodes.count);
  let quick: ((vector: Float64Array) => Float64Array) | undefined;
  const gram = (vector: Float64Array): Float64Array => {
    if (matrix === undefined) return gramTimes(continuum, vector, 1);
    transposedMatVecInto(onNodes, matrix, vector, count, nodes.count);
    return matVecInto(new Float64Array(count), matrix, onNodes, count, nodes.count);
  };
  /** Each patch's own readings from (G_block + a)⁻¹ r on its block. */
  const smoothed = (residual: Float64Array, a: number): Float64Array => {
    const result = new Float64Array(count);
    patches.forEach(({block: {first, last, modes}}, k) => {
      const part = residual.subarray(first, last);
      const on = matVecInto(new Float64Array(modes.count), modes.left, part, modes.count, last - first);
      for (let j = 0; j < modes.count; ++j) on[j] *= 1 / (modes.eigenvalues[j] + a) - 1 / a;
      const back = transposedMatVecInto(new Float64Array(last - first), modes.left, on, modes.count, last - first);
      for (let i = own[k]; i < own[k + 1]; ++i) result[i] = back[i - first] + residual[i] / a;
    });
    return result;
  };
  return {
    gram,
    solve(a, vector) {
      quick ??= matrix === undefined ? quickGram(continuum) : gram;
      const normal = (c: Float64Array): Float64Array => {
        const image = quick!(c);
        for (let i = 0; i < count; ++i) image[i] += a * c[i];
        return image;
      };
      return minimalResidual(normal, (residual) => smoothed(residual, a), vector);
    },
  };
}

/**
 * Nearly G v, by multipoles over panels in place of the continuum, for lines so long that kernels are not kept. It leads
 * to nearly the best c; what that is worth is then measured by G itself.
 */
function quickGram(continuum: Continuum): (vector: Float64Array) => Float64Array {
  const {x, z, support, boundary, count, stretches, known} = continuum;
  if (stretches !== undefined || known !== undefined) return (vector) => gramTimes(continuum, vector, 1);
  const lowest = z.reduce((least, height, i) => Math.min(least, height - boundaryAt(boundary, x[i])), Infinity);
  const panels = panelsOn(support, PANEL * lowest, boundary);
  const operator = whitenedOperator(multipoleOperator(continuum, panels), continuum);
  const onPanels = new Float64Array(panels.count);
  return (vector) => operator.applyInto(new Float64Array(count), operator.adjointInto(onPanels, vector));
}

/** Where each patch's own readings begin among the sorted ones; the first and the last take what lies beyond them. */
function ownReadings(x: Float64Array, patches: readonly Patch[]): Int32Array {
  const starts = new Int32Array(patches.length + 1);
  starts[patches.length] = x.length;
  for (let k = 1; k < patches.length; ++k) {
    let first = starts[k - 1];
    while (first < x.length && x[first] < patches[k].from) ++first;
    starts[k] = first;
  }
  return starts;
}

/** c with A c ≈ v, in the span of what the preconditioner makes of A's own images, by right-preconditioned GMRES. */
function minimalResidual(
  apply: (c: Float64Array) => Float64Array,
  precondition: (residual: Float64Array) => Float64Array,
  vector: Float64Array,
): Float64Array {
  const start = Math.sqrt(dot(vector, vector));
  const solution = new Float64Array(vector.length);
  if (!(start > 0)) return solution;
  const basis = [vector.map((value) => value / start)];
  const steps: Float64Array[] = [];
  /** Columns of the triangular factor, its rotations, and the rotated right-hand side. */
  const columns: number[][] = [];
  const turns: {readonly cos: number; readonly sin: number}[] = [];
  const right = [start];
  for (let k = 0; k < MOST_STEPS && Math.abs(right[k]) > ENOUGH * start; ++k) {
    const step = precondition(basis[k]);
    const image = apply(step);
    const column: number[] = [];
    for (const earlier of basis) {
      const share = dot(image, earlier);
      column.push(share);
      for (let i = 0; i < image.length; ++i) image[i] -= share * earlier[i];
    }
    const left = Math.sqrt(dot(image, image));
    turns.forEach(({cos, sin}, j) => {
      [column[j], column[j + 1]] = [cos * column[j] + sin * column[j + 1], cos * column[j + 1] - sin * column[j]];
    });
    const size = Math.hypot(column[k], left);
    if (!(size > 0)) break;
    const turn = {cos: column[k] / size, sin: left / size};
    turns.push(turn);
    column[k] = size;
    columns.push(column);
    steps.push(step);
    right.push(-turn.sin * right[k]);
    right[k] *= turn.cos;
    if (!(left > 0)) break;
    basis.push(image.map((value) => value / left));
  }
  const weights = new Float64Array(steps.length);
  for (let k = steps.length - 1; k >= 0; --k) {
    let sum = right[k];
    for (let j = k + 1; j < steps.length; ++j) sum -= columns[j][k] * weights[j];
    weights[k] = sum / columns[k][k];
    for (let i = 0; i < solution.length; ++i) solution[i] += weights[k] * steps[k][i];
  }
  return solution;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i] * b[i];
  return sum;
}
