/**
 * Numbers asked of f: a mean over stretches of the boundary, or the field at a point above it. Each knows its own
 * norm in L²(S) and, exactly, what every reading has in common with it.
 */
import {type BoundaryLine, boundaryAt, breaksWithin} from "../geometry/boundary-line.ts";
import {clip, type Interval, type Support, totalLength} from "../geometry/interval.ts";
import {matVecInto} from "../numeric/matmul.ts";
import {amplitudeIm, amplitudeRe, kernelAt, kernelOverPiece, type Response} from "../potential/kernel.ts";
import {logarithmOver, type Pole, pairOver} from "../potential/pair.ts";
import {type Continuum, meanAt, type Nodes, nodesFor, sharedNodes} from "./continuum.ts";
import {whitenedInto} from "./correlated-noise.ts";

export interface Functional {
  /** Where it looks, m of chainage: windows of readings are chosen around it. */
  readonly from: number;
  readonly to: number;
  /** How far it spreads beyond that: the height of the point, m. */
  readonly spread: number;
  /** ‖q‖² in L²(S), 1/m; infinite for a point of the boundary. */
  readonly normSquared: number;
  /** A mean as the weighted sum of means over so many equal parts of where it looks; absent for a point. */
  cut?(parts: number): readonly {readonly mean: Functional; readonly share: number}[];
  /** ∫|q| over all that there could be of q, where q is nowhere negative: its kernel then fades as that of a point does. */
  readonly mass?: number;
  /** What it is the mean over, where that lies in one piece within the support of a flat boundary. */
  readonly over?: Interval;
  /** The point it is the field at, over a flat boundary, where its kernel is of order 0. */
  readonly pole?: Pole;
  /**
   * Itself with its places counted from `origin` and rounded to `part`, among stations on a support that holds it; the
   * key tells apart what then differs. Absent for a number that is like no other.
   */
  moved?(origin: number, part: number, stations: Continuum): Moved;
  /**
   * Writes ⟨p_i, q⟩, whitened, for the readings `first … last − 1` to the head of `target`; of p_i what is left beside
   * means that are known exactly.
   */
  respondInto(target: Float64Array, continuum: Continuum, first: number, last: number): Float64Array;
}

interface Moved {
  readonly key: string;
  readonly functional: Functional;
}

type Respond = Functional["respondInto"];

/** `at` from `origin` on, to whole parts. */
const placed = (at: number, origin: number, part: number): number => Math.round((at - origin) / part) * part;

/** `whole` is about all of f; where means of it are known, what they have in common with q is taken off. */
const besideKnown =
  (whole: Respond): Respond =>
  (target, continuum, first, last) => {
    whole(target, continuum, first, last);
    if (continuum.known === undefined) return target;
    const {means, shares} = continuum.known;
    const common = whole(new Float64Array(means.count), means, 0, means.count);
    for (let t = 0; t < means.count; ++t)
      for (let i = first; i < last; ++i) target[i - first] -= shares[t * continuum.count + i] * common[t];
    return target;
  };

interface Piece {
  readonly a: number;
  readonly ya: number;
  readonly b: number;
  readonly yb: number;
}

/** Straight pieces of the boundary within some stretches of it. */
const piecesOf = (parts: Support, boundary: BoundaryLine | undefined): readonly Piece[] =>
  parts.flatMap(({from, to}) => {
    const stops = [from, ...breaksWithin(boundary, from, to), to];
    return stops.slice(1).map((end, k) => {
      const start = stops[k];
      return {a: start, ya: boundaryAt(boundary, start), b: end, yb: boundaryAt(boundary, end)};
    });
  });

/** ∫ of the kernel of a sensor at (x, z) over pieces of the boundary. */
function kernelOver(pieces: readonly Piece[], x: number, z: number, aRe: number, aIm: number, order: number): number {
  let sum = 0;
  for (const {a, ya, b, yb} of pieces) sum += kernelOverPiece(aRe, aIm, order, a - x, z - ya, b - x, z - yb);
  return sum;
}

/**
 * Mean of f over `interval`; outside the support f is zero, and counts as zero.
 * @param stretches where the mean is over parts of the interval only: these
 */
export function meanOver(
  interval: Interval,
  support: Support,
  boundary?: BoundaryLine,
  stretches: Support = [interval],
): Functional {
  const parts = stretches.flatMap((stretch) => clip(stretch, support));
  const length = totalLength(stretches);
  const inside = parts.reduce((sum, part) => sum + part.to - part.from, 0);
  const pieces = piecesOf(parts, boundary);
  const [only] = parts;
  const isWhole =
    boundary === undefined && parts.length === 1 && only!.from === interval.from && only!.to === interval.to;
  return {
    from: interval.from,
    to: interval.to,
    spread: 0,
    normSquared: inside / (length * length),
    mass: inside / length,
    ...(isWhole ? {over: interval, moved: movedMean(interval)} : {}),
    cut: (count) =>
      Array.from({length: count}, (_, k) => {
        const at = (place: number): number => interval.from + ((interval.to - interval.from) * place) / count;
        const piece = {from: at(k), to: k + 1 === count ? interval.to : at(k + 1)};
        const within = clip(piece, stretches);
        return within.length === 0
          ? []
          : [{mean: meanOver(piece, support, boundary, within), share: totalLength(within) / length}];
      }).flat(),
    respondInto: besideKnown((target, continuum, first, last) => {
      const {x, z, aRe, aIm, order, stretches} = continuum;
      const sumAt = (i: number): number => {
        const stretch = stretches?.[i];
        return stretch === undefined
          ? kernelOver(pieces, x[i], z[i], aRe[i], aIm[i], order[i])
          : totalLength(clip(stretch, parts)) / (stretch.to - stretch.from);
      };
      if (continuum.correlated) return whitenedInto(target, continuum, first, last, (i) => sumAt(i) / length);
      for (let i = first; i < last; ++i) target[i - first] = sumAt(i) / (length * continuum.noise[i]);
      return target;
    }),
  };
}

