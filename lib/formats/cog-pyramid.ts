/**
 * The levels of a cloud-optimised GeoTIFF while rows come in: the grid itself and its
 * overviews, each half the size of the one before. A level holds one row of tiles, so
 * that memory is about 2 · tile · width · bands floats, whatever the height.
 */

export interface Level {
  readonly width: number;
  readonly height: number;
  readonly tilesAcross: number;
  /** tile × width × bands, pixel by pixel; NaN where there is no value. */
  readonly rows: Float32Array;
  /** Rows held in `rows`. */
  held: number;
  /** Rows received altogether. */
  received: number;
}

/** Sizes of the grid and its overviews: halved, rounded up, until neither side exceeds `least`. */
export function levelSizes(width: number, height: number, least: number): (readonly [width: number, height: number])[] {
  const sizes: (readonly [number, number])[] = [[width, height]];
  let [w, h] = [width, height];
  while (Math.max(w, h) > least) {
    [w, h] = [Math.ceil(w / 2), Math.ceil(h / 2)];
    sizes.push([w, h]);
  }
  return sizes;
}

export const makeLevels = (sizes: readonly (readonly [number, number])[], bands: number, tile: number): Level[] =>
  sizes.map(([width, height]) => ({
    width,
    height,
    tilesAcross: Math.ceil(width / tile),
    rows: new Float32Array(tile * width * bands),
    held: 0,
    received: 0,
  }));

/**
 * Takes one row into level `index` and, when a pair is complete or the level ends with
 * half a pair, its average into the next level. No level may be full beforehand; a full
 * row of tiles must be emptied before the next call. `tile` must be even.
 *
 * @param row width × bands, pixel by pixel; may not alias the level's own rows
 */
export function pushRow(levels: readonly Level[], index: number, row: Float32Array, bands: number): void {
  const level = levels[index]!;
  const size = level.width * bands;
  level.rows.set(row, level.held * size);
  ++level.held;
  ++level.received;
  const next = levels[index + 1];
  if (next === undefined) return;
  const isSecond = level.received % 2 === 0;
  if (!isSecond && level.received < level.height) return;
  // The first of a pair is still held: a row of tiles is emptied only after an even number of rows, or the last.
  const first = level.rows.subarray((level.held - (isSecond ? 2 : 1)) * size, (level.held - (isSecond ? 1 : 0)) * size);
  const average = new Float32Array(next.width * bands);
  averageInto(average, first, isSecond ? row : first, level.width, bands);
  pushRow(levels, index + 1, average, bands);
}

/** Means of 2 × 2 pixels, or of those of them that exist and have a value; NaN where none has. */
function averageInto(
  target: Float32Array,
  upper: Float32Array,
  lower: Float32Array,
  width: number,
  bands: number,
): void {
  const columns = Math.ceil(width / 2);
  for (let column = 0; column < columns; ++column)
    for (let band = 0; band < bands; ++band) {
      const left = 2 * column * bands + band;
      // At an odd width the last column stands for both, which leaves the mean as it is.
      const right = 2 * column + 1 < width ? left + bands : left;
      let sum = 0;
      let count = 0;
      let value = upper[left]!;
      if (!Number.isNaN(value)) {
        sum += value;
        ++count;
      }
      value = upper[right]!;
      if (!Number.isNaN(value)) {
        sum += value;
        ++count;
      }
      value = lower[left]!;
      if (!Number.isNaN(value)) {
        sum += value;
        ++count;
      }
      value = lower[right]!;
      if (!Number.isNaN(value)) {
        sum += value;
        ++count;
      }
      target[column * bands + band] = count === 0 ? Number.NaN : sum / count;
    }
}
