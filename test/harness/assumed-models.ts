/** Models whose sources are known in closed form, for what intervals are worth where nobody gave a bound. */
import {harmonicMeasure} from "../../lib/potential/poisson.ts";
import {fineNodes, readingsOfTruth} from "./fine-continuum.ts";
import {evenly} from "./synthetic-line.ts";

export interface KnownModel {
  readonly name: string;
  /** Stations, and heights above a flat boundary, m. */
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly support: {readonly from: number; readonly to: number};
  readonly degree: number;
  readonly panel: number;
  /** f on the boundary, on the support and, where the model has tails, off it. */
  readonly source: (t: number) => number;
  /** The true field `height` above the boundary: of all sources, those off the support too. */
  readonly field: (x: number, height: number) => number;
  readonly breaks: readonly number[];
  /** Strips of 20 m and wider, and points of levels. */
  readonly strips: readonly (readonly [from: number, to: number])[];
  readonly points: Float64Array;
  readonly height: number;
  /** Shares of the largest reading. */
  readonly noises: readonly number[];
}

/** [x, depth below the boundary, strength]: four line masses; a line 10 m up sees them 36, 30, 30 and 45 m below itself. */
const MASSES = [
  [-60, 26, 36],
  [0, 20, 30],
  [14, 20, 24],
  [70, 35, 54],
] as const;
const massField = (x: number, height: number): number =>
  MASSES.reduce((sum, [at, depth, l]) => sum + (l * (depth + height)) / ((x - at) ** 2 + (depth + height) ** 2), 0);

const LONG = {
  x: evenly(-200, 200, 401),
  support: {from: -400, to: 400},
  degree: -1,
  source: (t: number) => massField(t, 0),
  field: massField,
  breaks: [],
  strips: [
    [-10, 10],
    [-70, -50],
    [60, 80],
    [-120, -80],
    [-20, 40],
    [100, 120],
  ],
  points: evenly(-120, 120, 25),
  height: 5,
  noises: [0.001, 0.01, 0.05],
} as const;
const swaying = LONG.x.map((x) => 10 + 4 * Math.sin((2 * Math.PI * x) / 53) + 2 * Math.sin((2 * Math.PI * x) / 31 + 1));

function shortLine(half: number): KnownModel {
  const source = (t: number): number => {
    if (Math.abs(t) > half) return 0;
    const s = t + 0.4 * half;
    const bump = Math.abs(s) < 0.25 * half ? Math.cos((Math.PI * s) / (0.5 * half)) ** 2 : 0;
    return bump + 0.7 * Math.exp(-(((t - 0.5 * half) / (0.12 * half)) ** 2));
  };
  const breaks = [-0.65 * half, -0.15 * half];
  const nodes = fineNodes(-half, half, 0.5, breaks);
  const f = nodes.at.map(source);
  return {
    name: `two bumps under a line of ${2 * half} m, 10 m up`,
    x: evenly(0.5 - half, half - 0.5, 2 * half),
    z: new Float64Array(2 * half).fill(10),
    support: {from: -half, to: half},
    degree: -1,
    panel: 2.5,
    source,
    field: (x, z) => readingsOfTruth(nodes, [{reads: "field", x, z, noise: 1}], f)[0],
    breaks,
    strips: [
      [-0.65 * half, -0.15 * half],
      [-0.4 * half - 10, -0.4 * half + 10],
      [0.5 * half - 10, 0.5 * half + 10],
      [-10, 10],
    ],
    points: evenly(-0.8 * half, 0.8 * half, 17),
    height: 5,
    noises: [0.001, 0.01, 0.05],
  };
}

/** Boxes of source [from, to, strength] 30 m below the stations. */
const boxes = (
  name: string,
  parts: readonly (readonly [number, number, number])[],
  degree: number,
  spacing: number,
  noises: readonly number[],
): KnownModel => ({
  name: `${name}, 30 m below stations every ${spacing} m, ${degree < 0 ? "no regional" : `regional ${degree}`}`,
  x: evenly(-300, 300, 600 / spacing + 1),
  z: new Float64Array(600 / spacing + 1).fill(30),
  support: {from: -300, to: 300},
  degree,
  panel: 7.5,
  source: (t) => parts.reduce((sum, [from, to, f]) => (t > from && t < to ? sum + f : sum), 0),
  field: (x, height) => parts.reduce((sum, [from, to, f]) => sum + f * harmonicMeasure(x, height, from, to), 0),
  breaks: parts.flat(),
  strips: [
    [-10, 10],
    [-30, 30],
    [15, 35],
    [150, 170],
  ],
  points: evenly(-120, 120, 25),
  height: 15,
  noises,
});

/** Those on which twice the norm of a smoothed estimate is too little. */
export const DYKE_MODELS: readonly KnownModel[] = [
  boxes("dyke 20 m wide", [[-10, 10, 1]], 1, 5, [0.01, 0.05, 0.1, 0.2, 0.4]),
  boxes("dyke 20 m wide", [[-10, 10, 1]], 1, 10, [0.05, 0.1, 0.2]),
];

export const MODELS: readonly KnownModel[] = [
  {...LONG, name: "four line masses, 10 m up", z: new Float64Array(401).fill(10), panel: 2.5},
  shortLine(40),
  {...LONG, name: "four line masses, 4–16 m up", z: swaying, panel: 1},
  boxes("dyke 20 m wide", [[-10, 10, 1]], -1, 5, [0.01, 0.05, 0.1]),
  ...DYKE_MODELS,
  boxes("dyke 10 m wide", [[-5, 5, 1]], 1, 5, [0.01, 0.05, 0.1, 0.2]),
  boxes(
    "two dykes 20 m wide, 30 m apart, of opposite sign",
    [
      [-10, 10, 1],
      [40, 60, -1],
    ],
    1,
    5,
    [0.01, 0.05, 0.1, 0.2],
  ),
  boxes(
    "slab 120 m wide with a dyke in it",
    [
      [-60, 60, 1],
      [-10, 10, 3],
    ],
    1,
    5,
    [0.01, 0.05, 0.1],
  ),
];
