/** The residuals of a line, whitened, and the doubts they raise where they are not white noise. */
import type {SourceEstimate} from "../inverse/nouns.ts";
import {lengthFromLagOne, notWhite, whiteness} from "../inverse/whiteness.ts";
import {doubt, type Notice} from "../notice.ts";
import {whitened} from "../operators/correlated-noise.ts";
import type {Readings} from "../operators/readings.ts";
import {byChainage} from "../survey/by-chainage.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {spacingOf} from "../survey/record-noise.ts";
import {type ChannelNoises, lengthText} from "./noises.ts";

/** Of each channel, over the standard deviation and in the order of chainage. */
export function whitenedResiduals(
  {line, channels}: ConditionedLine,
  estimate: SourceEstimate,
  readings: Readings,
): readonly Float64Array[] {
  const {count, chainage} = line.stations;
  const all = new Float64Array(readings.count);
  let at = 0;
  for (const {residual} of estimate.channels) {
    all.set(residual, at);
    at += residual.length;
  }
  const white = whitened(all, readings);
  const order = byChainage(chainage);
  return channels.map((_, k) => Float64Array.from(order, (i) => white[k * count + i]!));
}

export function doubtsOfResidual(
  {line, channels}: ConditionedLine,
  estimate: SourceEstimate,
  remains: readonly Float64Array[],
  noises: readonly ChannelNoises[],
): Notice[] {
  return remains.flatMap((residual, k) => {
    const {excess, lagOne} = whiteness(residual);
    if (!(excess > notWhite(residual.length, estimate.misfit / channels.length))) return [];
    // A fit takes the long waves of the noise with it: neighbours are left anticorrelated, by its share of the readings.
    const taken = (2 * estimate.degreesOfFreedom) / estimate.readings + 3 / Math.sqrt(residual.length);
    if (lagOne < 0 && -lagOne <= taken) return [];
    const {channel, noiseLength} = channels[k]!;
    const which = channels.length > 1 ? ` of ${channel.role}` : "";
    const known = noises[k]!.length;
    const length = known ?? lengthFromLagOne(lagOne, spacingOf(line.stations.chainage));
    const basis =
      known === undefined ? "from neighbours alone; too short where the fit took some of the noise" : "from the record";
    const found =
      noiseLength > 0
        ? `The residuals${which} are not those of noise correlated over ${Number(noiseLength.toPrecision(4))} m: whitened for it, neighbours still correlate by ${lagOne.toFixed(2)}. Either that length is wrong`
        : `The residuals${which} are not white noise (neighbours correlate by ${lagOne.toFixed(2)}): either the readings' noise is correlated`;
    const cure =
      noiseLength > 0 || length === undefined
        ? "give the noise as it is at the wavelengths of the anomaly, or a wider --support"
        : `if it is noise, give --noise-length ${lengthText(length)} with it (an estimate ${basis}), else a wider --support`;
    return [
      doubt(
        "residual/not-white",
        `${found}, or part of the anomaly is taken for noise. Intervals that count on ${noiseLength > 0 ? "it" : "white noise"} are mostly too narrow by then. Look at the residual in the report; ${cure}.`,
      ),
    ];
  });
}
