/**
 * Modes of the windows of a level, even line that are like no other: at its ends and beside gaps of the support. The Gram
 * matrix is of low rank to what is asked of it, and only that many of its columns are formed, G = VVᵀ + E, E positive
 * semidefinite. What a bias misses by E is M² cᵀEc ≤ M² tr E ‖c‖², below `LEFT` of the floor of modes times M²: 1e-7 of s².
 *
 * Where line and support are their own mirror image, so are the windows of the two ends, for the vertical component.
 */
import {crossProductInto, multiplyInto} from "../numeric/matmul.ts";
import {symmetricEigen} from "../numeric/symmetric-eigen.ts";
import {lowRank} from "../numeric/toeplitz-less.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {LevelLine} from "../operators/level-cells.ts";
import {pairOver} from "../potential/pair.ts";
import {type DataModes, overRoots, USABLE} from "../spectral/singular-system.ts";
import type {IntervalStore} from "./interval-store.ts";

/** The trace of what is left, over the floor of modes; and what closed forms round, over the diagonal. */
const LEFT = 1e-2;
const ROUNDED = 1e-13;
/** How far a line may be from its mirror image, in spacings: as far as from even. */
const SYMMETRIC = 1e-6;

/** @param number of the line's geometry in the store */
export function windowModes(
  continuum: Continuum,
  {spacing}: LevelLine,
  floor: number,
  store: IntervalStore,
  number: number,
): ((first: number, last: number) => DataModes) | undefined {
  const {x, count, support, poles, noise, aRe, order} = continuum;
  if (order[0] !== 0 || aRe[0] !== 0) return undefined;
  const scale = 1 / noise[0] ** 2;
  const turned = x[0] + x[count - 1];
  const isSymmetric = support.every(({from}, k) => {
    const other = support[support.length - 1 - k]!;
    return Math.abs(from + other.to - turned) <= SYMMETRIC * spacing;
  });
  const made = (first: number, last: number): DataModes => {
    const rows = last - first;
    const own = poles.slice(first, last);
    const diagonal = Float64Array.from(own, (pole) => scale * pairOver(support, pole, pole));
    const most = diagonal.reduce((a, b) => Math.max(a, b));
    const {columns} = lowRank(
      diagonal,
      (target, j) => {
        for (let i = 0; i < rows; ++i) target[i] = scale * pairOver(support, own[i]!, own[j]!);
        return target;
      },
      Math.max((LEFT * floor) / rows, ROUNDED * most),
    );
    const rank = columns.length;
    const factor = new Float64Array(rank * rows);
    const upright = new Float64Array(rows * rank);
    columns.forEach((column, k) => {
      factor.set(column, k * rows);
      for (let i = 0; i < rows; ++i) upright[i * rank + k] = column[i]!;
    });
    const gram = crossProductInto(new Float64Array(rank * rank), upright, rows, rank);
    const {values, vectors} = symmetricEigen(gram, rank, floor);
    const least = Math.max(floor, USABLE * Math.max(values[0] ?? 0, 0));
    let kept = 0;
    while (kept < rank && values[kept]! > least) ++kept;
    const eigenvalues = values.slice(0, kept);
    const left = multiplyInto(
      new Float64Array(kept * rows),
      vectors.subarray(0, kept * rank),
      factor,
      kept,
      rank,
      rows,
    );
    return {rows, count: kept, eigenvalues, left: overRoots(left, rows, eigenvalues)};
  };
  const modes = (first: number, last: number): DataModes =>
    store.modes(`${number} ${floor} ${first}-${last}`, () =>
      isSymmetric && last === count && first > 0 ? mirrored(modes(0, last - first)) : made(first, last),
    );
  return modes;
}

const mirrored = ({left, rows, ...rest}: DataModes): DataModes => {
  const turned = Float64Array.from(left);
  for (let at = 0; at < turned.length; at += rows) turned.subarray(at, at + rows).reverse();
  return {...rest, rows, left: turned};
};
