/** Readers of the regional of a whole line, and what windows and numbers have in common with them. */
import {matVecInto, multiplyTransposedInto} from "../numeric/matmul.ts";
import {recent} from "../numeric/recent.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {Functional} from "../operators/functional.ts";
import type {LevelLine} from "../operators/level-cells.ts";
import type {RegionalBasis} from "../operators/regional.ts";
import type {Block} from "../solvers/patches.ts";
import {farField} from "./far-field.ts";
import {farStations, type SharedPart} from "./far-stations.ts";
import {regionalMeans} from "./regional-means.ts";
import {type RegionalReader, regionalReader} from "./regional-reader.ts";
import {remember} from "./remember.ts";
import type {WholeLine} from "./whole-line.ts";

/** Readers of the regional are made for values of a this far apart, as a factor; the nearest one serves. A heuristic. */
const READER_STEP = 12;
/** Readers for one `a` alone, kept: those of one search. */
const READERS_KEPT = 12;

/** A reader of the regional as a window sees it: u_kᵀ W and u_kᵀ G W, modes × terms. */
interface WindowReader {
  readonly weights: Float64Array;
  readonly weightsGram: Float64Array;
}

export interface LineReaders {
  /** The number of the reader for about this `a`: neighbours are made for values of a factor apart. */
  place(a: number): number;
  of(place: number): RegionalReader;
  /** The reader for this `a` itself. */
  for(a: number): RegionalReader;
  /** u_kᵀ R, modes × terms. */
  regionalOn(window: Block): Float64Array;
  on(window: Block, reader: RegionalReader): WindowReader;
  /** Wᵀ Pq. */
  sharedWith(reader: RegionalReader, functional: Functional): SharedPart;
}

/**
 * @param basis regional at the stations in the order of `continuum`, blind to which intervals are to be
 * @param bound M, SI·√m
 * @param height the median one of the stations
 * @param even of the line where it is level, even and of a flat boundary
 */
export function lineReaders(
  continuum: Continuum,
  basis: RegionalBasis,
  bound: number,
  line: () => WholeLine,
  even: LevelLine | undefined,
  height: number,
): LineReaders {
  const {count} = continuum;
  const {terms} = basis;
  const readers = new Map<number, RegionalReader>();
  const exactReaders = recent<number, RegionalReader>(READERS_KEPT);
  const far = even === undefined ? undefined : farStations(continuum, even);
  const field = farField(continuum, terms, height);
  const means = new WeakMap<RegionalReader, ReturnType<typeof regionalMeans>>();
  const blocksOf = new WeakMap<RegionalReader, Float64Array>();
  const nothing = new Float64Array(terms);
  const everywhere = new Float64Array(count);
  let responded: Functional | undefined;
  const seenReaders = new WeakMap<Block, Map<RegionalReader, WindowReader>>();
  const regionals = new WeakMap<Block, Float64Array>();
  const onModes = ({first, last, modes}: Block, vectors: Float64Array): Float64Array => {
    const rows = last - first;
    const part = new Float64Array(terms * rows);
    for (let t = 0; t < terms; ++t) part.set(vectors.subarray(t * count + first, t * count + last), t * rows);
    return multiplyTransposedInto(new Float64Array(modes.count * terms), modes.left, part, modes.count, rows, terms);
  };
  return {
    place: (a) => Math.round(Math.log(a * bound * bound) / Math.log(READER_STEP)),
    of: (place) =>
      remember(readers, place, () => regionalReader(line(), basis, READER_STEP ** place / (bound * bound))),
    for: (a) => exactReaders(a, () => regionalReader(line(), basis, a)),
    regionalOn: (window) => remember(regionals, window, () => onModes(window, basis.rows)),
    on(window, reader) {
      const seen = remember(seenReaders, window, () => new Map<RegionalReader, WindowReader>());
      return remember(seen, reader, () => ({
        weights: onModes(window, reader.weights),
        weightsGram: onModes(window, reader.gramWeights),
      }));
    },
    sharedWith(reader, functional) {
      if (even !== undefined && functional.over !== undefined) {
        const meanOf = remember(means, reader, () => regionalMeans(continuum, even, reader.weights, terms));
        const near = meanOf(functional.over);
        if (near !== undefined) return {near, beyond: nothing};
      }
      if (far !== undefined) {
        const blocks = remember(blocksOf, reader, () => far.blocks(reader.weights, terms));
        const found = far.shared(reader.weights, blocks, terms, functional);
        if (found !== undefined) return found;
      }
      const near = field?.shared(reader.weights, functional);
      if (near !== undefined) return {near, beyond: nothing};
      // All readers of one functional see the same response.
      if (responded !== functional) functional.respondInto(everywhere, continuum, 0, count);
      responded = functional;
      return {near: matVecInto(new Float64Array(terms), reader.weights, everywhere, terms, count), beyond: nothing};
    },
  };
}
