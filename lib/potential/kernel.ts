/**
 * The one kernel behind every observable. With w = x + iz the place of a sensor and ζ(t) = t + iy(t) the boundary,
 *
 *   F(w) = (1/πi) ∫ f(t)/(ζ − w) dt,    F′(w) = (1/πi) ∫ f(t)/(ζ − w)² dt,
 *
 * a reading is Re(α F) or Re(α F′): κ(t) = Re[a (ζ − w)^−m] with a = α/(πi) and m = 1 or 2.
 * Source: Blakely, Potential Theory in Gravity and Magnetic Applications (1995), ch. 12 (from memory);
 * Re F on a flat boundary is the Poisson integral of f.
 */
import {ModelError} from "../errors.ts";

/** α of Re(α F) (`order` 0) or Re(α F′) (`order` 1). */
export interface Response {
  readonly re: number;
  readonly im: number;
  readonly order: 0 | 1;
}

/** a = α/(πi) = (α_im − i α_re)/π. */
export const amplitudeRe = ({im}: Response): number => im / Math.PI;
export const amplitudeIm = ({re}: Response): number => -re / Math.PI;

/** κ at a boundary point s along from the sensor and `drop` below it, drop > 0. */
export function kernelAt(aRe: number, aIm: number, order: number, s: number, drop: number): number {
  const inverse = 1 / (s * s + drop * drop);
  // 1/(ζ − w) = (s + i drop)/(s² + drop²)
  const p = s * inverse;
  const q = drop * inverse;
  return order === 0 ? aRe * p - aIm * q : aRe * (p * p - q * q) - 2 * aIm * p * q;
}

/**
 * ∫ κ dt over a straight piece of boundary from (a, ya) to (b, yb), all relative to the sensor: along, and below it
 * (da, db > 0). Density per metre of x, so that a slope enters by 1/(1 + i y′).
 *
 * The logarithm is one ln of the quotient, its imaginary part one atan2 of cross and dot product and its real part half
 * a log1p: two principal logarithms jump where a piece left of the sensor crosses its height, and differences of
 * arctangents or logarithms lose four to sixteen digits for thin far pieces.
 */
export function kernelOverPiece(
  aRe: number,
  aIm: number,
  order: number,
  a: number,
  da: number,
  b: number,
  db: number,
): number {
  const ra = a * a + da * da;
  const rb = b * b + db * db;
  let re: number;
  let im: number;
  if (order === 0) {
    // ln((b − i db)/(a − i da)): the cross product by differences, and the modulus from the smaller of the two up, since
    // log1p near −1 would lose digits for a long piece that ends under the sensor.
    const growth = (b - a) * (b + a) + (db - da) * (db + da);
    re = growth >= 0 ? 0.5 * Math.log1p(growth / ra) : -0.5 * Math.log1p(-growth / rb);
    im = Math.atan2((b - a) * da - a * (db - da), a * b + da * db);
  } else {
    // 1/(a − i da) − 1/(b − i db) = ((b − a) − i (db − da)) / ((a − i da)(b − i db))
    const pr = a * b - da * db;
    const pi = -(a * db + b * da);
    const inverse = 1 / (ra * rb);
    re = ((b - a) * pr - (db - da) * pi) * inverse;
    im = (-(b - a) * pi - (db - da) * pr) * inverse;
  }
  if (db !== da) {
    // Times (b − a)/(ζ_b − ζ_a) = 1/(1 − i m), m = (db − da)/(b − a)
    const m = (db - da) / (b - a);
    const scale = 1 / (1 + m * m);
    const turned = (re - m * im) * scale;
    im = (im + m * re) * scale;
    re = turned;
  }
  return aRe * re - aIm * im;
}

/**
 * The same with the density rising along the piece from 0 at its first end to 1 at its second. With u = ζ − w at the
 * ends and e = u_b − u_a it is (b − a)/e · [1 − u_a/e ln(u_b/u_a)] and, for F′, (b − a)/e² · [ln(u_b/u_a) − e/u_b]: for
 * pieces far off the two terms cancel, to ε times the distance in pieces.
 */
export function rampOverPiece(
  aRe: number,
  aIm: number,
  order: number,
  a: number,
  da: number,
  b: number,
  db: number,
): number {
  const eRe = b - a;
  const eIm = da - db;
  const size = eRe * eRe + eIm * eIm;
  const ra = a * a + da * da;
  const rb = b * b + db * db;
  const growth = (b - a) * (b + a) + (db - da) * (db + da);
  const logRe = growth >= 0 ? 0.5 * Math.log1p(growth / ra) : -0.5 * Math.log1p(-growth / rb);
  const logIm = Math.atan2((b - a) * da - a * (db - da), a * b + da * db);
  let re: number;
  let im: number;
  if (order === 0) {
    // u_a/e
    const qRe = (a * eRe - da * eIm) / size;
    const qIm = (-da * eRe - a * eIm) / size;
    re = 1 - (qRe * logRe - qIm * logIm);
    im = -(qRe * logIm + qIm * logRe);
  } else {
    // ln − e/u_b, over e
    const pRe = logRe - (eRe * b - eIm * db) / rb;
    const pIm = logIm - (eIm * b + eRe * db) / rb;
    re = (pRe * eRe + pIm * eIm) / size;
    im = (pIm * eRe - pRe * eIm) / size;
  }
  // Times (b − a)/e
  const scale = eRe / size;
  return aRe * scale * (re * eRe + im * eIm) - aIm * scale * (im * eRe - re * eIm);
}

/** @throws {ModelError} `potential/station-below-boundary` unless `drop` > 0 */
export function requireAbove(x: number, drop: number): void {
  if (!(drop > 0))
    throw new ModelError(
      "potential/station-below-boundary",
      `The sensor at chainage ${x} m lies ${drop} m above the boundary; it must lie above. Lower the boundary or leave the station out.`,
    );
}
