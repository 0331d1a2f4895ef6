/** Resolution of the estimate along the support, and averages of f no narrower than it. */
import type {Interval, Support} from "../geometry/interval.ts";
import {lengthOf} from "../geometry/interval.ts";
import {densityAt, meanOver} from "../operators/functional.ts";
import type {Panels} from "../operators/panels.ts";
import type {IntervalSolver} from "./intervals.ts";
import type {PanelAverages, Resolution} from "./nouns.ts";

/**
 * 1/R(x, x), R the averaging kernel of the estimate: the width of a boxcar of the kernel's height and unit area.
 * On a long line it tends to π/k_c, half the shortest wavelength carried.
 * Source: Backus & Gilbert, Geophys. J. R. astr. Soc. 16 (1968) 169 (from memory).
 *
 * @param stations chainage of the stations; the length of the line is the median over those above the support
 */
export function resolutionOf(
  solver: IntervalSolver,
  panels: Panels,
  multiplier: number,
  stations: Float64Array,
): Resolution {
  const local = panels.centre.map((x) => 1 / solver.resolvingPower(densityAt(x), multiplier));
  const above = Float64Array.from(
    [...stations].flatMap((x) => {
      const panel = panelAt(panels, x);
      return panel === undefined ? [] : [local[panel]];
    }),
  ).sort();
  const lengths = above.length > 0 ? above : Float64Array.from(local).sort();
  return {length: lengths[lengths.length >> 1], local};
}

/** The panel that holds chainage x; undefined off the support. */
export function panelAt(panels: Panels, x: number): number | undefined {
  for (const {interval, first, count} of panels.components) {
    if (x < interval.from || x > interval.to) continue;
    return first + Math.min(count - 1, Math.floor((x - interval.from) / panels.width[first]));
  }
  return undefined;
}

/** The stretch that an average at x is taken over: the resolution there, at least that of the line, inside the part of the support that holds x. */
export function stretchAt(panels: Panels, resolution: Resolution, x: number): Interval | undefined {
  const panel = panelAt(panels, x);
  if (panel === undefined) return undefined;
  const {interval} = panels.components.find(({first, count}) => panel >= first && panel < first + count)!;
  const length = Math.min(Math.max(resolution.length, resolution.local[panel]), lengthOf(interval));
  const from = Math.min(Math.max(x - 0.5 * length, interval.from), interval.to - length);
  return {from, to: from + length};
}

export function averagesOn(
  solver: IntervalSolver,
  panels: Panels,
  resolution: Resolution,
  support: Support,
): PanelAverages {
  const value = new Float64Array(panels.count);
  const lower = new Float64Array(panels.count);
  const upper = new Float64Array(panels.count);
  const averagedOver = new Float64Array(panels.count);
  for (let j = 0; j < panels.count; ++j) {
    const stretch = stretchAt(panels, resolution, panels.centre[j])!;
    const answer = solver.interval(meanOver(stretch, support));
    value[j] = answer.value;
    lower[j] = answer.value - answer.halfWidth;
    upper[j] = answer.value + answer.halfWidth;
    averagedOver[j] = lengthOf(stretch);
  }
  return {value, lower, upper, averagedOver};
}
