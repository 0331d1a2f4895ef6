/** What was read, as the operator sees it: one entry a reading, channel after channel. */
import type {Interval} from "../geometry/interval.ts";
import {amplitudeIm, amplitudeRe, type Response} from "../potential/kernel.ts";
import {chainInto, type Whitening} from "./correlated-noise.ts";

export interface Readings extends Whitening {
  readonly count: number;
  /** Chainage, m. */
  readonly x: Float64Array;
  /** Height above the datum that the boundary's heights count from (a flat boundary itself), m. */
  readonly z: Float64Array;
  /** κ(t) = Re[(aRe + i aIm)(ζ − w)^−(order + 1)]; see `potential/kernel.ts`. */
  readonly aRe: Float64Array;
  readonly aIm: Float64Array;
  readonly order: Uint8Array;
  /** Place of the channel in the line. */
  readonly channel: Uint8Array;
  /** Where a reading is the mean of f over a stretch of the boundary: that, and the kernel is not looked at. Undefined where none is. */
  readonly stretches: readonly (Interval | undefined)[] | undefined;
}

/** One channel's part. */
export interface ChannelReadings {
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly response: Response;
  /** Standard deviation, SI. */
  readonly noise: number;
  /** Length over which the noise is correlated, m; absent or 0: it is white. */
  readonly noiseLength?: number | undefined;
  /** What was read is the mean of f over this stretch of the boundary; absent: what the response says. */
  readonly stretch?: Interval | undefined;
}

export function readingsOf(channels: readonly ChannelReadings[]): Readings {
  const count = channels.reduce((sum, {x}) => sum + x.length, 0);
  const readings = {
    count,
    x: new Float64Array(count),
    z: new Float64Array(count),
    aRe: new Float64Array(count),
    aIm: new Float64Array(count),
    order: new Uint8Array(count),
    noise: new Float64Array(count),
    before: new Int32Array(count).fill(-1),
    rho: new Float64Array(count),
    channel: new Uint8Array(count),
  };
  let at = 0;
  channels.forEach(({x, z, response, noise, noiseLength = 0}, channel) => {
    const end = at + x.length;
    readings.x.set(x, at);
    readings.z.set(z, at);
    readings.aRe.fill(amplitudeRe(response), at, end);
    readings.aIm.fill(amplitudeIm(response), at, end);
    readings.order.fill(response.order, at, end);
    chainInto(readings, at, x, noise, noiseLength);
    readings.channel.fill(channel, at, end);
    at = end;
  });
  const stretches = channels.some(({stretch}) => stretch !== undefined)
    ? channels.flatMap(({x, stretch}) => Array.from(x, () => stretch))
    : undefined;
  return {...readings, correlated: readings.rho.some((rho) => rho > 0), stretches};
}

/** One channel of the downward component. */
export const verticalReadings = (x: Float64Array, z: Float64Array, noise: number): Readings =>
  readingsOf([{x, z, response: {re: 1, im: 0, order: 0}, noise}]);

/** All of the readings in another order. */
export function pick(readings: Readings, order: Int32Array): Readings {
  const place = new Int32Array(readings.count);
  for (let k = 0; k < order.length; ++k) place[order[k]] = k;
  const of = (values: Float64Array): Float64Array => Float64Array.from(order, (i) => values[i]);
  return {
    count: order.length,
    x: of(readings.x),
    z: of(readings.z),
    aRe: of(readings.aRe),
    aIm: of(readings.aIm),
    order: Uint8Array.from(order, (i) => readings.order[i]),
    noise: of(readings.noise),
    before: Int32Array.from(order, (i) => (readings.before[i] < 0 ? -1 : place[readings.before[i]])),
    rho: of(readings.rho),
    correlated: readings.correlated,
    channel: Uint8Array.from(order, (i) => readings.channel[i]),
    stretches: readings.stretches && Array.from(order, (i) => readings.stretches![i]),
  };
}
