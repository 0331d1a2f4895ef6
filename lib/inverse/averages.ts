/** Resolution of the estimate along the support, and averages of f no narrower than it. */
import type {Interval as Stretch, Support} from "../geometry/interval.ts";
import {lengthOf} from "../geometry/interval.ts";
import {densityAt, type Functional, meanOver} from "../operators/functional.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {Interval, IntervalSolver} from "./intervals.ts";
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
  const boundary = boundaryOfPanels(panels);
  const local = panels.centre.map((x) => 1 / solver.resolvingPower(densityAt(x, boundary), multiplier));
  const above = [...stations].flatMap((at) => {
    const found = localAt(panels, local, at);
    return found === undefined ? [] : [{at, length: found.length}];
  });
  const places = above.length > 0 ? above : Array.from(local, (length, j) => ({at: panels.centre[j], length}));
  const lengths = Float64Array.from(places, ({length}) => length).sort();
  // Of equals the one of least chainage, whatever the order of the file.
  const worst = places.reduce((most, place) =>
    place.length > most.length || (place.length === most.length && place.at < most.at) ? place : most,
  );
  return {length: lengths[lengths.length >> 1], local, worst};
}

/** Resolution at x, between panel centres as their weighted geometric mean so that no panel shows in it, and its part of the support; undefined off the support. */
function localAt(panels: Panels, local: Float64Array, x: number): {length: number; part: Stretch} | undefined {
  for (const {interval, first, count} of panels.components) {
    if (x < interval.from || x > interval.to) continue;
    const place = Math.min(Math.max((x - panels.centre[first]) / panels.width[first], 0), count - 1);
    const left = first + Math.min(Math.floor(place), Math.max(count - 2, 0));
    const right = Math.min(left + 1, first + count - 1);
    const share = place - (left - first);
    // Off the line it grows like an exponential; and not 0·∞ where nothing is resolved.
    const length =
      share === 0 ? local[left] : share === 1 ? local[right] : local[left] ** (1 - share) * local[right] ** share;
    return {length, part: interval};
  }
  return undefined;
}

/** The stretch that an average at x is taken over: the resolution there, at least that of the line, inside the part of the support that holds x. */
export function stretchAt(panels: Panels, resolution: Resolution, x: number): Stretch | undefined {
  const found = localAt(panels, resolution.local, x);
  if (found === undefined) return undefined;
  const {part} = found;
  const length = Math.min(Math.max(resolution.length, found.length), lengthOf(part));
  const from = Math.min(Math.max(x - 0.5 * length, part.from), part.to - length);
  return {from, to: from + length};
}

/** The mean over the stretch at x; undefined off the support. */
export function averagedAt(
  panels: Panels,
  resolution: Resolution,
  support: Support,
  x: number,
): Functional | undefined {
  const stretch = stretchAt(panels, resolution, x);
  return stretch && meanOver(stretch, support, boundaryOfPanels(panels));
}

export function averagesOn(
  solver: IntervalSolver,
  panels: Panels,
  resolution: Resolution,
  support: Support,
): PanelAverages {
  const boundary = boundaryOfPanels(panels);
  const value = new Float64Array(panels.count);
  const lower = new Float64Array(panels.count);
  const upper = new Float64Array(panels.count);
  const averagedOver = new Float64Array(panels.count);
  // Beyond the ends of the line many panels are averaged over all of the support: asked once, for long means are costly.
  const asked = new Map<string, Interval>();
  const mean = (stretch: Stretch): Interval => {
    const key = `${stretch.from}:${stretch.to}`;
    const found = asked.get(key) ?? solver.interval(meanOver(stretch, support, boundary));
    asked.set(key, found);
    return found;
  };
  for (let j = 0; j < panels.count; ++j) {
    const stretch = stretchAt(panels, resolution, panels.centre[j])!;
    const answer = mean(stretch);
    value[j] = answer.value;
    lower[j] = answer.value - answer.halfWidth;
    upper[j] = answer.value + answer.halfWidth;
    averagedOver[j] = lengthOf(stretch);
  }
  return {value, lower, upper, averagedOver};
}
