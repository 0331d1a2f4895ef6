/**
 * A c = v by generalised minimal residuals: ‖v − A c‖ is least over what A makes of v again and again. A need not be
 * symmetric; a preconditioner is part of A and v.
 * Source: Saad & Schultz, SIAM J. Sci. Stat. Comput. 7 (1986) 856 (from memory).
 */

export interface Steps {
  /** Steps end when ‖v − A c‖ is down to this. */
  readonly enough: number;
  readonly mostSteps: number;
}

export interface Reached {
  readonly solution: Float64Array;
  readonly steps: number;
  /** ‖v − A c‖, as the steps count it. */
  readonly left: number;
}

/** Directions kept before steps begin anew from what was reached: memory. */
const KEPT = 60;

/**
 * @param apply A c, a new list
 * @param start a first c, overwritten; zero where absent
 */
export function minimalResidual(
  apply: (vector: Float64Array) => Float64Array,
  vector: Float64Array,
  {enough, mostSteps}: Steps,
  start?: Float64Array,
): Reached {
  const solution = start ?? new Float64Array(vector.length);
  let residual = vector;
  let steps = 0;
  for (let begun = start !== undefined; ; begun = true) {
    if (begun) {
      const image = apply(solution);
      residual = vector.map((value, i) => value - image[i]);
    }
    const {count, left} = improveInPlace(solution, residual, apply, enough, Math.min(KEPT, mostSteps - steps));
    steps += count;
    if (!(left > enough) || count < KEPT) return {solution, steps, left};
  }
}

/** Adds to a solution what so many steps from its residual give. */
function improveInPlace(
  solution: Float64Array,
  residual: Float64Array,
  apply: (vector: Float64Array) => Float64Array,
  enough: number,
  most: number,
): {readonly count: number; readonly left: number} {
  const size = Math.sqrt(dot(residual, residual));
  if (!(size > 0)) return {count: 0, left: size};
  const basis: Float64Array[] = [residual.map((value) => value / size)];
  /** Columns of the triangular factor, its rotations, and the rotated right-hand side. */
  const columns: number[][] = [];
  const turns: {readonly cos: number; readonly sin: number}[] = [];
  const right = [size];
  for (let k = 0; k < most && Math.abs(right[k]) > enough; ++k) {
    const image = apply(basis[k]);
    const column: number[] = [];
    for (const earlier of basis) {
      const share = dot(image, earlier);
      column.push(share);
      for (let i = 0; i < image.length; ++i) image[i] -= share * earlier[i];
    }
    const rest = Math.sqrt(dot(image, image));
    turns.forEach(({cos, sin}, j) => {
      [column[j], column[j + 1]] = [cos * column[j] + sin * column[j + 1], cos * column[j + 1] - sin * column[j]];
    });
    const length = Math.hypot(column[k], rest);
    if (!(length > 0)) break;
    const turn = {cos: column[k] / length, sin: rest / length};
    turns.push(turn);
    column[k] = length;
    columns.push(column);
    right.push(-turn.sin * right[k]);
    right[k] *= turn.cos;
    if (!(rest > 0)) break;
    for (let i = 0; i < image.length; ++i) image[i] /= rest;
    basis.push(image);
  }
  const count = columns.length;
  const weights = new Float64Array(count);
  for (let k = count - 1; k >= 0; --k) {
    let rest = right[k];
    for (let j = k + 1; j < count; ++j) rest -= columns[j][k] * weights[j];
    weights[k] = rest / columns[k][k];
    for (let i = 0; i < solution.length; ++i) solution[i] += weights[k] * basis[k][i];
  }
  return {count, left: Math.abs(right[count])};
}

export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i] * b[i];
  return sum;
}
