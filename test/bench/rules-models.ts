/**
 * Models with known sources at the boundary, one length unit between readings: a long line over four line masses (level
 * or draped), and a short line over a source that ends where it does.
 */
import {levelRowInto} from "../../lib/continuation/field-on-level.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {applyInto, type ForwardOperator, forwardOperator} from "../../lib/operators/forward.ts";
import {type Panels, panelsOn} from "../../lib/operators/panels.ts";
import {verticalReadings} from "../../lib/operators/readings.ts";
import {regionalBasis} from "../../lib/operators/regional.ts";
import {type WhitenedSystem, whiten} from "../../lib/operators/whitened.ts";
import {massesAt} from "../harness/four-masses.ts";
import {evenly} from "../harness/synthetic-line.ts";

export interface Model {
  readonly name: string;
  readonly height: Float64Array;
  readonly x: Float64Array;
  readonly clean: Float64Array;
  readonly support: readonly {readonly from: number; readonly to: number}[];
  readonly panel: number;
  /** Where the source is compared, and the truth there. */
  readonly at: Float64Array;
  readonly truth: Float64Array;
}

/** @param ground below the datum of the masses; @param height of the stations above the ground */
function longLine(name: string, ground: number, height: (x: number) => number): Model {
  const x = evenly(-200, 200, 401);
  const at = x.filter((t) => Math.abs(t) <= 120);
  const heights = x.map(height);
  return {
    name,
    height: heights,
    x,
    clean: x.map((t, i) => massesAt(t, ground - heights[i]!)),
    support: [{from: -400, to: 400}],
    panel: heights.reduce((least, h) => Math.min(least, h), Infinity) / 4,
    at,
    truth: at.map((t) => massesAt(t, ground)),
  };
}

function shortLine(name: string, half: number): Model {
  const source = (t: number): number =>
    (Math.abs(t + 0.4 * half) < 0.25 * half ? Math.cos((Math.PI * (t + 0.4 * half)) / (0.5 * half)) ** 2 : 0) +
    0.7 * Math.exp(-(((t - 0.5 * half) / (0.12 * half)) ** 2));
  const x = evenly(0.5 - half, half - 0.5, 2 * half);
  const height = new Float64Array(x.length).fill(10);
  const support = [{from: -half, to: half}];
  const fine = forwardOperator(verticalReadings(x, height, 1), panelsOn(support, 0.02));
  return {
    name,
    height,
    x,
    clean: applyInto(new Float64Array(x.length), fine, fine.panels.centre.map(source)),
    support,
    panel: 1,
    at: x,
    truth: x.map(source),
  };
}

const MODELS = {
  level10: () => longLine("long line, 10 up", 10, () => 10),
  level20: () => longLine("long line, 20 up", 20, () => 20),
  draped: () =>
    longLine(
      "long line, 4 to 16 up",
      10,
      (x) => 10 + 4 * Math.sin((2 * Math.PI * x) / 53) + 2 * Math.sin((2 * Math.PI * x) / 31 + 1),
    ),
  short4: () => shortLine("short line, 4 heights", 20),
  short8: () => shortLine("short line, 8 heights", 40),
  short20: () => shortLine("short line, 20 heights", 100),
} as const;

/** A model, the noise as a share of the largest reading, and the target for the median of the discrepancy rule. */
export interface Setting {
  readonly model: keyof typeof MODELS;
  readonly shares: readonly number[];
  readonly target?: number;
}

export const SETTINGS: readonly Setting[] = [
  {model: "level10", shares: [0.001, 0.01, 0.05], target: 1.5},
  {model: "level20", shares: [0.001, 0.01, 0.05], target: 2},
  {model: "draped", shares: [0.001, 0.01, 0.05]},
  {model: "short4", shares: [1e-4, 1e-3, 1e-2]},
  {model: "short8", shares: [1e-4, 1e-3, 1e-2]},
  {model: "short20", shares: [1e-4, 1e-3, 1e-2]},
];

export const modelOf = ({model}: Setting): Model => MODELS[model]();

/** A model with noise: one system a draw, and the error of any source. */
export interface Posed {
  readonly length: number;
  readonly places: Float64Array;
  draw(seed: number): WhitenedSystem;
  /** Root-mean-square error over root-mean-square of the truth, the source read between panel centres. */
  error(density: Float64Array): number;
}

/** @param share noise over the largest reading; @param told what the noise is said to be over what it is */
export function posed(model: Model, share: number, told = 1): Posed {
  const {x, height, clean, support, at, truth} = model;
  const noise = share * clean.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  const panels: Panels = panelsOn(support, model.panel);
  const readings = verticalReadings(x, height, told * noise);
  const operator = forwardOperator(readings, panels);
  const basis = regionalBasis(readings, -1);
  const rows = new Float64Array(at.length * panels.count);
  for (let i = 0; i < at.length; ++i)
    levelRowInto(rows, i * panels.count, panels, at[i]!, 0, 0, {re: 1, im: 0, order: 0});
  const ground: ForwardOperator = {readings: at.length, panels, matrix: rows};
  const power = truth.reduce((sum, f) => sum + f * f, 0);
  return {
    length: support.reduce((sum, {from, to}) => sum + to - from, 0),
    places: x,
    draw: (seed) => {
      const deviates = normalDeviates(seededRandom(seed), x.length);
      return whiten(
        operator,
        readings,
        clean.map((value, i) => value + noise * deviates[i]!),
        basis,
      );
    },
    error: (density) => {
      const found = applyInto(new Float64Array(at.length), ground, density);
      return Math.sqrt(found.reduce((sum, f, i) => sum + (f - truth[i]!) ** 2, 0) / power);
    },
  };
}
