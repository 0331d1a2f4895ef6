/**
 * Toeplitz products in O(n log n): T is set into a circulant matrix of twice
 * the size, which the Fourier transform diagonalises.
 * Source: Golub & Van Loan, Matrix Computations, §4.8.
 *
 * fft.js is given plain arrays throughout: mixing them with typed arrays in one
 * process slows it down about twice (measured).
 */
import FFT from "fft.js";

export interface ToeplitzProduct {
  readonly rows: number;
  readonly columns: number;
  /** y = T x; y of length `rows`, x of length `columns`; y may be x. */
  readonly applyInto: (y: Float64Array, x: Float64Array) => Float64Array;
  /** y = Tᵀ x; y of length `columns`, x of length `rows`; y may be x. */
  readonly applyTransposeInto: (y: Float64Array, x: Float64Array) => Float64Array;
}

/**
 * The product with T, T_ij = firstColumn[i − j] for i ≥ j, firstRow[j − i] for j ≥ i.
 * The two share their first entry; that of the column counts. The plan and its
 * workspace belong to the object returned, which therefore serves one caller at a time.
 *
 * Error of an entry: a few ε · log₂ n · max|T| · Σ|x|, absolute, not relative to that entry.
 */
export function toeplitzProduct(firstColumn: Float64Array, firstRow: Float64Array): ToeplitzProduct {
  const rows = firstColumn.length;
  const columns = firstRow.length;
  let size = 2;
  while (size < rows + columns - 1) size *= 2;
  const plan = new FFT(size);
  const buffer: number[] = new Array<number>(size).fill(0);
  const symbol = plan.createComplexArray() as number[];
  const spectrum = plan.createComplexArray() as number[];
  const result = plan.createComplexArray() as number[];
  for (let i = 0; i < rows; ++i) buffer[i] = firstColumn[i];
  for (let j = 1; j < columns; ++j) buffer[size - j] = firstRow[j];
  plan.realTransform(symbol, buffer);
  plan.completeSpectrum(symbol);

  const apply = (y: Float64Array, x: Float64Array, inputs: number, outputs: number, sign: number): Float64Array => {
    for (let i = 0; i < inputs; ++i) buffer[i] = x[i];
    for (let i = inputs; i < size; ++i) buffer[i] = 0;
    plan.realTransform(spectrum, buffer);
    plan.completeSpectrum(spectrum);
    for (let i = 0; i < 2 * size; i += 2) {
      const re = spectrum[i];
      const im = spectrum[i + 1];
      const sr = symbol[i];
      const si = sign * symbol[i + 1];
      spectrum[i] = re * sr - im * si;
      spectrum[i + 1] = re * si + im * sr;
    }
    plan.inverseTransform(result, spectrum);
    for (let i = 0; i < outputs; ++i) y[i] = result[2 * i];
    return y;
  };
  return {
    rows,
    columns,
    applyInto: (y, x) => apply(y, x, columns, rows, 1),
    applyTransposeInto: (y, x) => apply(y, x, rows, columns, -1),
  };
}
