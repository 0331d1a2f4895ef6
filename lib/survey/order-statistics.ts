/** Medians and extremes of short columns. */

/** The middle value, or the mean of the two; NaN for no values. Leaves `values` as it is. */
export function median(values: ArrayLike<number>): number {
  const sorted = new Float64Array(values).sort();
  const half = sorted.length >> 1;
  if (sorted.length === 0) return NaN;
  return sorted.length % 2 === 1 ? sorted[half]! : (sorted[half - 1]! + sorted[half]!) / 2;
}

export interface Spread {
  readonly least: number;
  readonly median: number;
  readonly greatest: number;
}

/** Least, middle and greatest; NaN for no values. */
export function spread(values: ArrayLike<number>): Spread {
  const sorted = new Float64Array(values).sort();
  if (sorted.length === 0) return {least: NaN, median: NaN, greatest: NaN};
  return {least: sorted[0]!, median: median(sorted), greatest: sorted[sorted.length - 1]!};
}

/** Pearson's correlation of two columns as long as each other; NaN when one is constant. */
export function correlation(a: ArrayLike<number>, b: ArrayLike<number>): number {
  let meanA = 0;
  let meanB = 0;
  for (let i = 0; i < a.length; ++i) {
    meanA += a[i]! / a.length;
    meanB += b[i]! / a.length;
  }
  let aa = 0;
  let bb = 0;
  let ab = 0;
  for (let i = 0; i < a.length; ++i) {
    const p = a[i]! - meanA;
    const q = b[i]! - meanB;
    aa += p * p;
    bb += q * q;
    ab += p * q;
  }
  return aa > 0 && bb > 0 ? ab / Math.sqrt(aa * bb) : NaN;
}
