/**
 * Invented line studies for tests of products and report: a thin strip below a line, its field
 * from the closed form, a smeared strip for the estimate, plausible intervals. Nothing here was
 * inverted; what tests may rely on are the closed forms and the exact relations named below.
 *
 * Field of a thin horizontal strip of boundary field f₀ on (a, b), seen from (x, z):
 * f₀ · (angle subtended)/π (Blakely, Potential Theory in Gravity and Magnetic Applications, 1995, from memory).
 */
import type {LevelProfile, LevelSetting} from "../../lib/continuation/level-profile.ts";
import {ModelError} from "../../lib/errors.ts";
import type {BoundChoice, IntervalBasis, Strip, StripEstimate, TradeoffCurve} from "../../lib/inverse/nouns.ts";
import {doubt, type Notice, remark} from "../../lib/notice.ts";
import {seededRandom} from "../../lib/numeric/random.ts";
import {panelsOn} from "../../lib/operators/panels.ts";
import {fieldVertical} from "../../lib/potential/field-vertical.ts";
import {BOUNDARY_FIELD} from "../../lib/potential/level-quantity.ts";
import type {Observable} from "../../lib/potential/observable.ts";
import type {RunFrame} from "../../lib/products/product.ts";
import type {LineOutcome, LineStudy, RowBand, RowOutcome} from "../../lib/study/outcome.ts";
import type {Settings} from "../../lib/study/settings.ts";
import type {SurveyLine} from "../../lib/survey/line.ts";
import type {Survey} from "../../lib/survey/survey.ts";

export interface FixtureOptions {
  readonly id?: string;
  readonly seed?: number;
  readonly observable?: Observable;
  /** Boundary field over the strip, SI. */
  readonly strength?: number;
  readonly noise?: number;
  readonly from?: number;
  readonly to?: number;
  readonly step?: number;
  readonly support?: readonly [number, number];
  /** Easting of the line; undefined: only chainage is known. */
  readonly easting?: number | undefined;
  readonly coordinates?: "projected" | "degrees" | "none";
  readonly basis?: IntervalBasis;
  readonly reversed?: boolean;
  readonly levels?: readonly LevelSetting[];
  readonly strips?: readonly Strip[];
  readonly notices?: readonly Notice[];
}

const STRIPS: readonly Strip[] = [
  {name: "dyke", from: 92, to: 112, group: undefined},
  {name: "rubble", from: 150, to: 180, group: undefined},
];

export const LEVELS: readonly LevelSetting[] = [
  {kind: "above-boundary", height: 0},
  {kind: "above-ground", height: 2},
];

const BODY = {from: 92, to: 112} as const;

/** Share of the half-turn that (a, b) subtends at (x, z). */
const seen = (x: number, z: number, a: number, b: number): number =>
  (Math.atan2(b - x, z) - Math.atan2(a - x, z)) / Math.PI;

/**
 * A curve that obeys d misfit/d norm² = −α exactly: a diagonal problem with singular values sₖ and
 * coefficients cₖ, scaled so that at `multiplier` it passes through `misfit` and `norm`.
 */
function diagonalCurve(multiplier: number, misfit: number, norm: number): TradeoffCurve {
  const modes = 40;
  const squares = Float64Array.from({length: modes}, (_, k) => 3e3 * Math.exp(-0.45 * k));
  const coefficients = Float64Array.from(
    {length: modes},
    (_, k) => 60 * Math.exp(-0.24 * k) + 1 + 0.3 * Math.sin(5 * k),
  );
  const at = (a: number): {misfit: number; square: number; degrees: number} => {
    let e = 0;
    let n = 0;
    let degrees = 0;
    for (let k = 0; k < modes; ++k) {
      const s = squares[k]!;
      const c = coefficients[k]!;
      e += ((a * c) / (s + a)) ** 2;
      n += (s * c * c) / (s + a) ** 2;
      degrees += s / (s + a);
    }
    return {misfit: e, square: n, degrees};
  };
  const chosen = 0.5;
  const anchor = at(chosen);
  const scale = norm / Math.sqrt(anchor.square);
  const weight = (multiplier / chosen) * scale * scale;
  const rest = misfit - weight * anchor.misfit;
  const alphas = Float64Array.from({length: 61}, (_, k) => chosen * 10 ** ((k - 32) / 8));
  const points = Array.from(alphas, at);
  return {
    multiplier: alphas.map((a) => (a / chosen) * multiplier),
    misfit: Float64Array.from(points, (p) => weight * p.misfit + rest),
    norm: Float64Array.from(points, (p) => scale * Math.sqrt(p.square)),
    degreesOfFreedom: Float64Array.from(points, (p) => p.degrees),
  };
}

