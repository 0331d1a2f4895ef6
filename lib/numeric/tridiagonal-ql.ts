/**
 * Eigenvalues, and eigenvectors if wanted, of a symmetric tridiagonal matrix by
 * the implicit QL iteration with Wilkinson-like shifts.
 * Source: A. Dubrulle, R. Martin & J. Wilkinson, Numer. Math. 12 (1968) 377–383.
 */
import {NumericalError} from "../errors.ts";

const MAXIMUM_SWEEPS = 60;
const EPSILON = 2 ** -52;
/**
 * Absolute: the matrix has norm about one, and sweeps through its large entries keep
 * stirring the small ones by as much. A criterion relative to neighbours never ends there.
 */
const NEGLIGIBLE = 2 ** -54;

/**
 * Overwrites `d` (n diagonal entries from `start`) with the eigenvalues, in no
 * order, destroys `e` (`e[i]` couples i and i + 1), and multiplies the rows
 * start … start + n − 1 of `z`, on `width` columns, by the rotations: given the
 * identity there, row k becomes the eigenvector of `d[k]`; given one column of
 * it, that entry of the eigenvector.
 *
 * The matrix must have norm about one (the caller scales).
 *
 * @param z row-major of row length `stride`, or undefined for values alone
 * @param from first column; those of the rows by default
 * @throws {NumericalError} `numeric/no-convergence` after 60 sweeps for one value
 */
export function tridiagonalQlInPlace(
  d: Float64Array,
  e: Float64Array,
  start: number,
  n: number,
  z?: Float64Array,
  stride = 0,
  from = start,
  width = n,
): void {
  const last = start + n - 1;
  for (let l = start; l <= last; ++l) {
    for (let sweep = 0; ; ++sweep) {
      let m = l;
      for (; m < last; ++m) {
        if (Math.abs(e[m]) <= EPSILON * (Math.abs(d[m]) + Math.abs(d[m + 1])) + NEGLIGIBLE) break;
      }
      if (m === l) break;
      if (sweep === MAXIMUM_SWEEPS) {
        throw new NumericalError(
          "numeric/no-convergence",
          `Eigenvalue ${l - start} of ${n} did not settle in ${MAXIMUM_SWEEPS} QL sweeps; the matrix needs another method.`,
        );
      }
      qlSweep(d, e, l, m, from, from + width, z, stride);
    }
  }
}

function qlSweep(
  d: Float64Array,
  e: Float64Array,
  l: number,
  m: number,
  from: number,
  end: number,
  z: Float64Array | undefined,
  stride: number,
): void {
  const half = (d[l + 1] - d[l]) / (2 * e[l]);
  const root = Math.hypot(half, 1);
  let g = d[m] - d[l] + e[l] / (half + (half >= 0 ? root : -root));
  let s = 1;
  let c = 1;
  let p = 0;
  for (let i = m - 1; i >= l; --i) {
    const f = s * e[i];
    const b = c * e[i];
    const square = f * f + g * g;
    const r = square > 1e-280 ? Math.sqrt(square) : Math.hypot(f, g);
    e[i + 1] = r;
    if (r === 0) {
      d[i + 1] -= p;
      e[m] = 0;
      return;
    }
    s = f / r;
    c = g / r;
    g = d[i + 1] - p;
    const t = (d[i] - g) * s + 2 * c * b;
    p = s * t;
    d[i + 1] = g + p;
    g = c * t - b;
    if (z !== undefined) {
      const r0 = i * stride;
      const r1 = r0 + stride;
      for (let k = from; k < end; ++k) {
        const z0 = z[r0 + k];
        const z1 = z[r1 + k];
        z[r1 + k] = s * z0 + c * z1;
        z[r0 + k] = c * z0 - s * z1;
      }
    }
  }
  d[l] -= p;
  e[l] = g;
  e[m] = 0;
}
