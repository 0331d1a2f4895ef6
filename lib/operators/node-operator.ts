/**
 * What readings see of values at points of the boundary, Σ_k κ_i(t_k) v_k, and the transpose, in a time that grows with
 * readings and points themselves: near points by their kernels, made anew each time, farther ones by expansions whose
 * rest is below rounding.
 */
import {type BoxTree, boxTree} from "./box-tree.ts";
import {farField} from "./multipole.ts";
import {pointSide} from "./multipole-sides.ts";
import type {Readings} from "./readings.ts";

export interface NodeOperator {
  /** Readings of values at the points; `target` (readings) must not alias `values` (points). */
  applyInto(target: Float64Array, values: Float64Array): Float64Array;
  /** Readings → points. */
  adjointInto(target: Float64Array, data: Float64Array): Float64Array;
}

/** What an expansion may leave out, over the kernel at the distance of the boxes. */
const LEFT_OUT = 1e-14;
/** Points a leaf: near kernels are weighed against expansions. A heuristic. */
const POINTS_A_LEAF = 32;

/** @param x chainage of the points, increasing, m; @param y their heights, m */
export function nodeOperator(readings: Readings, x: Float64Array, y: Float64Array): NodeOperator {
  const points = {count: x.length, from: x, to: x, centre: x, yFrom: y, yTo: y};
  const tree = boxTree(readings, points, POINTS_A_LEAF * medianStep(x), LEFT_OUT);
  const far = farField(readings, tree, pointSide(x, y, tree));
  const near = nearField(readings, x, y, tree);
  return {
    applyInto(target, values) {
      far.applyInto(target, values);
      near.addTo(target, values);
      return target;
    },
    adjointInto(target, data) {
      far.adjointInto(target, data);
      near.addBackTo(target, data);
      return target;
    },
  };
}

/** Half of the points are closer to the next than this, m. */
function medianStep(x: Float64Array): number {
  const steps = x.subarray(1).map((value, k) => value - x[k]);
  return steps.sort()[steps.length >> 1] ?? 0;
}

/** Kernels between a leaf's readings and the points of it and its two neighbours; as `kernelAt`, without a call. */
function nearField(
  {x, z, aRe, aIm, order}: Readings,
  at: Float64Array,
  y: Float64Array,
  {leaves, readingFrom, readingAt, sourceFrom}: BoxTree,
) {
  const each = (visit: (i: number, low: number, high: number) => void): void => {
    for (let b = 0; b < leaves; ++b) {
      const low = sourceFrom[Math.max(b - 1, 0)];
      const high = sourceFrom[Math.min(b + 2, leaves)];
      for (let r = readingFrom[b]; r < readingFrom[b + 1]; ++r) visit(readingAt[r], low, high);
    }
  };
  return {
    addTo(target: Float64Array, values: Float64Array): void {
      each((i, low, high) => {
        let re = 0;
        let im = 0;
        for (let k = low; k < high; ++k) {
          const s = at[k] - x[i];
          const drop = z[i] - y[k];
          const inverse = 1 / (s * s + drop * drop);
          const p = s * inverse;
          const q = drop * inverse;
          if (order[i] === 0) {
            re += p * values[k];
            im += q * values[k];
          } else {
            re += (p * p - q * q) * values[k];
            im += 2 * p * q * values[k];
          }
        }
        target[i] += aRe[i] * re - aIm[i] * im;
      });
    },
    addBackTo(target: Float64Array, data: Float64Array): void {
      each((i, low, high) => {
        const re = aRe[i] * data[i];
        const im = aIm[i] * data[i];
        for (let k = low; k < high; ++k) {
          const s = at[k] - x[i];
          const drop = z[i] - y[k];
          const inverse = 1 / (s * s + drop * drop);
          const p = s * inverse;
          const q = drop * inverse;
          target[k] += order[i] === 0 ? re * p - im * q : re * (p * p - q * q) - 2 * im * p * q;
        }
      });
    },
  };
}
