/**
 * Conjugate gradients for (G + a) c = v on a long line, with the inverses on overlapping stretches of it as
 * preconditioner.
 *
 * G + a inverts a smoothing operator: its inverse reaches some heights and hardly beyond, so the inverse on overlapping
 * windows, blended by weights whose squares add up to one, is nearly the inverse itself, whatever the heights, spacings
 * and components of the readings.
 * Source: additive Schwarz, Toselli & Widlund, Domain Decomposition Methods (2005), ch. 2–3 (from memory).
 */
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
import type {DataModes} from "../spectral/singular-system.ts";

/** The readings `first … last − 1` and their modes. */
interface Block {
  readonly first: number;
  readonly last: number;
  readonly modes: DataModes;
}

/** A block of a cover and the part of it that is no other block's, m of chainage. */
export interface Patch {
  readonly block: Block;
  readonly from: number;
  readonly to: number;
  /** Beyond the patch the block counts less and less, down to nothing at this many metres. */
  readonly margin: number;
}

/** Keeps a reading that only the very rim of blocks holds from weighing nothing. */
const LEAST_WEIGHT = 1e-9;

/**
 * For each block a weight a reading: one on the patch, falling over the margin; squares over all blocks add up to one.
 * @param x chainage of the readings
 */
export function blend(x: Float64Array, patches: readonly Patch[]): readonly Float64Array[] {
  const total = new Float64Array(x.length);
  const raw = patches.map(({block: {first, last}, from, to, margin}) => {
    const weight = new Float64Array(last - first);
    for (let i = first; i < last; ++i) {
      const beyond = Math.max(from - x[i], x[i] - to, 0) / margin;
      weight[i - first] = Math.max(1 - beyond, 0) ** 2 + LEAST_WEIGHT;
      total[i] += weight[i - first];
    }
    return weight;
  });
  return raw.map((weight, k) => weight.map((w, i) => Math.sqrt(w / total[patches[k].block.first + i])));
}

/** Σ D (G_block + a)⁻¹ D r, D the weights of the blend; a new list. */
export function smoothed(
  residual: Float64Array,
  a: number,
  patches: readonly Patch[],
  weights: readonly Float64Array[],
): Float64Array {
  const result = new Float64Array(residual.length);
  patches.forEach(({block: {first, last, modes}}, k) => {
    const weight = weights[k];
    const part = weight.map((w, i) => w * residual[first + i]);
    const on = matVecInto(new Float64Array(modes.count), modes.left, part, modes.count, last - first);
    for (let j = 0; j < modes.count; ++j) on[j] *= 1 / (modes.eigenvalues[j] + a) - 1 / a;
    const back = transposedMatVecInto(new Float64Array(last - first), modes.left, on, modes.count, last - first);
    for (let i = 0; i < last - first; ++i) result[first + i] += weight[i] * (back[i] + part[i] / a);
  });
  return result;
}

/** What conjugate gradients go on. */
export interface Descent {
  /** Writes (G + a) v. */
  imageInto(target: Float64Array, vector: Float64Array): Float64Array;
  /** The preconditioner; a new list. */
  precondition(residual: Float64Array): Float64Array;
  /** Steps end when the preconditioned residual, squared, is down to this. @param start what it was at first */
  enough(start: number): number;
  readonly mostSteps: number;
}

export interface Descended {
  readonly steps: number;
  /** The preconditioned residual, squared, that was left. */
  readonly left: number;
}

/** Improves `solution` in place. @param residual v − (G + a) c of the solution given, overwritten */
export function descendInPlace(solution: Float64Array, residual: Float64Array, descent: Descent): Descended {
  const {imageInto, precondition, enough, mostSteps} = descent;
  const image = new Float64Array(solution.length);
  const along = precondition(residual);
  let size = dot(residual, along);
  const down = enough(size);
  let step = 0;
  for (; step < mostSteps && size > down; ++step) {
    imageInto(image, along);
    const far = size / dot(along, image);
    for (let i = 0; i < image.length; ++i) {
      solution[i] += far * along[i];
      residual[i] -= far * image[i];
    }
    const next = precondition(residual);
    const grown = dot(residual, next);
    const turn = grown / size;
    size = grown;
    for (let i = 0; i < image.length; ++i) along[i] = next[i] + turn * along[i];
  }
  return {steps: step, left: size};
}

export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i] * b[i];
  return sum;
}
