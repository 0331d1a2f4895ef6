/** What a channel of a survey is, with its unit and its noise turned to SI. */
import {InputError} from "../errors.ts";
import {observableNamed} from "../potential/catalogue.ts";
import type {Observable} from "../potential/observable.ts";
import {DELIVERY_UNIT, type Unit, unitFor} from "../quantities.ts";
import type {ChannelSettings} from "./settings.ts";

export interface ChannelPlan {
  /** `value`, `value.2` … */
  readonly role: string;
  readonly observable: Observable;
  readonly unit: Unit;
  /** Standard deviation, SI. */
  readonly noise: number | "record";
  /** Length over which it is correlated, m; 0: it is white. */
  readonly noiseLength: number;
}

/**
 * One plan a channel; the first is `value`.
 * @param noiseLength of all of them, m
 * @throws {InputError} `channel/none`, `channel/roles`, `observable/unknown`, `unit/unknown`, `unit/wrong-dimension`,
 *   `noise/not-positive`
 */
export function channelPlans(channels: readonly ChannelSettings[], noiseLength = 0): ChannelPlan[] {
  if (channels[0]?.role !== "value")
    throw new InputError("channel/none", "No observable was given for the readings. Give --observable KIND.");
  const roles = channels.map((channel) => channel.role);
  for (const role of roles)
    if (!/^value(\.([2-9]|[1-9]\d+))?$/.test(role) || roles.filter((other) => other === role).length > 1)
      throw new InputError(
        "channel/roles",
        `Channels ${roles.join(", ")} were given; value, value.2, value.3 … once each were needed. Correct the names before "=" in --observable.`,
      );
  return channels.map((channel) => {
    const observable = observableNamed(channel.observable);
    const unit =
      channel.unit === undefined ? DELIVERY_UNIT[observable.dimension] : unitFor(channel.unit, observable.dimension);
    const noise = channel.noise ?? "record";
    if (noise !== "record" && !(noise > 0 && Number.isFinite(noise)))
      throw new InputError(
        "noise/not-positive",
        `The noise of ${channel.role} was given as ${noise} ${unit.symbol}; a standard deviation above 0 was needed. Correct --noise, or give --noise record.`,
      );
    return {role: channel.role, observable, unit, noise: noise === "record" ? noise : noise * unit.factor, noiseLength};
  });
}
