/** Small statistics of series: Pearson correlation, median, median absolute deviation, interpolation. */

/** Pearson correlation of two series of one length; NaN when either is constant or shorter than two. */
export function correlation(x: Float64Array, y: Float64Array): number {
  const n = x.length;
  let meanX = 0;
  let meanY = 0;
  for (let i = 0; i < n; ++i) {
    meanX += x[i] / n;
    meanY += y[i] / n;
  }
  let xx = 0;
  let yy = 0;
  let xy = 0;
  for (let i = 0; i < n; ++i) {
    const dx = x[i] - meanX;
    const dy = y[i] - meanY;
    xx += dx * dx;
    yy += dy * dy;
    xy += dx * dy;
  }
  return xx > 0 && yy > 0 ? xy / Math.sqrt(xx) / Math.sqrt(yy) : Number.NaN;
}

/** The middle value, or the mean of the two middle ones; NaN for none. `values` is not modified. */
export function median(values: Float64Array): number {
  const n = values.length;
  if (n === 0) return Number.NaN;
  const sorted = values.slice().sort();
  const middle = n >> 1;
  return n % 2 === 1 ? sorted[middle] : 0.5 * sorted[middle - 1] + 0.5 * sorted[middle];
}

/** Median of |x − median x|; times 1.4826 it estimates the standard deviation of normal noise. */
export function medianAbsoluteDeviation(values: Float64Array): number {
  const middle = median(values);
  return median(values.map((value) => Math.abs(value - middle)));
}

/**
 * Linear interpolation of (x, y) at `at`, NaN outside.
 *
 * @param x increasing, one length with `y`
 */
export function interpolateInto(
  target: Float64Array,
  x: Float64Array,
  y: Float64Array,
  at: Float64Array,
): Float64Array {
  const last = x.length - 1;
  for (let i = 0; i < at.length; ++i) {
    const t = at[i];
    if (!(t >= x[0] && t <= x[last])) {
      target[i] = Number.NaN;
      continue;
    }
    let low = 0;
    let high = last;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (x[middle] <= t) low = middle;
      else high = middle;
    }
    const width = x[high] - x[low];
    target[i] = width > 0 ? y[low] + ((t - x[low]) / width) * (y[high] - y[low]) : y[low];
  }
  return target;
}
