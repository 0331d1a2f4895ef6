/** The readings of a conditioned line, channel after channel. */
import type {ConditionedLine} from "../survey/conditioned.ts";
import type {SurveyLine} from "../survey/line.ts";
import {type ChannelReadings, type Readings, readingsOf} from "./readings.ts";

export const readingsOfLine = ({line, channels}: ConditionedLine): Readings => readingsOf(ofChannels(line, channels));

const ofChannels = ({stations}: SurveyLine, channels: ConditionedLine["channels"]): ChannelReadings[] =>
  channels.map(({z, response, noise, noiseLength}) => ({x: stations.chainage, z, response, noise, noiseLength}));

/** Their values, SI, in the same order. */
export function valuesOfLine({channels}: ConditionedLine): Float64Array {
  const values = new Float64Array(channels.reduce((sum, {channel}) => sum + channel.values.length, 0));
  let at = 0;
  for (const {channel} of channels) {
    values.set(channel.values, at);
    at += channel.values.length;
  }
  return values;
}

/** A known reading at a point, or of a stretch about it, beside the channels. */
export type PointReading = Omit<ChannelReadings, "x" | "z"> & {readonly x: number; readonly z: number};

/** The channels and known readings after them, whose noise is white; those share one channel number, past the last of the line. */
export function readingsWithPoints({line, channels}: ConditionedLine, points: readonly PointReading[]): Readings {
  const readings = readingsOf([
    ...ofChannels(line, channels),
    ...points.map(({x, z, ...point}) => ({x: Float64Array.of(x), z: Float64Array.of(z), ...point})),
  ]);
  readings.channel.fill(channels.length, readings.count - points.length);
  return readings;
}
