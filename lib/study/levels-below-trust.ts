/** Levels that were asked for and lie below the depth to trust. */
import {type LevelSetting, levelLabel} from "../continuation/level-profile.ts";
import {levelHeights} from "../continuation/levels.ts";
import type {Trust} from "../continuation/trust.ts";
import {type Notice, remark} from "../notice.ts";
import type {ConditionedLine} from "../survey/conditioned.ts";

/** A level above the ground is below it where it is so under the greater part of the stations. */
export function remarksOfLevels(
  settings: readonly LevelSetting[],
  conditioned: ConditionedLine,
  trustOf: () => Trust | undefined,
): Notice[] {
  // Without levels there is nothing to weigh, and the depth to trust takes its time.
  if (settings.length === 0) return [];
  const trust = trustOf();
  if (trust === undefined) return [];
  const {level, sensor} = trust;
  const below = settings.filter((setting) => {
    const heights = Float64Array.from(levelHeights(setting, conditioned)).sort();
    const height = heights[heights.length >> 1];
    return Number.isNaN(level) ? height <= sensor : height < level;
  });
  if (below.length === 0) return [];
  const which = `${below.length > 1 ? "levels" : "level"} ${below.map(levelLabel).join(", ")}`;
  const where = Number.isNaN(level)
    ? `the interval is wide even at the lowest sensor, ${sensor.toPrecision(3)} m above the boundary`
    : `${level.toPrecision(3)} m above the boundary`;
  return [
    remark(
      "level/below-trust",
      `${which} ${below.length > 1 ? "lie" : "lies"} below the depth to trust (${where}): read ${below.length > 1 ? "them" : "it"} as bound, not as data.`,
    ),
  ];
}
