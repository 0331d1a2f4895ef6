/** Survey lines made up for tests: chainage only, one clearance. */
import type {LevelSetting} from "../../lib/continuation/level-profile.ts";
import type {Strip} from "../../lib/inverse/nouns.ts";
import {discrepancy} from "../../lib/inverse/rules/discrepancy.ts";
import {normalDeviates, seededRandom} from "../../lib/numeric/random.ts";
import {gravity} from "../../lib/potential/gravity.ts";
import {BOUNDARY_FIELD, type LevelQuantity} from "../../lib/potential/level-quantity.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";

/** Evenly spaced numbers from `from` to `to`, both included. */
export const evenly = (from: number, to: number, count: number): Float64Array =>
  Float64Array.from({length: count}, (_, i) => from + ((to - from) * i) / (count - 1));

export interface SyntheticLine {
  readonly chainage: Float64Array;
  /** Above the boundary, m. */
  readonly clearance: number | Float64Array;
  readonly values: Float64Array;
  readonly noise: number | "record";
  readonly observable?: Observable;
  readonly id?: string;
}

export function syntheticLine({
  chainage,
  clearance,
  values,
  noise,
  observable = gravity,
  id = "made-up",
}: SyntheticLine): SurveyLine {
  const count = chainage.length;
  return {
    id,
    group: "G1",
    stations: {
      count,
      row: Float64Array.from({length: count}, (_, i) => i + 2),
      chainage,
      offset: new Float64Array(count),
      x: undefined,
      y: undefined,
      elevation: undefined,
      clearance: typeof clearance === "number" ? new Float64Array(count).fill(clearance) : clearance,
      ground: undefined,
    },
    channels: [{role: "value", observable, values, noise}],
    file: "made-up.csv",
    direction: 1,
    omitted: 0,
    locate: undefined,
    track: undefined,
    notices: [],
  };
}

/** `values` with white noise of standard deviation `sigma`, the same for the same seed. */
export function withNoise(values: Float64Array, sigma: number, seed: number): Float64Array {
  const deviates = normalDeviates(seededRandom(seed), values.length);
  return values.map((value, i) => value + sigma * deviates[i]);
}

export interface PlainSettings {
  readonly support?: Settings["model"]["support"];
  readonly panel?: number;
  readonly regional?: Settings["model"]["regional"];
  readonly bound?: Settings["bound"];
  readonly levels?: readonly LevelSetting[];
  readonly strips?: readonly Strip[];
  readonly confidence?: number;
  readonly levelQuantity?: LevelQuantity;
  readonly fieldDirection?: Settings["fieldDirection"];
  readonly boundary?: Settings["model"]["boundary"];
}

export const plainSettings = (own: PlainSettings = {}): Settings => ({
  acquisition: {
    columns: new Map(),
    clearance: undefined,
    elevation: undefined,
    sensorOffset: 0,
    elevationDatum: undefined,
    groundDatum: undefined,
    geoidOffset: undefined,
    crs: undefined,
    outCrs: undefined,
    split: undefined,
    channels: [],
    profiles: "rows",
  },
  fieldDirection: own.fieldDirection,
  model: {boundary: own.boundary, support: own.support ?? [], panel: own.panel, regional: own.regional ?? 1},
  bound: own.bound ?? discrepancy,
  wanted: {
    levels: own.levels ?? [{kind: "above-boundary", height: 0}],
    strips: own.strips ?? [],
    levelQuantity: own.levelQuantity ?? BOUNDARY_FIELD,
    confidence: own.confidence ?? 0.95,
  },
  processing: undefined,
});
