/** What can be said of a line before any theory: its stations, spacing, heights, gaps, readings and noise. SI; metres. */
import {ReportableError} from "../errors.ts";
import type {Notice} from "../notice.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import type {Dimension} from "../quantities.ts";
import {byChainage} from "./by-chainage.ts";
import type {Channel, SurveyLine} from "./line.ts";
import {type Spread, spread} from "./order-statistics.ts";
import {type RecordNoise, recordNoise} from "./record-noise.ts";

export interface LineFigures {
  readonly id: string;
  readonly group: string;
  readonly stations: number;
  /** Rows left out because a reading or a height was missing. */
  readonly omitted: number;
  /** Grid azimuth flown, degrees in [0, 360); undefined where only chainage is known. */
  readonly azimuth: number | undefined;
  /** Least and greatest chainage. */
  readonly from: number;
  readonly to: number;
  /** Between neighbouring places along the line. */
  readonly spacing: Spread;
  readonly heights: readonly ({readonly kind: "clearance" | "elevation" | "ground"} & Spread)[];
  /** Departure from the line's own mean offset. */
  readonly offset: {readonly mean: number; readonly greatest: number; readonly rms: number};
  /** Steps of more than three median spacings. */
  readonly gaps: {readonly count: number; readonly largest: number};
  /** Stations at a place already measured. */
  readonly repeats: number;
  /** Steps against the direction flown. */
  readonly backward: number;
  /** Undefined where the clearance is not known. */
  readonly sampling: Sampling | undefined;
  readonly channels: readonly ChannelFigures[];
  /** Of the Earth's field, for increasing chainage; undefined where no direction was given or it means nothing here. */
  readonly fieldAlong: EffectiveDirection | undefined;
  readonly notices: readonly Notice[];
}

/** How well the spacing catches sources at ground level, if they are everywhere and unlike each other. */
export interface Sampling {
  /** Median spacing over median clearance, Δ/h. */
  readonly spacingToHeight: number;
  /** Part of the power that is aliased: e^(−u), u = 2πh/Δ, for a field; e^(−u)(1 + u + u²/2) for its gradient. */
  readonly aliased: {readonly field: number; readonly gradient: number};
}

interface ChannelFigures {
  readonly role: string;
  readonly observable: string;
  readonly dimension: Dimension;
  /** SI. */
  readonly readings: Spread;
  /** Length over which the noise was said to be correlated, m; 0: it is white. */
  readonly noiseLength: number;
  /** By the fourth difference, SI; undefined where the record does not give it, and why. */
  readonly noise: RecordNoise | undefined;
  readonly noiseMissing: string | undefined;
  /** Whether Δ/h ≤ 0.1, without which the fourth difference holds signal as well; undefined where h is not known. */
  readonly noiseMeaningful: boolean | undefined;
}

/** A step this much longer than the median is a gap (heuristic). */
export const GAP = 3;
/** Δ/h up to which signal leaks into the fourth difference by less than 2.9e-4 of an anomaly, in σ (24 (Δ/h)⁴/√70). */
const NOISE_SPACING = 0.1;

/** Source: A. B. Reid, Aeromagnetic survey design, Geophysics 45 (1980) 973–976. */
export function samplingOf(spacing: number, height: number): Sampling {
  const u = (2 * Math.PI * height) / spacing;
  const field = Math.exp(-u);
  return {spacingToHeight: spacing / height, aliased: {field, gradient: field * (1 + u + (u * u) / 2)}};
}

/**
 * @param axisAzimuth azimuth of increasing chainage of the line's group
 * @param kind a row of a grid was interpolated: its record shows no noise
 */
export function lineFigures(
  line: SurveyLine,
  axisAzimuth: number | undefined,
  kind: "lines" | "grid",
  fieldAlong: EffectiveDirection | undefined,
): LineFigures {
  const {stations} = line;
  const {chainage, count} = stations;
  const order = byChainage(chainage);
  const steps: number[] = [];
  let backward = 0;
  for (let i = 1; i < count; ++i) {
    steps.push(chainage[order[i]!]! - chainage[order[i - 1]!]!);
    if ((chainage[i]! - chainage[i - 1]!) * line.direction < 0) ++backward;
  }
  const positive = steps.filter((step) => step > 0);
  const spacing = spread(positive);
  const gaps = positive.filter((step) => step > GAP * spacing.median);
  const clearance = stations.clearance === undefined ? undefined : spread(stations.clearance);
  const sampling =
    clearance !== undefined && clearance.median > 0 ? samplingOf(spacing.median, clearance.median) : undefined;
  return {
    id: line.id,
    group: line.group,
    stations: count,
    omitted: line.omitted,
    azimuth: axisAzimuth === undefined ? undefined : axisAzimuth + (line.direction < 0 ? 180 : 0),
    from: chainage[order[0]!]!,
    to: chainage[order[count - 1]!]!,
    spacing,
    heights: (["clearance", "elevation", "ground"] as const).flatMap((kind) => {
      const column = stations[kind];
      return column === undefined ? [] : [{kind, ...spread(column)}];
    }),
    offset: departures(stations.offset),
    gaps: {count: gaps.length, largest: gaps.reduce((most, gap) => Math.max(most, gap), 0)},
    repeats: steps.length - positive.length,
    backward,
    sampling,
    channels: line.channels.map((channel) => channelFigures(channel, chainage, sampling, kind)),
    fieldAlong,
    notices: line.notices,
  };
}

function departures(offset: Float64Array): LineFigures["offset"] {
  const mean = offset.reduce((sum, value) => sum + value, 0) / offset.length;
  let greatest = 0;
  let squares = 0;
  for (const value of offset) {
    greatest = Math.max(greatest, Math.abs(value - mean));
    squares += (value - mean) ** 2;
  }
  return {mean, greatest, rms: Math.sqrt(squares / offset.length)};
}

function channelFigures(
  channel: Channel,
  chainage: Float64Array,
  sampling: Sampling | undefined,
  kind: "lines" | "grid",
): ChannelFigures {
  let noise: RecordNoise | undefined;
  let noiseMissing: string | undefined;
  if (kind === "grid") noiseMissing = "A grid was interpolated and is smooth; its record does not show the noise.";
  else
    try {
      noise = recordNoise(chainage, channel.values, channel.noiseLength);
    } catch (error) {
      if (!(error instanceof ReportableError)) throw error;
      noiseMissing = error.message;
    }
  return {
    role: channel.role,
    observable: channel.observable.name,
    dimension: channel.observable.dimension,
    readings: spread(channel.values),
    noiseLength: channel.noiseLength ?? 0,
    noise,
    noiseMissing,
    noiseMeaningful: sampling === undefined ? undefined : sampling.spacingToHeight <= NOISE_SPACING,
  };
}
