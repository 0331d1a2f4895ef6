/** An invented line of 2,000 stations with uneven heights and spacings, for the case `uneven`. */
import {seededRandom} from "../../lib/numeric/random.ts";
import {harmonicMeasure} from "../../lib/potential/poisson.ts";

const STATIONS = 2_000;
const SPACING = 2;
const NOISE = 0.1;
/** From and to as shares of the line, and density. */
const STRIPS = [
  [0.1, 0.14, 30],
  [0.3, 0.31, -50],
  [0.5, 0.7, 10],
  [0.8, 0.82, 40],
] as const;

/** As both sides of the case read it; lengths in m. */
export interface UnevenInput {
  readonly x: readonly number[];
  readonly z: readonly number[];
  readonly value: readonly number[];
  readonly noise: number;
  readonly rms: number;
  readonly support: readonly [from: number, to: number];
  /** Widest panel. */
  readonly panel: number;
  readonly confidence: number;
}

/** As both sides write them; times in s of the processor, the source alone and all. */
export interface UnevenAnswers {
  readonly density: readonly number[];
  readonly lower: readonly number[];
  readonly upper: readonly number[];
  readonly multiplier: number;
  readonly source: number;
  readonly all: number;
}

/** Heights between 18 and 22 m, ten spacings. */
export function unevenInput(panel: number): UnevenInput {
  const random = seededRandom(20261202);
  const length = STATIONS * SPACING;
  const x = Array.from({length: STATIONS}, (_, i) => i * SPACING + 0.3 * random.normal()).sort((a, b) => a - b);
  const z = x.map((at) => 20 + 2 * Math.sin(at / 310));
  const value = x.map((at, i) => {
    let field = NOISE * random.normal();
    for (const [from, to, density] of STRIPS) field += density * harmonicMeasure(at, z[i], from * length, to * length);
    return field;
  });
  return {x, z, value, noise: NOISE, rms: 15, support: [0, length], panel, confidence: 0.95};
}
