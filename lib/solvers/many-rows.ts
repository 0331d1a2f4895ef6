/**
 * Level lines of one geometry at one multiplier, as many as come: what does not depend on their readings is worked out
 * before, and a line costs a few transforms. With the words of `level-system.ts`, c = M d and r = αc:
 *
 *   ‖r‖² = α² cᵀc,   ‖f‖² = cᵀBBᵀc = cᵀd − α cᵀc,
 *
 * so that f itself is needed only where it is asked for.
 */
import {choleskyInPlace, choleskySolveInto} from "../numeric/cholesky.ts";
import {shiftedInverse} from "../numeric/toeplitz-less.ts";
import type {LevelCells} from "../operators/level-cells.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import {whatIsMissing} from "./level-system.ts";

interface SolvedRow {
  /** c. */
  readonly weights: Float64Array;
  readonly norm: number;
  readonly misfit: number;
}

export interface ManyRows {
  readonly degreesOfFreedom: number;
  /** @param rows Q d/σ of each, Q what takes the regional out; two at a time cost as much as one */
  solve(rows: readonly Float64Array[]): SolvedRow[];
}

/** @param basis of the regional, in whitened readings */
export function manyRows(cells: LevelCells, {terms, count, rows}: RegionalBasis, alpha: number): ManyRows {
  const n = cells.readings;
  const diagonals = cells.endless(n);
  const inverse = shiftedInverse(diagonals, whatIsMissing(cells, diagonals), alpha);
  const regional = Array.from({length: terms}, (_, t) => rows.subarray(t * count, (t + 1) * count));
  const solved = inverse.solve(regional);
  const size = new Float64Array(terms * terms);
  const squares = new Float64Array(terms * terms);
  for (let t = 0; t < terms; ++t)
    for (let u = 0; u < terms; ++u) {
      size[t * terms + u] = dot(regional[t]!, solved[u]!);
      squares[t * terms + u] = dot(solved[t]!, solved[u]!);
    }
  choleskyInPlace(size, terms);
  const shares = new Float64Array(terms);
  let traceTaken = 0;
  for (let u = 0; u < terms; ++u) {
    for (let t = 0; t < terms; ++t) shares[t] = squares[t * terms + u]!;
    traceTaken += choleskySolveInto(shares, size, shares, terms)[u]!;
  }
  return {
    degreesOfFreedom: n - terms - alpha * (inverse.trace - traceTaken),
    solve: (data) =>
      inverse.rough(data).map((weights, k) => {
        for (let t = 0; t < terms; ++t) shares[t] = dot(regional[t]!, weights);
        choleskySolveInto(shares, size, shares, terms);
        for (let t = 0; t < terms; ++t) {
          const share = shares[t]!;
          const column = solved[t]!;
          for (let i = 0; i < n; ++i) weights[i]! -= share * column[i]!;
        }
        const square = dot(weights, weights);
        return {
          weights,
          misfit: alpha * alpha * square,
          norm: Math.sqrt(Math.max(dot(weights, data[k]!) - alpha * square, 0)),
        };
      }),
  };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i]! * b[i]!;
  return sum;
}
