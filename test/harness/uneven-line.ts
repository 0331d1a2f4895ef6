/** Long lines with uneven heights and spacings, and what they read of an invented source. */
import {seededRandom} from "../../lib/numeric/random.ts";
import {multipoleOperator} from "../../lib/operators/multipole.ts";
import {type Panels, panelsOn} from "../../lib/operators/panels.ts";
import {type Readings, readingsOf} from "../../lib/operators/readings.ts";
import type {Response} from "../../lib/potential/kernel.ts";

const HEIGHT = 10;
export const FIELD: Response = {re: 1, im: 0, order: 0};
export const GRADIENT: Response = {re: 1, im: 0, order: 1};
export const TOTAL_FIELD: Response = {re: 0.3, im: 0.8, order: 0};

export interface UnevenLine {
  readonly stations: number;
  /** Heights sway by this share about `HEIGHT`. */
  readonly sway: number;
  readonly responses?: readonly Response[];
  /** Leave 15 % of the line without sources. */
  readonly gap?: boolean;
  /** m; absent: white noise. */
  readonly noiseLength?: number;
}

/** Stations 5 ± 1.5 m apart, not sorted where neighbours change places. */
export function unevenLine({stations, sway, responses = [FIELD], gap = false, noiseLength = 0}: UnevenLine): {
  readonly readings: Readings;
  readonly panels: Panels;
  readonly values: Float64Array;
} {
  const random = seededRandom(20261201);
  const x = Float64Array.from({length: stations}, (_, i) => 5 * i + 1.5 * random.normal());
  const z = x.map((at) => HEIGHT * (1 + sway * Math.sin(at / 170)));
  const end = 5 * stations + 60;
  const support = gap
    ? [
        {from: -60, to: 0.4 * end},
        {from: 0.55 * end, to: end},
      ]
    : [{from: -60, to: end}];
  const panels = panelsOn(support, 4 * (1 - sway));
  const readings = readingsOf(
    responses.map((response) => ({x, z, response, noise: response.order === 1 ? 0.005 : 0.05, noiseLength})),
  );
  const density = panels.centre.map((at) => Math.sin(at / 31) + (Math.floor(at / 110) % 3 === 0 ? 2 : 0));
  const values = multipoleOperator(readings, panels).applyInto(new Float64Array(readings.count), density);
  for (let i = 0; i < values.length; ++i) values[i] += readings.noise[i] * random.normal() + 3 + 1e-4 * readings.x[i];
  return {readings, panels, values};
}
