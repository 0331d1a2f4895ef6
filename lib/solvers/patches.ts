/**
 * Nearly (G + a)⁻¹ on a long line: each reading is answered by the inverse on a window well around it.
 *
 * G + a inverts a smoothing operator: its inverse reaches some heights and hardly beyond, whatever the heights, spacings
 * and components of the readings. What a window is given must not be tapered: the kinks of a taper are short waves, which
 * the inverse raises by λ_1/a. So each window is given its readings as they are, and of its answer only the patch that is
 * its own is kept. That makes P unsymmetric: steps with it are those of `minimal-residual.ts`, taken from the left, for
 * P (G + a) is near one itself while (G + a) P is so only up to a change of scale by λ_1/a.
 * Source: Cai & Sarkis, SIAM J. Sci. Comput. 21 (1999) 792 (from memory).
 */
import {matVecInto, transposedMatVecInto} from "../numeric/matmul.ts";
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

/**
 * P r for any a; a new list.
 * @param x chainage of the readings, increasing
 * @param patches side by side from the first reading to the last
 */
export function patchedInverse(
  x: Float64Array,
  patches: readonly Patch[],
): (residual: Float64Array, a: number) => Float64Array {
  const own = ownReadings(x, patches);
  return (residual, a) => {
    const result = new Float64Array(residual.length);
    patches.forEach(({block: {first, last, modes}}, k) => {
      const part = residual.subarray(first, last);
      const on = matVecInto(new Float64Array(modes.count), modes.left, part, modes.count, last - first);
      for (let j = 0; j < modes.count; ++j) on[j] *= 1 / (modes.eigenvalues[j] + a) - 1 / a;
      const back = transposedMatVecInto(new Float64Array(last - first), modes.left, on, modes.count, last - first);
      for (let i = own[k]; i < own[k + 1]; ++i) result[i] = back[i - first] + residual[i] / a;
    });
    return result;
  };
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
