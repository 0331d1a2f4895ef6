/** Mean of f over a strip, from the interval estimate and from the one source. */
import {clip, type Support, totalLength} from "../geometry/interval.ts";
import {meanOver} from "../operators/functional.ts";
import {boundaryOfPanels, type Panels} from "../operators/panels.ts";
import type {IntervalSolver} from "./intervals.ts";
import {partsOf, type Strip, type StripEstimate} from "./nouns.ts";

export function stripEstimate(
  solver: IntervalSolver,
  panels: Panels,
  density: Float64Array,
  strip: Strip,
  support: Support,
): StripEstimate {
  const stretches = partsOf(strip);
  const {value, halfWidth} = solver.interval(meanOver(strip, support, boundaryOfPanels(panels), stretches));
  return {
    strip,
    mean: value,
    lower: value - halfWidth,
    upper: value + halfWidth,
    plainMean: plainMeanOf(panels, density, strip),
  };
}

/** Mean of the one source on the panels. */
export function plainMeanOf(panels: Panels, density: Float64Array, strip: Strip): number {
  const stretches = partsOf(strip);
  let integral = 0;
  for (let j = 0; j < panels.count; ++j)
    for (const part of clip({from: panels.from[j], to: panels.to[j]}, stretches))
      integral += density[j] * (part.to - part.from);
  return integral / totalLength(stretches);
}
