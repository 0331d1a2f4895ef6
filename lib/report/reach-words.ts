/** What the answer can and cannot say, in sentences: the finest feature, and the depth to trust. */
import type {LevelProfile} from "../continuation/level-profile.ts";
import type {Trust} from "../continuation/trust.ts";
import type {LineStudy} from "../study/outcome.ts";
import {levelWords} from "./level-words.ts";
import {countText, metreText, percentText} from "./number-text.ts";

/** Lengths are said to three digits: `5.62 m`. */
const length = (metres: number): string =>
  Number.isFinite(metres) ? `${metreText(Number(metres.toPrecision(3)))} m` : "any length";

/** Differences below a twentieth are not worth a clause. */
const isWorse = (worst: number, median: number): boolean => worst > 1.05 * median;

/** The finest feature along the line, and at its worst place. */
export function resolutionSentence({resolution}: Pick<LineStudy, "resolution">): string {
  const {length: median, worst} = resolution;
  if (!Number.isFinite(median)) return "Features of any length are not in the data: nothing is resolved.";
  return `Features narrower than ${length(median)} are not in the data (median along the line${
    isWorse(worst.length, median)
      ? `; ${length(worst.length)} at chainage ${metreText(worst.at)} m, the worst place`
      : ""
  }).`;
}

/**
 * The averaging kernel acts on f, and carrying f up commutes with it where the line is long: what is too narrow for
 * the data on the boundary is too narrow at every level. But the field at height h is f through the Poisson kernel,
 * whose height is 1/(πh) at unit area, so that by the same measure πh is the width that the height itself leaves.
 */
export function levelSentence(level: LevelProfile, {resolution}: Pick<LineStudy, "resolution">): string {
  const {length: median} = resolution;
  const heights = Float64Array.from(level.height).sort();
  const smooth = Math.PI * heights[heights.length >> 1]!;
  const own = `features narrower than ${length(median)} at this level are not in the data`;
  const words = levelWords(level.setting);
  const lead = `${words.charAt(0).toUpperCase()}${words.slice(1)}: ${own}`;
  return smooth > median
    ? `${lead}; by its height alone the field there holds little narrower than ${length(smooth)}.`
    : `${lead}, though the field there may hold them.`;
}

/** @param trust undefined: there are no intervals to tell it from */
export function trustSentence(trust: Trust | undefined): string {
  if (trust === undefined) return "Depth to trust: not told, since there are no intervals to tell it from.";
  const {fraction, level, sensor, stations} = trust;
  const share = `${percentText(fraction)} of the range of the field along the line (median of ${countText(stations)} stations)`;
  if (Number.isNaN(level))
    return `Depth to trust: none. Even at the lowest sensor, ${length(sensor)} above the boundary, the interval is wider than ${share}.`;
  if (level === 0)
    return `Depth to trust: down to the boundary. At every level looked at the interval is narrower than ${share}.`;
  return `Depth to trust: ${length(level)} above the boundary. Below it the interval is wider than ${share}.`;
}
