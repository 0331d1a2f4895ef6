/** The support cut into panels, each carrying one constant density. */
import type {Interval, Support} from "../geometry/interval.ts";
import {lengthOf} from "../geometry/interval.ts";

/** Panels in increasing chainage; a component is one interval of the support. Lengths in m. */
export interface Panels {
  readonly count: number;
  readonly from: Float64Array;
  readonly to: Float64Array;
  readonly centre: Float64Array;
  readonly width: Float64Array;
  /** Panels `first … first + count − 1` fill `interval` without gaps; `edges` has count + 1 entries. */
  readonly components: readonly PanelComponent[];
}

export interface PanelComponent {
  readonly interval: Interval;
  readonly first: number;
  readonly count: number;
  readonly edges: Float64Array;
}

/**
 * Equal panels on each interval of the support, none wider than `width`.
 *
 * A quarter of the least height is enough to fit data, since wavenumber k arrives as e^(−kh)
 * and the panels carry k up to 4π/h; what they average away inside is no part of the intervals,
 * which are computed in the continuum.
 *
 * @param width largest panel, m
 */
export function panelsOn(support: Support, width: number): Panels {
  const counts = support.map((interval) => Math.max(1, Math.ceil(lengthOf(interval) / width - 1e-9)));
  const count = counts.reduce((sum, n) => sum + n, 0);
  const from = new Float64Array(count);
  const to = new Float64Array(count);
  const centre = new Float64Array(count);
  const widths = new Float64Array(count);
  const components: PanelComponent[] = [];
  let first = 0;
  support.forEach((interval, part) => {
    const n = counts[part]!;
    const edges = new Float64Array(n + 1);
    for (let j = 0; j <= n; ++j) edges[j] = interval.from + (lengthOf(interval) * j) / n;
    edges[n] = interval.to;
    for (let j = 0; j < n; ++j) {
      from[first + j] = edges[j]!;
      to[first + j] = edges[j + 1]!;
      centre[first + j] = 0.5 * (edges[j]! + edges[j + 1]!);
      widths[first + j] = edges[j + 1]! - edges[j]!;
    }
    components.push({interval, first, count: n, edges});
    first += n;
  });
  return {count, from, to, centre, width: widths, components};
}
