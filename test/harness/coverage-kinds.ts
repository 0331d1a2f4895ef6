/** Set-ups and kinds of interval whose coverage is measured. A further kind, or a band, is one entry here. */
import {resolutionOf, stretchAt} from "../../lib/inverse/averages.ts";
import type {IntervalSolver} from "../../lib/inverse/intervals.ts";
import {type Functional, meanOver} from "../../lib/operators/functional.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import type {Reads, Sensor} from "./fine-continuum.ts";
import {seen} from "./fine-continuum.ts";
import {intervalsOf, readAt, VERTICAL} from "./interval-case.ts";
import {evenly} from "./synthetic-line.ts";

export interface CoverageSetUp {
  readonly name: string;
  readonly channels: readonly {readonly reads: Reads; readonly noise: number}[];
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly degree: number;
  readonly layout: "whole" | "windows";
}

/** Sources anywhere on 60:540 under a line of 600 m, 0.5 mGal (root-mean-square) at most. */
export const SUPPORT = {from: 60, to: 540} as const;
export const BOUND = 0.5 * Math.sqrt(SUPPORT.to - SUPPORT.from);
const HEIGHT = 10;
/** Of field readings, mGal; of gradients per metre of height. */
const NOISE = 0.02;

const FIELD = [{reads: "field", noise: NOISE}] as const;
const BOTH = [...FIELD, {reads: "gradient", noise: NOISE / HEIGHT}] as const;
const EVEN = {x: evenly(0, 600, 121), z: new Float64Array(121).fill(HEIGHT)};
const UNEVEN = {x: EVEN.x, z: EVEN.x.map((t) => HEIGHT + 4 * Math.sin(t / 8.4) + 2 * Math.sin(t / 4.9 + 1))};
const SPARSE = {x: evenly(0, 600, 61), z: new Float64Array(61).fill(HEIGHT)};

export const SET_UPS: readonly CoverageSetUp[] = [
  {name: "even, no regional", channels: FIELD, ...EVEN, degree: -1, layout: "whole"},
  {name: "even, regional 1", channels: FIELD, ...EVEN, degree: 1, layout: "whole"},
  {name: "even, no regional, windows", channels: FIELD, ...EVEN, degree: -1, layout: "windows"},
  {name: "even, regional 1, windows", channels: FIELD, ...EVEN, degree: 1, layout: "windows"},
  {name: "field and gradient, regional 1", channels: BOTH, ...SPARSE, degree: 1, layout: "whole"},
  {name: "uneven 4–16 m, regional 1", channels: FIELD, ...UNEVEN, degree: 1, layout: "whole"},
  {name: "uneven 4–16 m, regional 1, windows", channels: FIELD, ...UNEVEN, degree: 1, layout: "windows"},
];

export const sensorsOf = ({channels, x, z}: CoverageSetUp): readonly Sensor[] =>
  channels.flatMap(({reads, noise}) => Array.from(x, (at, i) => ({reads, x: at, z: z[i], noise})));

const readingsFor = ({channels, x, z}: CoverageSetUp): Readings =>
  readingsOf(
    channels.map(({reads, noise}) => ({
      x,
      z,
      noise,
      response: reads === "field" ? VERTICAL : {re: 0, im: -1, order: 1},
    })),
  );

/** One number asked, the weights that answer it from the readings as they stand, and what is stated of it. */
interface Answered {
  readonly q: (t: number) => number;
  /** Where q jumps. */
  readonly breaks: readonly number[];
  readonly weights: Float64Array;
  readonly halfWidth: number;
  readonly bias: number;
}

export interface Kind {
  readonly name: string;
  /** The answers that are promised together: a draw counts as covered where all of them cover. */
  answers(setUp: CoverageSetUp, confidence: number): readonly Answered[];
}

/** Estimates are linear: weights for whitened readings in order of chainage become those of the readings as given. */
function answered(
  setUp: CoverageSetUp,
  confidence: number,
  ask: (solver: IntervalSolver) => {
    readonly functional: Functional;
    readonly q: (t: number) => number;
    readonly breaks: readonly number[];
    readonly times?: number;
  },
): readonly Answered[] {
  const readings = readingsFor(setUp);
  const solver = intervalsOf({
    ...{x: readings.x, z: readings.z, readings, support: [SUPPORT], noise: NOISE, bound: BOUND},
    ...{degree: setUp.degree, layout: setUp.layout, confidence},
  });
  const {functional, q, breaks, times = 1} = ask(solver);
  const {weights, halfWidth, bias} = solver.affine(functional);
  const own = new Float64Array(readings.count);
  const order = Int32Array.from(readings.x.keys()).sort((i, j) => readings.x[i] - readings.x[j] || i - j);
  order.forEach((place, k) => {
    own[place] = (times * weights[k]) / readings.noise[place];
  });
  return [{q: (t) => times * q(t), breaks, weights: own, halfWidth: times * halfWidth, bias: times * bias}];
}

const over = (from: number, to: number) => ({
  functional: meanOver({from, to}, [SUPPORT]),
  q: (t: number): number => (t > from && t < to ? 1 / (to - from) : 0),
  breaks: [from, to],
});

const above = (x: number, z: number) => ({
  functional: readAt(x, z, [SUPPORT]),
  q: (t: number): number => seen({reads: "field", x, z}, t),
  breaks: [],
});

export const KINDS: readonly Kind[] = [
  {name: "mean of a 40 m strip", answers: (setUp, level) => answered(setUp, level, () => over(240, 280))},
  {name: "mean of a 12 m strip", answers: (setUp, level) => answered(setUp, level, () => over(301, 313))},
  {
    name: "total of a 380 m strip",
    answers: (setUp, level) => answered(setUp, level, () => ({...over(90, 470), times: 380})),
  },
  {
    name: "average over the resolution",
    answers: (setUp, level) =>
      answered(setUp, level, (solver) => {
        const panels = panelsOn([SUPPORT], HEIGHT / 4);
        // The multiplier of a source that the bound just holds back: one standard deviation of reading against M.
        const resolution = resolutionOf(solver, panels, 1 / BOUND ** 2, setUp.x);
        const {from, to} = stretchAt(panels, resolution, 433)!;
        return over(from, to);
      }),
  },
  {name: "field 3 m above the boundary", answers: (setUp, level) => answered(setUp, level, () => above(352, 3))},
  {name: "field 8 m above the boundary", answers: (setUp, level) => answered(setUp, level, () => above(188, 8))},
];
