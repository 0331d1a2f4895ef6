/**
 * Toeplitz products in O(n log n): T is set into a circulant matrix of twice
 * the size, which the Fourier transform diagonalises.
 * Source: Golub & Van Loan, Matrix Computations, §4.8.
 *
 * A real sequence of even length is transformed as a complex one of half the length, its even entries the real parts
 * (Cooley, Lewis & Welch, J. Sound Vib. 12 (1970) 315, from memory).
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
  let half = 2;
  while (2 * half < rows + columns - 1) half *= 2;
  const size = 2 * half;
  const plan = new FFT(half);
  const buffer = plan.createComplexArray() as number[];
  const spectrum = plan.createComplexArray() as number[];
  // e^(−2πik/size), k up to a quarter turn.
  const cosine = Float64Array.from({length: (half >> 1) + 1}, (_, k) => Math.cos((2 * Math.PI * k) / size));
  const sine = Float64Array.from({length: (half >> 1) + 1}, (_, k) => -Math.sin((2 * Math.PI * k) / size));

  for (let i = 0; i < rows; ++i) buffer[i] = firstColumn[i];
  for (let i = rows; i < size; ++i) buffer[i] = 0;
  for (let j = 1; j < columns; ++j) buffer[size - j] = firstRow[j];
  plan.transform(spectrum, buffer);
  const symbolRe = new Float64Array(half + 1);
  const symbolIm = new Float64Array(half + 1);
  symbolRe[0] = spectrum[0] + spectrum[1];
  symbolRe[half] = spectrum[0] - spectrum[1];
  for (let k = 1; 2 * k <= half; ++k) {
    const [a, b] = [2 * k, 2 * (half - k)];
    const [evenRe, evenIm] = [0.5 * (spectrum[a] + spectrum[b]), 0.5 * (spectrum[a + 1] - spectrum[b + 1])];
    const [oddRe, oddIm] = [0.5 * (spectrum[a + 1] + spectrum[b + 1]), 0.5 * (spectrum[b] - spectrum[a])];
    const turnedRe = cosine[k] * oddRe - sine[k] * oddIm;
    const turnedIm = cosine[k] * oddIm + sine[k] * oddRe;
    symbolRe[k] = evenRe + turnedRe;
    symbolIm[k] = evenIm + turnedIm;
    symbolRe[half - k] = evenRe - turnedRe;
    symbolIm[half - k] = turnedIm - evenIm;
  }

  const apply = (y: Float64Array, x: Float64Array, inputs: number, outputs: number, sign: number): Float64Array => {
    for (let i = 0; i < inputs; ++i) buffer[i] = x[i];
    for (let i = inputs; i < size; ++i) buffer[i] = 0;
    plan.transform(spectrum, buffer);
    const [first, second] = [spectrum[0], spectrum[1]];
    const [sum, difference] = [(first + second) * symbolRe[0], (first - second) * symbolRe[half]];
    spectrum[0] = 0.5 * (sum + difference);
    spectrum[1] = 0.5 * (sum - difference);
    for (let k = 1; 2 * k <= half; ++k) {
      const a = 2 * k;
      const b = 2 * (half - k);
      const evenRe = 0.5 * (spectrum[a] + spectrum[b]);
      const evenIm = 0.5 * (spectrum[a + 1] - spectrum[b + 1]);
      const oddRe = 0.5 * (spectrum[a + 1] + spectrum[b + 1]);
      const oddIm = 0.5 * (spectrum[b] - spectrum[a]);
      const c = cosine[k];
      const s = sine[k];
      const turnedRe = c * oddRe - s * oddIm;
      const turnedIm = c * oddIm + s * oddRe;
      // Entry k of the whole spectrum, and the conjugate of entry half − k, each times its symbol.
      const lowRe = evenRe + turnedRe;
      const lowIm = evenIm + turnedIm;
      const highRe = evenRe - turnedRe;
      const highIm = evenIm - turnedIm;
      const lowIs = sign * symbolIm[k];
      const highIs = -sign * symbolIm[half - k];
      const pRe = lowRe * symbolRe[k] - lowIm * lowIs;
      const pIm = lowRe * lowIs + lowIm * symbolRe[k];
      const qRe = highRe * symbolRe[half - k] - highIm * highIs;
      const qIm = highRe * highIs + highIm * symbolRe[half - k];
      const backRe = 0.5 * (pRe + qRe);
      const backIm = 0.5 * (pIm + qIm);
      const restRe = 0.5 * (pRe - qRe);
      const restIm = 0.5 * (pIm - qIm);
      const partRe = c * restRe + s * restIm;
      const partIm = c * restIm - s * restRe;
      spectrum[a] = backRe - partIm;
      spectrum[a + 1] = backIm + partRe;
      spectrum[b] = backRe + partIm;
      spectrum[b + 1] = partRe - backIm;
    }
    plan.inverseTransform(buffer, spectrum);
    for (let i = 0; i < outputs; ++i) y[i] = buffer[i];
    return y;
  };
  return {
    rows,
    columns,
    applyInto: (y, x) => apply(y, x, columns, rows, 1),
    applyTransposeInto: (y, x) => apply(y, x, rows, columns, -1),
  };
}
