/**
 * Fewer points, same picture: a pixel column holds no more of a curve than where it enters,
 * its least and greatest value, and where it leaves.
 */

export interface Curve {
  readonly x: readonly number[];
  readonly y: readonly number[];
}

/**
 * First, least, greatest and last point of every pixel column, in their order.
 * @param x increasing positions, px
 * @param y ordinates, px; NaN interrupts the curve and is kept
 */
export function decimatedCurve(x: ArrayLike<number>, y: ArrayLike<number>): Curve {
  const xs: number[] = [];
  const ys: number[] = [];
  const keep = (i: number): void => {
    xs.push(x[i]!);
    ys.push(y[i]!);
  };
  let i = 0;
  while (i < x.length) {
    if (Number.isNaN(y[i]!)) {
      if (ys.length > 0 && !Number.isNaN(ys.at(-1)!)) keep(i);
      ++i;
      continue;
    }
    const column = Math.floor(x[i]!);
    const first = i;
    let least = i;
    let greatest = i;
    while (i < x.length && Math.floor(x[i]!) === column && !Number.isNaN(y[i]!)) {
      if (y[i]! < y[least]!) least = i;
      if (y[i]! > y[greatest]!) greatest = i;
      ++i;
    }
    const last = i - 1;
    let previous = -1;
    for (const k of [first, Math.min(least, greatest), Math.max(least, greatest), last]) {
      if (k !== previous) keep(k);
      previous = k;
    }
  }
  return {x: xs, y: ys};
}

export interface Band {
  readonly x: readonly number[];
  readonly low: readonly number[];
  readonly high: readonly number[];
}

/** The outermost edges of a band in every pixel column; NaN interrupts it and is kept. */
export function decimatedBand(x: ArrayLike<number>, low: ArrayLike<number>, high: ArrayLike<number>): Band {
  const xs: number[] = [];
  const lows: number[] = [];
  const highs: number[] = [];
  const absent = (i: number): boolean => Number.isNaN(low[i]!) || Number.isNaN(high[i]!);
  let i = 0;
  while (i < x.length) {
    const column = Math.floor(x[i]!);
    const first = i;
    if (absent(i)) {
      xs.push(x[i]!);
      lows.push(Number.NaN);
      highs.push(Number.NaN);
      ++i;
      continue;
    }
    let least = low[i]!;
    let greatest = high[i]!;
    while (i < x.length && Math.floor(x[i]!) === column && !absent(i)) {
      least = Math.min(least, low[i]!);
      greatest = Math.max(greatest, high[i]!);
      ++i;
    }
    xs.push((x[first]! + x[i - 1]!) / 2);
    lows.push(least);
    highs.push(greatest);
  }
  return {x: xs, low: lows, high: highs};
}
