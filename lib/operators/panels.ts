/** The support cut into panels, each carrying one constant density. */
import {type BoundaryLine, boundaryAt} from "../geometry/boundary-line.ts";
import type {Interval, Support} from "../geometry/interval.ts";
import {lengthOf} from "../geometry/interval.ts";

/** Panels in increasing chainage; a component is one interval of the support. Lengths in m. */
export interface Panels {
  readonly count: number;
  readonly from: Float64Array;
  readonly to: Float64Array;
  readonly centre: Float64Array;
  readonly width: Float64Array;
  /** Heights of the ends above the datum, m; all zero on a flat boundary. */
  readonly yFrom: Float64Array;
  readonly yTo: Float64Array;
  readonly flat: boolean;
  /** What the panels were laid on; undefined when flat. */
  readonly boundary: BoundaryLine | undefined;
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
 * @param boundary undefined for a flat one; its panels are straight between their ends
 */
export function panelsOn(support: Support, width: number, boundary?: BoundaryLine): Panels {
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
  const yFrom = from.map((x) => boundaryAt(boundary, x));
  const yTo = to.map((x) => boundaryAt(boundary, x));
  return {count, from, to, centre, width: widths, yFrom, yTo, flat: boundary === undefined, boundary, components};
}

/**
 * The broken line that the panels make of the boundary, so that the continuum lies on the same one, and the boundary
 * itself off the support, where levels above it are asked for too; undefined when flat.
 */
export function boundaryOfPanels(panels: Panels): BoundaryLine | undefined {
  const {boundary} = panels;
  if (boundary === undefined) return undefined;
  const x: number[] = [];
  const y: number[] = [];
  let next = 0;
  const passTo = (end: number, keep: boolean): void => {
    for (; next < boundary.x.length && boundary.x[next] < end; ++next)
      if (keep) {
        x.push(boundary.x[next]);
        y.push(boundary.y[next]);
      }
  };
  for (const {interval, first, count} of panels.components) {
    passTo(interval.from, true);
    x.push(panels.from[first]);
    y.push(panels.yFrom[first]);
    for (let j = first; j < first + count; ++j) {
      x.push(panels.to[j]);
      y.push(panels.yTo[j]);
    }
    passTo(interval.to, false);
    if (boundary.x[next] === interval.to) ++next;
  }
  passTo(Infinity, true);
  return {x: Float64Array.from(x), y: Float64Array.from(y)};
}
