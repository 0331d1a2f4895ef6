/** The field on the levels that were asked for, at every station, with its interval. */
import {InputError, ModelError} from "../errors.ts";
import {boundaryAt} from "../geometry/boundary-line.ts";
import {lengthOf} from "../geometry/interval.ts";
import type {IntervalSolver} from "../inverse/intervals.ts";
import type {Resolution} from "../inverse/nouns.ts";
import type {Continuum} from "../operators/continuum.ts";
import type {Panels} from "../operators/panels.ts";
import type {EffectiveDirection} from "../potential/effective-direction.ts";
import type {Response} from "../potential/kernel.ts";
import type {LevelQuantity} from "../potential/level-quantity.ts";
import type {SourceLaw} from "../potential/observable.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {levelRowInto} from "./field-on-level.ts";
import {levelFunctional} from "./level-functional.ts";
import {type LevelProfile, type LevelSetting, levelLabel} from "./level-profile.ts";

/** What a level is computed from. */
export interface LevelQuestion {
  readonly conditioned: ConditionedLine;
  readonly panels: Panels;
  readonly density: Float64Array;
  readonly continuum: Continuum;
  readonly solver: IntervalSolver;
  readonly resolution: Resolution;
  readonly quantity: LevelQuantity;
}

/**
 * Value: the field of the one source. Interval: of the field at that point; on a flat boundary itself, of the average of
 * f over at least the resolution length, since a point of f is bounded by no norm. Off the support f is zero. An
 * amplitude, and the limit on a boundary that slopes, have no interval.
 *
 * @throws {InputError} `level/wrong-observable`, `direction/not-given`
 * @throws {ModelError} `level/no-ground` for a level above a ground that is not known, `level/below-boundary`, `level/on-boundary`
 */
export function continueField(setting: LevelSetting, question: LevelQuestion): LevelProfile {
  const {conditioned, panels, density, continuum, solver, quantity} = question;
  const {boundary} = continuum;
  const {observable} = conditioned.channels[0].channel;
  const {chainage} = conditioned.line.stations;
  const height = levelHeights(setting, conditioned);
  const responses = responsesOf(quantity, observable.source.method, conditioned.direction);
  const row = new Float64Array(panels.count);
  const value = new Float64Array(chainage.length);
  const lower = new Float64Array(chainage.length).fill(Number.NaN);
  const upper = new Float64Array(chainage.length).fill(Number.NaN);
  const averagedOver = new Float64Array(chainage.length).fill(Number.NaN);
  for (let i = 0; i < chainage.length; ++i) {
    const x = chainage[i];
    const y = boundaryAt(boundary, x);
    value[i] = lengthOfParts(
      responses.map((response) => {
        levelRowInto(row, 0, panels, x, y, height[i], response);
        let sum = 0;
        for (let j = 0; j < panels.count; ++j) sum += row[j] * density[j];
        return sum;
      }),
    );
    const [response] = responses;
    if (responses.length > 1 || (height[i] === 0 && boundary !== undefined)) continue;
    const asked = levelFunctional(question, x, height[i], response);
    if (asked?.stretch !== undefined) averagedOver[i] = lengthOf(asked.stretch);
    const answer = asked === undefined ? {value: 0, halfWidth: 0} : solver.interval(asked.functional);
    lower[i] = answer.value - answer.halfWidth;
    upper[i] = answer.value + answer.halfWidth;
  }
  return {
    setting,
    quantity: quantity.name,
    dimension: quantity.dimension(observable.source),
    height,
    value,
    lower,
    upper,
    averagedOver,
  };
}

const lengthOfParts = (parts: readonly number[]): number => (parts.length === 1 ? parts[0] : Math.hypot(...parts));

/** @throws {InputError} `level/wrong-observable`, `direction/not-given` */
export function responsesOf(
  quantity: LevelQuantity,
  method: SourceLaw["method"],
  direction: EffectiveDirection | undefined,
): readonly Response[] {
  if (quantity.method !== undefined && quantity.method !== method)
    throw new InputError(
      "level/wrong-observable",
      `--level-observable ${quantity.name} is ${quantity.method}, but the readings are ${method}. Ask for a ${method} one.`,
    );
  if (quantity.needsDirection && direction === undefined)
    throw new InputError(
      "direction/not-given",
      `--level-observable ${quantity.name} needs the direction of the Earth's field. Give --inclination and --declination, or --date.`,
    );
  return quantity.responses(direction);
}

/** Height of a level above the boundary at every station, m. */
export function levelHeights(setting: LevelSetting, conditioned: ConditionedLine): Float64Array {
  const {line, groundHeight} = conditioned;
  if (setting.kind === "above-boundary") {
    if (!(setting.height >= 0))
      throw new ModelError(
        "level/below-boundary",
        `--level ${levelLabel(setting)} lies below the boundary, where the sources are. Ask for a level of 0 or more, or lower the boundary.`,
      );
    return new Float64Array(line.stations.count).fill(setting.height);
  }
  if (groundHeight === undefined)
    throw new ModelError(
      "level/no-ground",
      `--level ${levelLabel(setting)} needs the ground under line ${line.id}, which is not known. Give a ground column or a clearance, or a level in metres above the boundary.`,
    );
  return groundHeight.map((ground, i) => {
    const height = ground + setting.height;
    if (!(height >= 0))
      throw new ModelError(
        "level/below-boundary",
        `--level ${levelLabel(setting)} lies ${(-height).toPrecision(3)} m below the boundary at row ${line.stations.row[i]} of line ${line.id}. Ask for a higher level or lower the boundary.`,
      );
    return height;
  });
}
