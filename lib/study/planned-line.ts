/** A line that was never flown: level stations at even distances, which the walk of a real line can be put to. */
import type {Observable} from "../potential/observable.ts";
import type {Channel, SurveyLine} from "../survey/line.ts";

/** One sensor of the plan. */
export interface PlannedChannel {
  readonly observable: Observable;
  /** SI. */
  readonly noise: number;
  /** Above the first sensor, m. */
  readonly above: number;
}

/**
 * Stations from 0 to `length`, as near to `spacing` as an even division allows.
 * @param channels the first is at `clearance`
 */
export function plannedLine(
  length: number,
  spacing: number,
  clearance: number,
  channels: readonly PlannedChannel[],
): SurveyLine {
  const count = Math.max(2, Math.round(length / spacing) + 1);
  const all = (value: number): Float64Array => new Float64Array(count).fill(value);
  return {
    id: "plan",
    file: "plan",
    group: "G1",
    stations: {
      count,
      row: Float64Array.from({length: count}, (_, i) => i + 1),
      chainage: Float64Array.from({length: count}, (_, i) => (length * i) / (count - 1)),
      offset: all(0),
      x: undefined,
      y: undefined,
      elevation: undefined,
      clearance: all(clearance),
      ground: undefined,
    },
    channels: channels.map(
      ({observable, noise, above}, k): Channel => ({
        role: k === 0 ? "value" : `value.${k + 1}`,
        observable,
        noise,
        values: all(0),
        ...(above === 0 ? {} : {above: all(above)}),
      }),
    ),
    direction: 1,
    omitted: 0,
    locate: undefined,
    track: undefined,
    notices: [],
  };
}
