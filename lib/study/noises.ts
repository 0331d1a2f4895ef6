/** Three estimates of the noise of a line beside each other, and what it means where they do not agree. */
import {ReportableError} from "../errors.ts";
import type {SourceEstimate} from "../inverse/nouns.ts";
import {levelError, shortWaveEnd} from "../inverse/residual-spectrum.ts";
import {doubt, type Notice} from "../notice.ts";
import {DELIVERY_UNIT} from "../quantities.ts";
import type {ConditionedChannel, ConditionedLine} from "../survey/conditioned.ts";
import {lengthFromShare, type RecordNoise, recordNoise} from "../survey/record-noise.ts";

/** Standard deviations of the noise of one channel, SI; undefined where a way does not say. */
export interface ChannelNoises {
  /** `value`, `value.2` … */
  readonly role: string;
  readonly given: number | undefined;
  /** By the fourth differences of the record. */
  readonly record: number | undefined;
  /** By the shortest waves of the residual, and whether its spectrum is flat there. */
  readonly spectrum: number | undefined;
  readonly flat: boolean;
  /**
   * The length that, beside the noise in force, would make the fourth differences as small as they are, m: an estimate;
   * undefined where they are not small, or a length was given.
   */
  readonly length?: number | undefined;
  /** What speaks for a doubt; undefined where they agree, or chance explains the difference. */
  readonly apart?: Apart | undefined;
}

/** Two ways that differ, by their names here. */
interface Apart {
  readonly larger: Way;
  readonly smaller: Way;
}

type Way = "given" | "record" | "spectrum";

/** Ways that differ by less are good enough: half as much again moves an interval by no more. A heuristic. */
export const DIFFERENT = 1.5;
/** Standard errors that chance is allowed. */
const BY_CHANCE = 3;
/** Doubts that already say that the noise of the line is not what it was taken for. */
const SAID_BEFORE: ReadonlySet<string> = new Set(["noise/raised", "noise/contradicted", "noise/record-not-white"]);

/** @param remains whitened residuals of each channel, in the order of chainage */
export function noisesOf(
  {line, channels}: ConditionedLine,
  remains: readonly Float64Array[],
  {degreesOfFreedom, readings}: SourceEstimate,
): readonly ChannelNoises[] {
  return channels.map((conditioned, k) => {
    const {channel, noise, noiseLength} = conditioned;
    const record = channel.interpolated ? undefined : recordOf(line.stations.chainage, channel.values, noiseLength);
    // A fit that took half of the waves took some of the shortest half.
    const end = degreesOfFreedom > 0.5 * readings ? undefined : shortWaveEnd(remains[k]!);
    const given = channel.noise === "record" ? undefined : channel.noise;
    const spectrum = end === undefined ? undefined : end.level * noise;
    const ways: Known[] = [];
    if (given !== undefined) ways.push({way: "given", value: given, chance: 0});
    if (record !== undefined)
      ways.push({way: "record", value: record.sigma, chance: RECORD_ERROR / Math.sqrt(record.used)});
    if (end !== undefined) ways.push({way: "spectrum", value: end.level * noise, chance: levelError(end.ordinates)});
    const apart = channel.interpolated ? undefined : farthestApart(ways, record);
    const share = record === undefined || noiseLength > 0 ? 1 : record.sigma / noise;
    const length = share < 1 / DIFFERENT ? lengthFromShare(share, record!.spacing) : undefined;
    return {role: channel.role, given, record: record?.sigma, spectrum, flat: end?.flat ?? false, length, apart};
  });
}

/** Relative standard error of the noise by n fourth differences, times √n; as `chanceRatio` has it. */
const RECORD_ERROR = 1.2;

/** @returns undefined where the record does not say */
export function recordOf(chainage: Float64Array, values: Float64Array, length: number): RecordNoise | undefined {
  try {
    return recordNoise(chainage, values, length);
  } catch (error) {
    // Too short, or rounded: it does not say.
    if (!(error instanceof ReportableError)) throw error;
    return undefined;
  }
}

