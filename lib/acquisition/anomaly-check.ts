/**
 * Refuses readings that are no anomalies: a median beyond the observable's limit.
 * The median itself is not needed, only the side of the limit it lies on; counting keeps
 * memory at three numbers, however long the survey.
 */
import {InputError, type Place} from "../errors.ts";
import type {ChannelPlan} from "./channel-plan.ts";

export interface AnomalyCheck {
  /** @param values in the unit of the channel */
  add(values: Float64Array): void;
  /** @throws {InputError} `value/not-an-anomaly` */
  finish(place: Place): void;
}

export function anomalyCheck(channel: ChannelPlan): AnomalyCheck {
  const limit = channel.observable.anomalyLimit.value / channel.unit.factor;
  let count = 0;
  let above = 0;
  let below = 0;
  return {
    add(values) {
      count += values.length;
      for (let i = 0; i < values.length; ++i) {
        const value = values[i]!;
        if (value > limit) ++above;
        else if (value < -limit) ++below;
      }
    },
    finish(place) {
      if (!(2 * Math.max(above, below) > count)) return;
      throw new InputError(
        "value/not-an-anomaly",
        `More than half of the readings (${Math.max(above, below)} of ${count}) lie beyond ${above > below ? "" : "−"}${Number(limit.toPrecision(12))} ${channel.unit.symbol}: these are whole readings of ${channel.observable.name}, and anomalies were needed. Missing is ${channel.observable.anomalyLimit.missing}. Reduce the readings first, or correct --unit or the column of ${channel.role}.`,
        {place},
      );
    },
  };
}
