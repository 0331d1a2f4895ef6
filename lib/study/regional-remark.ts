/** Where the regional, which nothing bounds, makes the intervals wide: said with the figures. */
import {levelFunctional, median, spreadStations} from "../continuation/level-functional.ts";
import {type LevelProfile, levelLabel} from "../continuation/level-profile.ts";
import {type LevelQuestion, levelHeights} from "../continuation/levels.ts";
import {type Notice, remark} from "../notice.ts";
import {foldedNormalQuantile} from "../numeric/normal.ts";
import {DELIVERY_UNIT} from "../quantities.ts";

/** Stations at which the interval at the sensor is taken. */
const STATIONS = 9;
/** An interval this many times that of one reading is worth a remark. A heuristic. */
const WIDER = 2;

/**
 * Where a sensor stood, its own reading says what the field there is to z σ, whatever the bound, if there is no
 * regional. What the interval there is wider than that, the regional makes it.
 *
 * @param degree of the regional, −1 for none
 * @param levels that were answered
 */
export function remarksOfRegional(
  question: LevelQuestion,
  degree: number,
  confidence: number,
  levels: readonly LevelProfile[],
): Notice[] {
  if (degree < 0) return [];
  const {conditioned, continuum, solver} = question;
  const {channel, noise, response} = conditioned.channels[0];
  const {chainage} = conditioned.line.stations;
  const asked = spreadStations(chainage, continuum, STATIONS);
  if (asked.length === 0) return [];
  const alone = foldedNormalQuantile(0, confidence) * noise;
  const found = median(
    asked.map((i) => {
      const {functional} = levelFunctional(question, chainage[i], conditioned.height[i], response)!;
      return solver.interval(functional).halfWidth;
    }),
  );
  if (!(found > WIDER * alone)) return [];
  const text = (si: number, dimension = channel.observable.dimension): string =>
    `${(si / DELIVERY_UNIT[dimension].factor).toPrecision(3)} ${DELIVERY_UNIT[dimension].symbol}`;
  const sensor = conditioned.height.reduce((least, height) => Math.min(least, height), Infinity);
  const high = levels
    .filter(({setting}) => levelHeights(setting, conditioned).every((height) => height >= sensor))
    .flatMap(({setting, dimension, lower, upper}) => {
      const half = median([...upper.keys()].map((i) => 0.5 * (upper[i] - lower[i])));
      return Number.isNaN(half) ? [] : [`${text(half, dimension)} on level ${levelLabel(setting)}`];
    });
  const where = high.length === 0 ? "" : ` Likewise ${high.join(", ")}.`;
  return [
    remark(
      "regional/widens",
      `The regional (--regional ${degree}) makes intervals wide: at the height of the sensor half of one is ${text(found)} (median of ${asked.length} stations), where without a regional it is ${text(alone)} at most, by the reading alone. A regional may be as large as it likes, and broad sources can hardly be told apart from it.${where} If the readings are free of a regional, give --regional none; or else a longer line, or a narrower --support.`,
    ),
  ];
}
