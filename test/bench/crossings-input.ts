/** An invented survey of fifty blocks, each of lines and ties that cross them, for the case `crossings`. */
import {seededRandom} from "../../lib/numeric/random.ts";

export interface Extent {
  readonly blocks: number;
  readonly lines: number;
  readonly ties: number;
  readonly stations: number;
}

/** 10,000 lines of 1,000 stations. */
export const LARGE: Extent = {blocks: 50, lines: 180, ties: 20, stations: 1_000};
/** 1,000 lines of 1,000 stations. */
export const SMALL: Extent = {blocks: 5, lines: 180, ties: 20, stations: 1_000};

export const crossingsIn = ({blocks, lines, ties}: Extent): number => blocks * lines * ties;

export interface InventedLine {
  readonly id: string;
  readonly isTie: boolean;
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly elevation: Float64Array;
  readonly value: Float64Array;
}

/** m between stations; lines are 10 km long and share out the block that the ties span. */
const STEP = 10;
/** Lines run oblique to the map, where boxes of parallel neighbours overlap: the slow case. */
const AZIMUTH = 37;
/** Where a station is flown off its line at most, m. */
const WANDER = 2;

export function* inventedLines({blocks, lines, ties, stations}: Extent): Generator<InventedLine> {
  const {uniform, normal} = seededRandom(20261202);
  const [sin, cos] = [Math.sin((AZIMUTH * Math.PI) / 180), Math.cos((AZIMUTH * Math.PI) / 180)];
  const side = STEP * (stations - 1);
  for (let block = 0; block < blocks; ++block)
    for (let k = 0; k < lines + ties; ++k) {
      const isTie = k >= lines;
      const across = isTie ? ((k - lines + 0.5) * side) / ties : ((k + 0.5) * side) / lines;
      const made = {
        id: `${isTie ? "T" : "L"}${block + 1}-${k + 1}`,
        isTie,
        x: new Float64Array(stations),
        y: new Float64Array(stations),
        elevation: new Float64Array(stations),
        value: new Float64Array(stations),
      };
      for (let i = 0; i < stations; ++i) {
        const along = i * STEP;
        const off = across + WANDER * (2 * uniform() - 1);
        const u = block * (side + 500) + (isTie ? along : off);
        const v = isTie ? off : along;
        made.x[i] = 500_000 + u * cos + v * sin;
        made.y[i] = 5_000_000 - u * sin + v * cos;
        made.elevation[i] = (isTie ? 75 : 60) + 5 * Math.sin(along / 700);
        made.value[i] = 40 * Math.sin(u / 900) * Math.cos(v / 1300) + 0.5 * normal();
      }
      yield made;
    }
}
