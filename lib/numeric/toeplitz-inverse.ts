/**
 * The inverse of a symmetric positive definite Toeplitz matrix T, from its first column x = T⁻¹e₁ alone:
 *
 *   T⁻¹ = (L(x) L(x)ᵀ − L(y) L(y)ᵀ)/x₀,    y = (0, x_{n−1}, …, x₁),   L lower-triangular Toeplitz,
 *
 * so that each solution costs a few Fourier transforms, and each diagonal of the inverse O(n). x comes from the recursion
 * of Levinson and Durbin, O(n²), or for large T from conjugate gradients that begin where the recursion ended.
 * Sources: Gohberg & Semencul, Mat. Issled. 7 (1972) 201; Golub & Van Loan, Matrix Computations, §4.7; Burg, thesis,
 * Stanford (1975) (all from memory).
 */
import FFT from "fft.js";
import {NumericalError} from "../errors.ts";

export interface ToeplitzInverse {
  readonly size: number;
  /** T⁻¹e₁. */
  readonly first: Float64Array;
  /**
   * ln det T: the sum of the logarithms of what prediction from ever more neighbours leaves. Beyond the orders that the
   * recursion serves, that no longer changes (Szegő's limit; for smooth kernels it is met within some heights).
   */
  readonly logDeterminant: number;
  /**
   * Solves T u = a and T v = b at one go, for the transforms are complex; u may be a, v may be b.
   * Each solution is corrected once by what its residual asks for, which brings it to the accuracy of the residual.
   */
  solvePairInto(u: Float64Array, v: Float64Array, a: Float64Array, b: Float64Array): void;
  /** The same without correction, at half the cost. */
  roughPairInto(u: Float64Array, v: Float64Array, a: Float64Array, b: Float64Array): void;
  /** Entries (i, i + offset) of T⁻¹, n − offset of them. */
  diagonal(offset: number): Float64Array;
}

/** Up to this order the recursion is the quicker one, and it has no steps to run out of. */
const RECURSION_SERVES = 4096;
/** Conjugate gradients end at a residual of so many ε ‖T‖ ‖x‖: rounding of the products themselves. */
const ENOUGH = 4 * Number.EPSILON;
const MOST_STEPS = 100;

/**
 * @param column first column of T
 * @throws {NumericalError} `numeric/not-positive-definite`
 */
export function toeplitzInverse(column: Float64Array, transforms = transformsFor(column.length)): ToeplitzInverse {
  const n = column.length;
  let made: PairMap | undefined;
  const product: PairMap = (...given) => {
    made ??= pairProduct(column, transforms);
    made(...given);
  };
  const recursion = byRecursion(column.subarray(0, RECURSION_SERVES));
  const first = n <= RECURSION_SERVES ? recursion.first : byGradients(column, recursion.first, product, transforms);
  if (!(first[0] > 0))
    throw new NumericalError(
      "numeric/not-positive-definite",
      `A symmetric Toeplitz matrix of order ${n} is not positive definite in double precision (first entry of the inverse ${first[0]}).`,
    );
  const apply = pairInverse(first, transforms);
  const restU = new Float64Array(n);
  const restV = new Float64Array(n);
  return {
    size: n,
    first,
    logDeterminant: recursion.logDeterminant + Math.max(0, n - RECURSION_SERVES) * Math.log(recursion.left),
    solvePairInto(u, v, a, b) {
      const rightU = u === a || v === a ? Float64Array.from(a) : a;
      const rightV = u === b || v === b ? Float64Array.from(b) : b;
      apply(u, v, rightU, rightV);
      product(restU, restV, u, v);
      for (let i = 0; i < n; ++i) {
        restU[i] = rightU[i] - restU[i];
        restV[i] = rightV[i] - restV[i];
      }
      apply(restU, restV, restU, restV);
      for (let i = 0; i < n; ++i) {
        u[i] += restU[i];
        v[i] += restV[i];
      }
    },
    roughPairInto: apply,
    diagonal(offset) {
      const entries = new Float64Array(n - offset);
      let sum = 0;
      for (let i = 0; i + offset < n; ++i) {
        const y = i === 0 ? 0 : first[n - i] * first[n - i - offset];
        sum += first[i] * first[i + offset] - y;
        entries[i] = sum / first[0];
      }
      return entries;
    },
  };
}

