/** How a grid is read between its pixels. A new way is one entry here. */

export interface Sampling {
  readonly name: string;
  /** For help texts. */
  readonly summary: string;
  /** Pixels before the one at or below the place that take part, along each axis. */
  readonly before: number;
  /** @param t in (0, 1), the place beyond that pixel; @returns weights of the pixels that take part, sum 1 */
  weights(t: number): readonly number[];
}

const bilinear = {
  name: "bilinear",
  summary: "straight between the nearest pixels",
  before: 0,
  weights: (t) => [1 - t, t],
} as const satisfies Sampling;

/**
 * Cubic convolution with a = −1/2, exact for parabolas. Source: R. G. Keys, Cubic convolution interpolation for
 * digital image processing, IEEE Trans. ASSP 29 (1981) 1153–1160, equation 15 (from memory).
 */
const cubic = {
  name: "cubic",
  summary: "cubic convolution over four pixels each way",
  before: 1,
  weights: (t) => [
    t * (t * (1 - 0.5 * t) - 0.5),
    1 + t * t * (1.5 * t - 2.5),
    t * (0.5 + t * (2 - 1.5 * t)),
    t * t * (0.5 * t - 0.5),
  ],
} as const satisfies Sampling;

export const SAMPLINGS = [bilinear, cubic] as const;

export type SamplingName = (typeof SAMPLINGS)[number]["name"];

export const samplingNamed = (name: SamplingName): Sampling => SAMPLINGS.find((each) => each.name === name)!;

/** Used where none is asked for. */
export const DEFAULT_SAMPLING = bilinear.name;

/** A place this near to a pixel's centre, in pixels, is the centre: other pixels are not touched. */
const CENTRED = 1e-6;

/** The pixels along one axis that a place takes part of, with their weights. */
export interface Taps {
  readonly first: number;
  readonly weights: readonly number[];
}

const ONE: readonly number[] = [1];

/** @param place in pixels, whole numbers at their centres */
export function tapsAt({before, weights}: Sampling, place: number): Taps {
  const nearest = Math.round(place);
  if (Math.abs(place - nearest) <= CENTRED) return {first: nearest, weights: ONE};
  const below = Math.floor(place);
  return {first: below - before, weights: weights(place - below)};
}
