/** Surveys of lines that cross, as tables: over a body that runs north for ever, its field in closed form. */
import {seededRandom} from "../../lib/numeric/random.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {amplitudeIm, amplitudeRe, kernelOverPiece, type Response} from "../../lib/potential/kernel.ts";

/** Easting of the zero of the places below, on the central meridian of UTM zone 33: longitude 15° exactly. */
export const EAST = 500_000;
const NORTH = 5_900_000;

/** Where the body lies on the boundary, metres east of the zero. */
const BODY = {from: 480, to: 540};
const STRENGTH_NT = 400;

export interface FlownLine {
  readonly id: string;
  /** Metres east and north of the zero. */
  readonly from: readonly [number, number];
  readonly to: readonly [number, number];
  /** Metres between stations. */
  readonly step?: number;
  /** Above the boundary, m. */
  readonly height: number;
  /** What is wrong with the line, nT. */
  readonly shift?: number;
}

/** What a sensor reads in nT, x metres east and z above the boundary. */
export function readingAt(x: number, z: number, response: Response = fieldVertical.response()): number {
  const [a, b] = [BODY.from - x, BODY.to - x];
  return STRENGTH_NT * kernelOverPiece(amplitudeRe(response), amplitudeIm(response), response.order, a, z, b, z);
}

export interface Flight {
  /** nT. */
  readonly noise: number;
  readonly response?: Response;
  readonly seed?: number;
}

/** `line,x,y,elevation,value`; the boundary is at elevation 0. */
export function flownText(lines: readonly FlownLine[], {noise, response, seed = 7}: Flight): string {
  const {normal} = seededRandom(seed);
  const rows = ["line,x,y,elevation,value"];
  for (const {id, from, to, step = 5, height, shift = 0} of lines) {
    const steps = Math.round(Math.hypot(to[0] - from[0], to[1] - from[1]) / step);
    for (let k = 0; k <= steps; ++k) {
      const x = from[0] + ((to[0] - from[0]) * k) / steps;
      const y = from[1] + ((to[1] - from[1]) * k) / steps;
      const value = readingAt(x, height, response) + shift + noise * normal();
      rows.push(`${id},${EAST + x},${NORTH + y},${height},${value.toFixed(6)}`);
    }
  }
  return `${rows.join("\n")}\n`;
}
