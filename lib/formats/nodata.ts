/** Which stored value means "no value" in a grid. */

/** Beyond this, a float32 sentinel is ±FLT_MAX, however many digits its text has. */
const NEAR_FLOAT_MAX = 3.4e38;

/** Stored values from `low` to `high` mean "no value"; NaN bounds hold none. */
export interface NodataRange {
  readonly low: number;
  readonly high: number;
}

/** The number in GDAL's nodata tag; undefined when the tag is absent or unreadable. */
export function nodataNumber(text: string | undefined): number | undefined {
  const plain = text?.trim().toLowerCase();
  if (plain === undefined || plain === "") return undefined;
  if (/^[+-]?nan$/.test(plain) || plain === "-1.#ind" || plain === "1.#qnan") return Number.NaN;
  if (/^[+-]?inf(inity)?$/.test(plain))
    return plain.startsWith("-") ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  const value = Number(plain);
  return Number.isNaN(value) ? undefined : value;
}

/**
 * The stored values that a nodata number stands for. In a float32 grid the number is
 * compared as it was rounded to float32. (NaN is never a reading, whatever nodata is.)
 */
export function nodataRange(nodata: number | undefined, isFloat32: boolean): NodataRange {
  if (nodata === undefined) return {low: Number.NaN, high: Number.NaN};
  if (!isFloat32) return {low: nodata, high: nodata};
  if (nodata >= NEAR_FLOAT_MAX) return {low: NEAR_FLOAT_MAX, high: Number.POSITIVE_INFINITY};
  if (nodata <= -NEAR_FLOAT_MAX) return {low: Number.NEGATIVE_INFINITY, high: -NEAR_FLOAT_MAX};
  return {low: Math.fround(nodata), high: Math.fround(nodata)};
}