const movedMean =
  ({from, to}: Interval): NonNullable<Functional["moved"]> =>
  (origin, part, {support}) => {
    const start = placed(from, origin, part);
    const long = placed(to - from, 0, part);
    return {key: `mean ${start} ${long}`, functional: meanOver({from: start, to: start + long}, support)};
  };

/**
 * What a sensor of the given response would read of f at height z above chainage x. On a flat boundary in closed form;
 * on any other by nodes that lie close under the point too.
 */
export function fieldAt(x: number, z: number, response: Response, continuum: Continuum): Functional {
  const aRe = amplitudeRe(response);
  const aIm = amplitudeIm(response);
  const {order} = response;
  const above = z - boundaryAt(continuum.boundary, x);
  /** What the mean over a stretch has in common with the point. */
  const meanOf = (stretch: Interval): number =>
    kernelOver(piecesOf([stretch], continuum.boundary), x, z, aRe, aIm, order) / (stretch.to - stretch.from);
  if (continuum.boundary === undefined) {
    const [logRe, logIm, slopeRe, slopeIm] = logarithmOver(continuum.support, x, z);
    const point: Pole = {x, z, aRe, aIm, order, logRe, logIm, slopeRe, slopeIm};
    return {
      from: x,
      to: x,
      spread: above,
      normSquared: pairOver(continuum.support, point, point),
      ...(order === 0 && aRe === 0 ? {mass: Math.PI * Math.abs(aIm)} : {}),
      ...(order === 0 ? {pole: point} : {}),
      moved(origin, part, stations) {
        const at = placed(x, origin, part);
        const key = `field ${[at, z, aRe, aIm, order].join(" ")}`;
        return {key, functional: fieldAt(at, z, response, stations)};
      },
      respondInto: besideKnown((target, readings, first, last) => {
        const {support, poles, noise, stretches} = readings;
        const rawAt = (i: number): number => {
          const stretch = stretches?.[i];
          return stretch === undefined ? pairOver(support, poles[i], point) : meanOf(stretch);
        };
        if (readings.correlated) return whitenedInto(target, readings, first, last, rawAt);
        for (let i = first; i < last; ++i) target[i - first] = rawAt(i) / noise[i];
        return target;
      }),
    };
  }
  const weightsOn = (nodes: Nodes): Float64Array =>
    nodes.at.map((at, k) => kernelAt(aRe, aIm, order, at - x, z - nodes.y[k]) * nodes.rootWeight[k]);
  const own = weightsOn(nodesFor(continuum, 0, 0, {x, z}));
  const byOwnNodes = besideKnown((target, readings, first, last) => {
    const nodes = nodesFor(readings, first, last, {x, z});
    const weights = weightsOn(nodes);
    const sumAt = (i: number): number => {
      const stretch = readings.stretches?.[i];
      if (stretch !== undefined) return meanOf(stretch);
      let sum = 0;
      for (let k = 0; k < nodes.count; ++k)
        sum +=
          weights[k] *
          nodes.rootWeight[k] *
          kernelAt(
            readings.aRe[i],
            readings.aIm[i],
            readings.order[i],
            nodes.at[k] - readings.x[i],
            readings.z[i] - nodes.y[k],
          );
      return sum;
    };
    if (readings.correlated) return whitenedInto(target, readings, first, last, sumAt);
    for (let i = first; i < last; ++i) target[i - first] = sumAt(i) / readings.noise[i];
    return target;
  });
  return {
    from: x,
    to: x,
    spread: above,
    normSquared: own.reduce((sum, weight) => sum + weight * weight, 0),
    respondInto(target, readings, first, last) {
      // Elements no longer than the point is high keep their distance from it, on slopes up to 60°.
      const shared = sharedNodes(readings, first, last);
      if (shared !== undefined && above >= shared.nodes.longest)
        return matVecInto(
          target.subarray(0, last - first),
          shared.matrix,
          weightsOn(shared.nodes),
          last - first,
          shared.nodes.count,
        );
      return byOwnNodes(target, readings, first, last);
    },
  };
}

/** f itself at a point of the boundary: not bounded by any norm, but it has an averaging kernel. */
export const densityAt = (x: number, boundary?: BoundaryLine): Functional => {
  const y = boundaryAt(boundary, x);
  return {
    from: x,
    to: x,
    spread: 0,
    normSquared: Infinity,
    ...(boundary === undefined
      ? {
          moved: (origin: number, part: number): Moved => {
            const at = placed(x, origin, part);
            return {key: `density ${at}`, functional: densityAt(at)};
          },
        }
      : {}),
    respondInto: besideKnown((target, continuum, first, last) => {
      const {aRe, aIm, order, noise, z, stretches} = continuum;
      const rawAt = (i: number): number => {
        const stretch = stretches?.[i];
        return stretch === undefined
          ? kernelAt(aRe[i], aIm[i], order[i], x - continuum.x[i], z[i] - y)
          : meanAt(stretch, x);
      };
      if (continuum.correlated) return whitenedInto(target, continuum, first, last, rawAt);
      for (let i = first; i < last; ++i) target[i - first] = rawAt(i) / noise[i];
      return target;
    }),
  };
};