export function lineStudy(options: FixtureOptions = {}): LineStudy {
  const {
    id = "L101",
    seed = 1,
    observable = fieldVertical,
    strength = 120e-9,
    noise = 0.4e-9,
    from = 0,
    to = 220,
    step = 1,
    support = [-30, 250],
    easting = 432_100,
    coordinates = "projected",
    basis = "assumed-bound",
    reversed = false,
    levels = LEVELS,
    strips = STRIPS,
    notices = [],
  } = options;
  const random = seededRandom(seed);
  const count = Math.round((to - from) / step) + 1;
  const chainage = Float64Array.from({length: count}, (_, i) => (reversed ? to - i * step : from + i * step));
  const ground = chainage.map((x) => 41 + 0.6 * Math.sin(x / 37));
  const clearance = chainage.map((x) => 6 + 0.8 * Math.sin(x / 23 + seed) + 0.4 * Math.sin(x / 7));
  const boundary = 40;
  const height = chainage.map((_, i) => ground[i]! + clearance[i]! - boundary);
  const field = chainage.map((x, i) => strength * seen(x, height[i]!, BODY.from, BODY.to));
  const regional = chainage.map((x) => strength * (0.05 + 0.0002 * (x - 110)));
  const residual = chainage.map(() => noise * random.normal());
  const values = chainage.map((_, i) => field[i]! + regional[i]! + residual[i]!);
  const degree = 1 / 111_000;
  const locate = (x: number): readonly [number, number] => {
    const east = easting + 0.28 * x;
    const north = 5_213_400 + 0.96 * x;
    return coordinates === "degrees"
      ? [12 + ((east - 432_000) * degree) / Math.cos(0.82), 47 + (north - 5_213_000) * degree]
      : [east, north];
  };
  const placed = coordinates !== "none";
  const line: SurveyLine = {
    id,
    group: "G1",
    stations: {
      count,
      row: Float64Array.from({length: count}, (_, i) => i + 2),
      chainage,
      offset: new Float64Array(count),
      x: placed ? chainage.map((x) => locate(x)[0]) : undefined,
      y: placed ? chainage.map((x) => locate(x)[1]) : undefined,
      elevation: chainage.map((_, i) => ground[i]! + clearance[i]!),
      clearance,
      ground,
    },
    channels: [{role: "value", observable, values, noise}],
    file: "invented.csv",
    direction: reversed ? -1 : 1,
    omitted: 0,
    locate: placed ? locate : undefined,
    track: undefined,
    notices: [],
  };
  const panels = panelsOn([{from: support[0], to: support[1]}], 1.5);
  const blur = 2.2;
  const density = panels.centre.map((x) => strength * seen(x, blur, BODY.from, BODY.to));
  const over = panels.centre.map((x) => 5 + 0.15 * Math.max(0, from - x, x - to));
  const average = panels.centre.map((x) => strength * seen(x, 1.4 * blur, BODY.from, BODY.to));
  const half = over.map((length) => 0.055 * strength * (length / 5) ** 1.5);
  const profiles = levels.map((setting): LevelProfile => {
    const above = chainage.map(
      (_, i) => setting.height + (setting.kind === "above-ground" ? ground[i]! - boundary : 0),
    );
    const value = chainage.map((x, i) => strength * seen(x, above[i]! + blur, BODY.from, BODY.to));
    const width = chainage.map((_, i) => 0.055 * strength * Math.exp(-above[i]! / 3));
    return {
      setting,
      quantity: BOUNDARY_FIELD.name,
      dimension: BOUNDARY_FIELD.dimension(observable.source),
      height: above,
      value,
      lower: value.map((v, i) => v - width[i]!),
      upper: value.map((v, i) => v + width[i]!),
      averagedOver: above.map((z) => (z === 0 ? 5 : Number.NaN)),
    };
  });
  const misfit = residual.reduce((sum, r) => sum + (r / noise) ** 2, 0);
  const norm = Math.sqrt(density.reduce((sum, f, j) => sum + f * f * panels.width[j]!, 0));
  const multiplier = 0.01 * (Math.sqrt(count) / norm) ** 2;
  const choice: BoundChoice = {
    rule: "discrepancy",
    multiplier,
    bound: basis === "assumed-bound" ? 2 * norm : 1.3 * norm,
    basis,
    active: true,
    reason: "the largest multiplier whose misfit stays at what the noise allows",
    notices: [],
  };
  return {
    line,
    observable,
    conditioned: {
      line,
      height,
      groundHeight: ground.map((z) => z - boundary),
      boundaryLine: undefined,
      datum: 0,
      boundary: "flat, at elevation 40 m",
      channels: [
        {
          channel: line.channels[0],
          response: observable.response(undefined),
          z: height,
          noise,
          noiseFrom: "given",
          noiseLength: 0,
        },
      ],
      direction: undefined,
      notices: [],
    },
    panels,
    curve: diagonalCurve(multiplier, misfit, norm),
    choice,
    estimate: {
      density,
      channels: [{field, regional, residual}],
      readings: count,
      misfit,
      norm,
      degreesOfFreedom: 31.4,
      modes: 88,
    },
    resolution: {length: 5.1, local: over, worst: {length: 6.4, at: from}},
    kernels: [
      {
        at: 110,
        width: 5,
        chainage: Float64Array.of(100, 105, 110, 115, 120),
        value: Float64Array.of(0, 0.1, 0.2, 0.1, 0),
      },
    ],
    gain: undefined,
    noises: [{role: "value", given: noise, record: 1.1 * noise, spectrum: 0.9 * noise, flat: true}],
    averages: {
      value: average,
      lower: average.map((v, j) => v - half[j]!),
      upper: average.map((v, j) => v + half[j]!),
      averagedOver: over,
    },
    levels: profiles,
    strips: strips.map((strip): StripEstimate => {
      const inside = Math.max(0, Math.min(strip.to, BODY.to) - Math.max(strip.from, BODY.from));
      const mean = ((strength * inside) / (strip.to - strip.from)) * 0.97 + 0.01 * strength;
      const margin = 0.06 * strength;
      return {strip, mean, lower: mean - margin, upper: mean + margin, plainMean: 0.96 * mean};
    }),
    trust: {fraction: 0.25, level: 3.2, sensor: 5, stations: 60},
    atBounds:
      basis === "given-bound"
        ? undefined
        : [0.5, 1, 2, 4].map((factor) => ({
            factor,
            bound: 2 * norm * factor,
            strips: strips.map(() => ({value: 0.5 * strength, halfWidth: 0.06 * strength * factor})),
            levels: levels.map(() => 0.05 * strength * factor),
            averages: 0.055 * strength * factor,
          })),
    confidence: 0.95,
    notices,
  };
}

