/** A boundary that rises and falls: a broken line over chainage. */

/** Heights y at increasing chainages x, m above the datum of the section; straight between, level beyond the ends. */
export interface BoundaryLine {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/** Height of the boundary at chainage x; zero on a flat one. */
export function boundaryAt(boundary: BoundaryLine | undefined, x: number): number {
  if (boundary === undefined) return 0;
  const {x: xs, y} = boundary;
  const last = xs.length - 1;
  if (!(x > xs[0])) return y[0];
  if (x >= xs[last]) return y[last];
  let low = 0;
  let high = last;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (xs[middle] <= x) low = middle;
    else high = middle;
  }
  const share = (x - xs[low]) / (xs[high] - xs[low]);
  return y[low] + share * (y[high] - y[low]);
}

/** The breaks of the boundary strictly inside (from, to). */
export function breaksWithin(boundary: BoundaryLine | undefined, from: number, to: number): number[] {
  if (boundary === undefined) return [];
  const {x} = boundary;
  let low = 0;
  let high = x.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (x[middle] > from) high = middle;
    else low = middle + 1;
  }
  const breaks: number[] = [];
  for (let k = low; k < x.length && x[k] < to; ++k) breaks.push(x[k]);
  return breaks;
}
