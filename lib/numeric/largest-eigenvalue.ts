/**
 * The largest eigenvalue of a symmetric positive semidefinite map by Lanczos' method, without reorthogonalisation: copies
 * of eigenvalues do no harm to the largest one.
 * Source: Golub & Van Loan, Matrix Computations, §10.1 (from memory).
 */

/**
 * @param product the map; it may overwrite its argument, and what it returns is overwritten
 * @param n order
 * @param steps products; from below, 24 of them gave a smooth spectrum's largest to a few parts in a thousand
 */
export function largestEigenvalue(product: (vector: Float64Array) => Float64Array, n: number, steps: number): number {
  const diagonal: number[] = [];
  const beside: number[] = [];
  let before: Float64Array = new Float64Array(n);
  // Golden rotation: spread evenly, never twice the same, so that it favours no eigenvector.
  let vector = product(Float64Array.from({length: n}, (_, i) => ((i * 0.6180339887498949) % 1) - 0.5 + 1 / (1 + i)));
  let size = length(vector);
  for (let step = 0; step < Math.min(steps, n) && size > 0; ++step) {
    for (let i = 0; i < n; ++i) vector[i] /= size;
    const image = product(Float64Array.from(vector));
    let along = 0;
    for (let i = 0; i < n; ++i) along += image[i] * vector[i];
    diagonal.push(along);
    const last = beside[step - 1] ?? 0;
    for (let i = 0; i < n; ++i) image[i] -= along * vector[i] + last * before[i];
    before = vector;
    vector = image;
    size = length(vector);
    if (!(size > Number.EPSILON * along)) break;
    beside.push(size);
  }
  return largestOfTridiagonal(diagonal, beside);
}

/** By bisection on the signs of the pivots of the matrix less t. */
function largestOfTridiagonal(diagonal: readonly number[], beside: readonly number[]): number {
  let low = 0;
  let high = 0;
  diagonal.forEach((value, k) => {
    high = Math.max(high, value + (k > 0 ? beside[k - 1]! : 0) + (k + 1 < diagonal.length ? beside[k]! : 0));
  });
  const isAbove = (t: number): boolean => {
    let pivot = 1;
    for (let k = 0; k < diagonal.length; ++k) {
      pivot = diagonal[k]! - t - (k > 0 ? beside[k - 1]! ** 2 / pivot : 0);
      if (!(pivot < 0)) return false;
    }
    return true;
  };
  while (high - low > 1e-12 * high) {
    const middle = 0.5 * (low + high);
    if (isAbove(middle)) high = middle;
    else low = middle;
  }
  return high;
}

function length(vector: Float64Array): number {
  let sum = 0;
  for (const value of vector) sum += value * value;
  return Math.sqrt(sum);
}