type PairMap = (u: Float64Array, v: Float64Array, a: Float64Array, b: Float64Array) => void;

/** Plan and scratch of the transforms, which inverses of one order may share: nothing in them outlives a product. */
export interface Transforms {
  readonly size: number;
  readonly plan: FFT;
  readonly scratch: readonly [number[], number[], number[], number[]];
}

export function transformsFor(n: number): Transforms {
  let size = 2;
  while (size < 2 * n) size *= 2;
  const plan = new FFT(size);
  return {size, plan, scratch: [doubles(size), doubles(size), doubles(size), doubles(size)]};
}

/** Complex numbers; an array of numbers that are no integers from the start is laid out once. */
const doubles = (size: number): number[] => new Array<number>(2 * size).fill(0.5);

/** T (a + ib), T in a circulant of at least twice its size. */
function pairProduct(column: Float64Array, {size, plan, scratch: [buffer, spectrum]}: Transforms): PairMap {
  const n = column.length;
  buffer.fill(0);
  for (let i = 0; i < n; ++i) {
    buffer[2 * i] = column[i];
    if (i > 0) buffer[2 * (size - i)] = column[i];
  }
  plan.transform(spectrum, buffer);
  // An even real sequence has a real spectrum.
  const symbol = Float64Array.from({length: size}, (_, k) => spectrum[2 * k]);
  return (u, v, a, b) => {
    load(buffer, a, b, n);
    plan.transform(spectrum, buffer);
    for (let k = 0; k < size; ++k) {
      const factor = symbol[k];
      spectrum[2 * k] *= factor;
      spectrum[2 * k + 1] *= factor;
    }
    plan.inverseTransform(buffer, spectrum);
    unload(u, v, buffer, n, 1);
  };
}

function load(buffer: number[], a: Float64Array, b: Float64Array, n: number): void {
  for (let i = 0; i < n; ++i) {
    buffer[2 * i] = a[i];
    buffer[2 * i + 1] = b[i];
  }
  for (let i = 2 * n; i < buffer.length; ++i) buffer[i] = 0;
}

function unload(u: Float64Array, v: Float64Array, buffer: number[], n: number, scale: number): void {
  for (let i = 0; i < n; ++i) {
    u[i] = scale * buffer[2 * i];
    v[i] = scale * buffer[2 * i + 1];
  }
}

/** T⁻¹ (a + ib) by six transforms. */
function pairInverse(first: Float64Array, {size, plan, scratch: [buffer, data, work, sum]}: Transforms): PairMap {
  const n = first.length;
  const spectrumOf = (entry: (i: number) => number): Float64Array => {
    buffer.fill(0);
    for (let i = 0; i < n; ++i) buffer[2 * i] = entry(i);
    plan.transform(work, buffer);
    return Float64Array.from(work);
  };
  const x = spectrumOf((i) => first[i]);
  const y = spectrumOf((i) => (i === 0 ? 0 : first[n - i]));
  /** L Lᵀ of one factor, its spectrum added to `sum` with a sign. */
  const add = (factor: Float64Array, sign: number): void => {
    for (let k = 0; k < 2 * size; k += 2) {
      const re = factor[k];
      const im = factor[k + 1];
      const dataRe = data[k];
      const dataIm = data[k + 1];
      work[k] = dataRe * re + dataIm * im;
      work[k + 1] = dataIm * re - dataRe * im;
    }
    plan.inverseTransform(buffer, work);
    for (let i = 2 * n; i < 2 * size; ++i) buffer[i] = 0;
    plan.transform(work, buffer);
    for (let k = 0; k < 2 * size; k += 2) {
      const re = factor[k];
      const im = factor[k + 1];
      const workRe = work[k];
      const workIm = work[k + 1];
      sum[k] += sign * (workRe * re - workIm * im);
      sum[k + 1] += sign * (workIm * re + workRe * im);
    }
  };
  return (u, v, a, b) => {
    load(buffer, a, b, n);
    plan.transform(data, buffer);
    sum.fill(0);
    add(x, 1);
    add(y, -1);
    plan.inverseTransform(buffer, sum);
    unload(u, v, buffer, n, 1 / first[0]);
  };
}

