/** Whether the noise that was given is the likelier reason why no source explains the readings. */
import {misfitTarget} from "../inverse/misfit-range.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {ConditionedChannel, ConditionedLine} from "../survey/conditioned.ts";
import {DIFFERENT, lengthText, recordOf} from "./noises.ts";

interface Evidence {
  readonly words: string;
  /** The noise of the record as white noise, over the noise in force. */
  readonly ratio: number;
}

/**
 * The fourth differences of the record kill what sources make and keep the noise, so that they speak of it whether or
 * not any source fits.
 *
 * @param misfit that is left, within bound and support
 * @param white the same where the noise is not correlated; asked only where a length was given
 * @param who what source is meant: `a source within the bound`
 * @returns whole sentences: what was given, what the record shows, what to do; undefined where nothing speaks against
 *   what was given
 */
export function noiseCause(
  {line, channels}: ConditionedLine,
  misfit: number,
  white: () => number,
  who: string,
): string | undefined {
  const readings = line.stations.count * channels.length;
  const length = channels.reduce((most, {noiseLength}) => Math.max(most, noiseLength), 0);
  const left = length > 0 ? white() : misfit;
  const [most] = channels
    .map((channel) => evidenceOf(channel, line.stations.chainage, channels.length > 1))
    .filter((evidence) => evidence !== undefined)
    .toSorted((a, b) => b.ratio - a.ratio);
  if (most === undefined) {
    if (!(length > 0 && left <= misfitTarget(readings))) return undefined;
    return `The --noise-length given, ${lengthText(length)} m, is the likeliest cause: with white noise of the same size ${who} explains the readings. Leave it out, or give a shorter one.`;
  }
  const explains = channels.length === 1 && left / Math.max(1, most.ratio) ** 2 <= misfitTarget(readings);
  const lengthAlone = length > 0 && most.ratio <= DIFFERENT;
  const subject = lengthAlone ? "--noise-length" : "noise";
  const cure = lengthAlone
    ? "leave --noise-length out or give a shorter one"
    : `give that as --noise, or --noise record${length > 0 ? ", without --noise-length or with a shorter one" : ""}`;
  // A ratio of one channel says nothing of the misfit of the others.
  return explains
    ? `The ${subject} given is the likeliest cause. ${most.words} With what the record shows ${who} explains the readings: ${cure}.`
    : `The ${subject} given is one cause. ${most.words} First ${cure}; what is left then has another cause as well.`;
}

function evidenceOf(
  {channel, noise, noiseFrom, noiseLength}: ConditionedChannel,
  chainage: Float64Array,
  several: boolean,
): Evidence | undefined {
  if (noiseFrom !== "given" || channel.interpolated) return undefined;
  const record = recordOf(chainage, channel.values, 0);
  if (record === undefined) return undefined;
  const unit = DELIVERY_UNIT[channel.observable.dimension];
  const text = (si: number): string => `${(si / unit.factor).toPrecision(3)} ${unit.symbol}`;
  const ratio = record.sigma / noise;
  const which = several ? ` of ${channel.role}` : "";
  // Of signal in the fourth differences, as where stations are far apart, this is the most that the noise can be.
  const shown = record.white
    ? `the fourth differences of the record are those of white noise of ${text(record.sigma)}`
    : `the fourth differences of the record show ${text(record.sigma)}, of which part may be signal`;
  if (!(noiseLength > 0)) {
    if (!(ratio > DIFFERENT)) return undefined;
    return {ratio, words: `The noise${which} was given as ${text(noise)}, and ${shown}.`};
  }
  const expected = recordOf(chainage, channel.values, noiseLength);
  if (expected === undefined || !(expected.sigma > DIFFERENT * noise)) return undefined;
  const leaves = (noise * record.sigma) / expected.sigma;
  return {
    ratio,
    words: `The noise${which} was given as ${text(noise)} correlated over ${lengthText(noiseLength)} m (--noise-length), which leaves ${text(leaves)} in the fourth differences, and ${shown}.`,
  };
}
