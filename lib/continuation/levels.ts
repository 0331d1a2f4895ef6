/** The field on the levels that were asked for, at every station, with its interval. */
import {ModelError} from "../errors.ts";
import type {Support} from "../geometry/interval.ts";
import {lengthOf} from "../geometry/interval.ts";
import {stretchAt} from "../inverse/averages.ts";
import type {IntervalSolver} from "../inverse/intervals.ts";
import type {Resolution} from "../inverse/nouns.ts";
import {fieldAt, meanOver} from "../operators/functional.ts";
import type {Panels} from "../operators/panels.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";
import {levelRowInto} from "./field-on-level.ts";
import {type LevelProfile, type LevelSetting, levelLabel} from "./level-profile.ts";

/**
 * Value: the field of the one source. Interval: of the field at that point; on the boundary itself, of the average of
 * f over at least the resolution length, since a point of f is bounded by no norm. Off the support f is zero.
 *
 * @throws {ModelError} `level/no-ground` for a level above a ground that is not known, `level/below-boundary`
 */
export function continueField(
  setting: LevelSetting,
  conditioned: ConditionedLine,
  panels: Panels,
  density: Float64Array,
  solver: IntervalSolver,
  resolution: Resolution,
  support: Support,
): LevelProfile {
  const {chainage} = conditioned.line.stations;
  const height = levelHeights(setting, conditioned);
  const row = new Float64Array(panels.count);
  const value = new Float64Array(chainage.length);
  const lower = new Float64Array(chainage.length);
  const upper = new Float64Array(chainage.length);
  const averagedOver = new Float64Array(chainage.length).fill(Number.NaN);
  for (let i = 0; i < chainage.length; ++i) {
    const x = chainage[i];
    const z = height[i];
    levelRowInto(row, 0, panels, x, z);
    for (let j = 0; j < panels.count; ++j) value[i] += row[j] * density[j];
    const stretch = z === 0 ? stretchAt(panels, resolution, x) : undefined;
    if (z === 0 && stretch === undefined) continue;
    const answer = solver.interval(stretch === undefined ? fieldAt(x, z, support) : meanOver(stretch, support));
    lower[i] = answer.value - answer.halfWidth;
    upper[i] = answer.value + answer.halfWidth;
    if (stretch !== undefined) averagedOver[i] = lengthOf(stretch);
  }
  return {setting, height, value, lower, upper, averagedOver};
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