export const doneLine = (options: FixtureOptions = {}): LineOutcome => {
  const study = lineStudy(options);
  const doubtful = study.notices.some((notice) => notice.weight === "doubt");
  return {status: doubtful ? "doubtful" : "done", id: study.line.id, study};
};

export const failedLine = (id: string, status: "failed" | "skipped" = "failed"): LineOutcome => ({
  status,
  id,
  failure: new ModelError(
    "model/station-below-boundary",
    `Station 14 of line ${id} is 0.4 m below the boundary; every station must lie above it. Lower --boundary, or leave the station out.`,
  ),
});

export const RESIDUAL_DOUBT = doubt(
  "fit/residual-not-white",
  "The residual is not white: neighbouring residuals correlate by 0.48. The noise may be larger than given or the sources may lie above the boundary, so the intervals may be too narrow. Raise --noise or check the boundary.",
);

export const GAP_REMARK = remark("survey/gap", "There is a gap of 12 m between rows 88 and 89. Nothing was filled in.");

export function surveyFixture(options: Partial<Survey> = {}): Survey {
  return {
    kind: "lines",
    files: ["harrow-field.csv"],
    axes: [{group: "G1", azimuth: 16.3, origin: [432_100, 5_213_400], system: "EPSG:32633", lines: 3}],
    choices: [
      {role: "line", column: "flight", reason: "recognised"},
      {role: "value", column: "b_down", reason: "asked"},
    ],
    delivered: "EPSG:32633",
    notices: [],
    lineCount: 3,
    grid: undefined,
    lines: () => {
      throw new Error("a product must not walk the survey");
    },
    ...options,
  };
}

