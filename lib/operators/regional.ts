/**
 * The regional polynomial as an orthonormal basis over the whitened readings; it is projected out, not removed
 * beforehand. Every channel has a polynomial of its own: instruments differ in level and drift.
 */

import {whitened} from "./correlated-noise.ts";
import type {Readings} from "./readings.ts";

/** `degree + 1` a channel: orthonormal rows of length `count`, row-major; no rows for degree −1. */
export interface RegionalBasis {
  readonly terms: number;
  readonly count: number;
  readonly rows: Float64Array;
}

/**
 * Legendre polynomials on the span of the readings of each channel, orthonormalised by Gram–Schmidt done twice
 * (Giraud et al., "twice is enough", Numer. Math. 101 (2005) 87, from memory). White noise is one number a channel, so
 * that whitening does not change the span; where it is correlated the polynomials are whitened first. A term that the readings cannot tell from the lower ones is left out.
 *
 * @param degree −1 for none
 * @param channels that have a regional: the first so many; ties have none
 */
export function regionalBasis(
  readings: Readings,
  degree: number,
  channels = readings.channel.reduce((most, k) => Math.max(most, k), 0) + 1,
): RegionalBasis {
  const {x, channel, count, correlated} = readings;
  const rows: Float64Array[] = [];
  for (let k = 0; k < channels; ++k) {
    let low = Infinity;
    let high = -Infinity;
    for (let i = 0; i < count; ++i) {
      if (channel[i] !== k) continue;
      low = Math.min(low, x[i]);
      high = Math.max(high, x[i]);
    }
    const half = 0.5 * (high - low) || 1;
    const own: Float64Array[] = [];
    for (let term = 0; term <= degree; ++term) {
      const polynomial = x.map((chainage, i) =>
        channel[i] === k ? legendre(term, (chainage - 0.5 * (low + high)) / half) : 0,
      );
      const row = correlated ? whitened(polynomial, readings) : polynomial;
      // 1e-10 of its own length: far above rounding (ε√n), far below any real polynomial on distinct stations.
      if (orthonormalise(row, own, 1e-10)) own.push(row);
    }
    rows.push(...own);
  }
  const flat = new Float64Array(rows.length * count);
  rows.forEach((row, k) => {
    flat.set(row, k * count);
  });
  return {terms: rows.length, count, rows: flat};
}

/**
 * An orthonormal basis of what the regional can be on the stations `first … last − 1` alone.
 * A short stretch of a long line sees its terms as nearly alike: a cubic on a hundredth differs by 1e-6 of its length
 * from the lower ones. Only what is rounding, 1e-12, is left out, since what is left in is not blind to the regional.
 */
export function basisWithin({terms, count, rows}: RegionalBasis, first: number, last: number): RegionalBasis {
  const kept: Float64Array[] = [];
  for (let t = 0; t < terms; ++t) {
    const row = rows.slice(t * count + first, t * count + last);
    if (orthonormalise(row, kept, 1e-12)) kept.push(row);
  }
  const flat = new Float64Array(kept.length * (last - first));
  kept.forEach((row, k) => {
    flat.set(row, k * (last - first));
  });
  return {terms: kept.length, count: last - first, rows: flat};
}

/** Takes what `earlier` span out of a row and makes it a unit vector; false where less than `least` of it is left. */
function orthonormalise(row: Float64Array, earlier: readonly Float64Array[], least: number): boolean {
  const before = length(row);
  for (let pass = 0; pass < 2; ++pass)
    for (const other of earlier) {
      let dot = 0;
      for (let i = 0; i < row.length; ++i) dot += row[i] * other[i];
      for (let i = 0; i < row.length; ++i) row[i] -= dot * other[i];
    }
  const after = length(row);
  if (!(after > least * before)) return false;
  for (let i = 0; i < row.length; ++i) row[i] /= after;
  return true;
}

/** Takes the regional out of a vector over the stations. */
export function projectOutInPlace(vector: Float64Array, basis: RegionalBasis): Float64Array {
  for (let k = 0; k < basis.terms; ++k) {
    const row = k * basis.count;
    let dot = 0;
    for (let i = 0; i < basis.count; ++i) dot += basis.rows[row + i] * vector[i];
    for (let i = 0; i < basis.count; ++i) vector[i] -= dot * basis.rows[row + i];
  }
  return vector;
}

/** Takes the regional out of every column of a count × columns matrix, all its terms in one pass there and one back. */
export function projectOutOfColumnsInPlace(matrix: Float64Array, columns: number, basis: RegionalBasis): Float64Array {
  const {terms, count, rows} = basis;
  if (terms === 0) return matrix;
  const dots = new Float64Array(terms * columns);
  for (let i = 0; i < count; ++i) {
    const row = i * columns;
    for (let k = 0; k < terms; ++k) {
      const r = rows[k * count + i];
      const to = k * columns;
      for (let j = 0; j < columns; ++j) dots[to + j] += r * matrix[row + j];
    }
  }
  for (let i = 0; i < count; ++i) {
    const row = i * columns;
    for (let k = 0; k < terms; ++k) {
      const r = rows[k * count + i];
      const from = k * columns;
      for (let j = 0; j < columns; ++j) matrix[row + j] -= r * dots[from + j];
    }
  }
  return matrix;
}

function legendre(degree: number, t: number): number {
  if (degree === 0) return 1;
  let before = 1;
  let value = t;
  for (let k = 1; k < degree; ++k) [before, value] = [value, ((2 * k + 1) * t * value - k * before) / (k + 1)];
  return value;
}

function length(vector: Float64Array): number {
  let sum = 0;
  for (const entry of vector) sum += entry * entry;
  return Math.sqrt(sum);
}