/**
 * T⁻¹e₁ by Durbin's recursion for the prediction coefficients: x = (1, a)/σ², σ² what prediction leaves. Entries are
 * changed in pairs from both ends, and products summed four abreast, for a sum waits for the one before.
 */
function byRecursion(column: Float64Array) {
  const n = column.length;
  const x = new Float64Array(n);
  x[0] = 1;
  let left = column[0];
  let logDeterminant = Math.log(left);
  for (let k = 1; k < n && left > 0; ++k) {
    let sum0 = 0;
    let sum1 = 0;
    let sum2 = 0;
    let sum3 = 0;
    let i = 0;
    for (; i + 3 < k; i += 4) {
      sum0 += x[i] * column[k - i];
      sum1 += x[i + 1] * column[k - i - 1];
      sum2 += x[i + 2] * column[k - i - 2];
      sum3 += x[i + 3] * column[k - i - 3];
    }
    for (; i < k; ++i) sum0 += x[i] * column[k - i];
    const reflection = -(sum0 + sum1 + (sum2 + sum3)) / left;
    x[k] = 0;
    for (let low = 0, high = k; low <= high; ++low, --high) {
      const fromLow = x[low];
      const fromHigh = x[high];
      x[low] = fromLow + reflection * fromHigh;
      x[high] = fromHigh + reflection * fromLow;
    }
    left *= 1 - reflection * reflection;
    logDeterminant += Math.log(left);
  }
  return {first: x.map((value) => value / left), left, logDeterminant};
}

/**
 * T⁻¹e₁ by conjugate gradients. The filter that predicts from the neighbours that the recursion reached, with nothing
 * beyond, is the first column of the inverse of another Toeplitz matrix, with the same diagonals so far (Burg's maximum
 * entropy): that inverse is the preconditioner. A handful of steps is all, however small the spectrum gets.
 */
function byGradients(
  column: Float64Array,
  short: Float64Array,
  product: PairMap,
  transforms: Transforms,
): Float64Array {
  const n = column.length;
  const solution = new Float64Array(n);
  solution.set(short);
  const smooth = pairInverse(solution.slice(), transforms);
  const residual = new Float64Array(n);
  const scratch = new Float64Array(n);
  const nothing = new Float64Array(n);
  const image = new Float64Array(n);
  const next = new Float64Array(n);
  product(image, scratch, solution, nothing);
  for (let i = 0; i < n; ++i) residual[i] = (i === 0 ? 1 : 0) - image[i];
  // Not less than the norm.
  const largest = column.reduce((sum, value) => sum + 2 * Math.abs(value), 0);
  smooth(next, scratch, residual, nothing);
  const along = Float64Array.from(next);
  let size = dot(residual, next);
  const small = (): boolean =>
    Math.sqrt(dot(residual, residual)) <= ENOUGH * largest * Math.sqrt(dot(solution, solution));
  for (let step = 0; step < MOST_STEPS && !small(); ++step) {
    product(image, scratch, along, nothing);
    const far = size / dot(along, image);
    for (let i = 0; i < n; ++i) {
      solution[i] += far * along[i];
      residual[i] -= far * image[i];
    }
    smooth(next, scratch, residual, nothing);
    const grown = dot(residual, next);
    const turn = grown / size;
    size = grown;
    for (let i = 0; i < n; ++i) along[i] = next[i] + turn * along[i];
  }
  return solution;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; ++i) sum += a[i] * b[i];
  return sum;
}