export function frameFixture(options: Partial<RunFrame> = {}): RunFrame {
  return {
    survey: surveyFixture(),
    observable: fieldVertical,
    levels: LEVELS,
    quantity: BOUNDARY_FIELD,
    confidence: 0.95,
    ...options,
  };
}

export function settingsFixture(options: Partial<Settings> = {}): Settings {
  return {
    acquisition: {
      columns: new Map([
        ["value", "b_down"],
        ["line", "flight"],
      ]),
      clearance: undefined,
      elevation: undefined,
      sensorOffset: -1.2,
      elevationDatum: undefined,
      groundDatum: undefined,
      geoidOffset: undefined,
      crs: "EPSG:32633",
      outCrs: undefined,
      split: "column",
      channels: [{role: "value", observable: "field-vertical", unit: "nT", noise: 0.4}],
      profiles: "rows",
    },
    fieldDirection: undefined,
    model: {
      boundary: {kind: "elevation", elevation: 40},
      support: [{from: -30, to: 250, group: undefined}],
      panel: undefined,
      regional: 1,
    },
    bound: {
      name: "discrepancy",
      text: "discrepancy",
      choose: () => {
        throw new Error("a product must not choose a bound");
      },
    },
    wanted: {levels: LEVELS, levelQuantity: BOUNDARY_FIELD, strips: STRIPS, confidence: 0.95},
    processing: "daily variation removed by base station; heading corrected",
    ...options,
  };
}

/** One row of a grid, a ridge that wanders with the row; NaN in the corner, as a grid with nodata has. */
export function rowOutcome(index: number, width: number, levels: readonly LevelSetting[] = LEVELS): RowOutcome {
  const band = (height: number): RowBand => {
    const centre = width * (0.4 + 0.15 * Math.sin(index / 19));
    const hole = (j: number): boolean => index + j < width / 4;
    return {
      value: Float64Array.from({length: width}, (_, j) =>
        hole(j) ? Number.NaN : 240e-9 * seen(j, 2 + height, centre - 6, centre + 6),
      ),
      halfWidth: Float64Array.from({length: width}, (_, j) =>
        hole(j) ? Number.NaN : 9e-9 * (1 + 2 * ((j - width / 2) / width) ** 2) * Math.exp(-height / 4),
      ),
    };
  };
  const choice: BoundChoice = {
    rule: "discrepancy",
    multiplier: 2e15,
    bound: 3e-6,
    basis: "assumed-bound",
    active: true,
    reason: "one multiplier for all rows, by the pooled misfit",
    notices: [],
  };
  return {
    status: "done",
    id: `row ${index + 1}`,
    index,
    study: {
      source: band(0),
      levels: levels.map((setting) => ({setting, band: band(setting.height)})),
      stations: width,
      panels: width,
      modes: Number.NaN,
      choice,
      norm: 1.5e-6,
      misfit: width * (1 + 0.05 * Math.sin(index)),
      misfitExpected: width,
      noise: 1e-9,
      noiseLength: 0,
      resolution: 14,
      degreesOfFreedom: 22,
      notices: [],
    },
  };
}