interface Known {
  readonly way: Way;
  readonly value: number;
  /** Relative standard error. */
  readonly chance: number;
}

function farthestApart(ways: readonly Known[], record: RecordNoise | undefined): Apart | undefined {
  let most = 1;
  let found: Apart | undefined;
  for (const larger of ways)
    for (const smaller of ways) {
      const ratio = larger.value / smaller.value;
      const allowed = Math.max(DIFFERENT, 1 + BY_CHANCE * Math.hypot(larger.chance, smaller.chance));
      // Signal of short waves makes fourth differences large, not white, and no word on the noise.
      if (larger.way === "record" && record?.white === false) continue;
      if (!(ratio > allowed && ratio > most)) continue;
      most = ratio;
      found = {larger: larger.way, smaller: smaller.way};
    }
  return found;
}

/**
 * The notices about the noise with the doubt that the estimates differ; where one of them says so already, its figures
 * are added to that one.
 */
export function withNoises(
  notices: readonly Notice[],
  noises: readonly ChannelNoises[],
  {channels}: ConditionedLine,
): Notice[] {
  const told = [...notices];
  noises.forEach((noises, k) => {
    if (noises.apart === undefined) return;
    const which = channels.length > 1 ? ` of ${noises.role}` : "";
    const figures = figuresOf(noises, channels[k]!);
    const before = told.findIndex(({code}) => SAID_BEFORE.has(code));
    if (before >= 0) {
      const said = told[before]!;
      told[before] = {...said, message: `${said.message} Three estimates of the noise${which}: ${figures}.`};
      return;
    }
    told.push(
      doubt(
        "noise/estimates-differ",
        `Estimates of the noise${which} differ by more than half: ${figures}. ${meaningOf(noises.apart, noises, channels[k]!.noiseLength)}`,
      ),
    );
  });
  return told;
}

function figuresOf({given, record, spectrum, flat}: ChannelNoises, {channel}: ConditionedChannel): string {
  const unit = DELIVERY_UNIT[channel.observable.dimension];
  const text = (value: number | undefined, words: string, after = ""): string =>
    value === undefined ? `none ${words}` : `${(value / unit.factor).toPrecision(3)} ${unit.symbol} ${words}${after}`;
  return [
    text(given, "given"),
    text(record, "from the fourth differences of the record"),
    text(spectrum, "from the shortest waves of the residual", flat ? "" : ", whose spectrum is not flat there"),
  ].join(", ");
}

/** A length that was estimated: two digits are more than it is worth. */
export const lengthText = (metres: number): string => String(Number(metres.toPrecision(2)));

/** What may be the matter, and which to trust when. */
function meaningOf({larger, smaller}: Apart, {flat, length: told}: ChannelNoises, length: number): string {
  if (larger === "given")
    return `The readings are quieter in their shortest waves than what was given. If they were filtered or gridded, or the given noise was measured by repeats, trust that: smooth records hide their noise. ${
      length > 0
        ? "If neither, --noise is too large or --noise-length too short."
        : `If it is right but stronger in long waves, give --noise-length${told === undefined ? "" : ` ${lengthText(told)}`} with it${told === undefined ? "" : " (an estimate)"}. If neither, it is too large, and the intervals wider than need be.`
    }`;
  if (smaller === "given")
    return `The readings are noisier in their shortest waves than what was given, so that intervals are too narrow. Give the larger --noise${length > 0 ? " or a shorter --noise-length" : ""}, unless stations are so far apart (beyond a tenth of the height) that the anomaly itself has such waves${flat ? "" : "; the spectrum, not flat there, speaks for that"}.`;
  return larger === "record"
    ? "Where stations are farther apart than a tenth of the height the anomaly reaches into the fourth differences: then trust the residual, where its spectrum is flat."
    : `Something of short waves is not explained by the source: shallow bodies, or a support that misses some. ${flat ? "The residual, whose spectrum is flat, is the safer figure" : "Look at the residual in the report before either is trusted"}.`;
}
