/** The readings of a conditioned line, channel after channel. */
import type {ConditionedLine} from "../survey/conditioned.ts";
import {type Readings, readingsOf} from "./readings.ts";

export const readingsOfLine = ({line, channels}: ConditionedLine): Readings =>
  readingsOf(channels.map(({z, response, noise}) => ({x: line.stations.chainage, z, response, noise})));

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
