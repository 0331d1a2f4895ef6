/**
 * The highest clearance at which a strip can be told from nothing.
 *
 * The interval of half-width h holds the mean V of the strip with the confidence C, so that its centre lies within h
 * of V in at least C of all surveys, whatever the other sources within the bound. With |V| ≥ 2h the interval is then
 * free of zero in at least C of them; and over a strip of mean zero it is free of zero in at most 1 − C.
 */
import {findRoot} from "../numeric/roots.ts";
import type {PlannedChannel} from "./planned-line.ts";
import {type PlanQuestion, type PlanSettings, plannedWork} from "./planned-work.ts";

/** Heights tried from the length of the line down, by this factor; the last root is met between two of them. */
const STEP = 1.6;
/** Below this share of the spacing, stations see only what is right under them. A heuristic end of the search. */
const LEAST_SHARE = 0.25;
/** Of the clearance, relative. */
const TOLERANCE = 2e-3;

/** @param strength |V|, SI field; @returns undefined where no clearance tried will do */
export function highestClearance(
  width: number,
  strength: number,
  {spacing, bound}: PlanQuestion,
  settings: PlanSettings,
  channel: PlannedChannel,
): number | undefined {
  const {boundaryDepth, length} = settings;
  const spare = (height: number): number => {
    const question = {clearance: height - boundaryDepth, spacing, bound};
    const half = plannedWork(question, settings, [channel]).strip(0.5 * length, width);
    return Math.log(strength / (2 * half));
  };
  const least = Math.max(LEAST_SHARE * spacing, boundaryDepth);
  let above = length;
  for (let height = above; height > least; height /= STEP) {
    if (spare(height) >= 0) {
      if (height === above) return height - boundaryDepth;
      // Without a slope the search halves the bracket.
      const root = findRoot((h) => [spare(h), Number.NaN], height, above, {logarithmic: true, tolerance: TOLERANCE});
      return root - boundaryDepth;
    }
    above = height;
  }
  return undefined;
}
