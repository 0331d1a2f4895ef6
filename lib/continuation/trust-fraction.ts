/** The share of the range of the field that an interval may span at the depth to trust; light, since help texts read it. */
import {InputError} from "../errors.ts";
import type {LevelQuantity} from "../potential/level-quantity.ts";

export const DEFAULT_TRUST_FRACTION = 0.25;

/** @throws {InputError} `trust/no-interval` for a quantity without intervals */
export function refuseTrustOf({name, isAmplitude}: LevelQuantity): void {
  if (isAmplitude !== true) return;
  throw new InputError(
    "trust/no-interval",
    `--trust-fraction compares an interval with the field, and an amplitude (--level-observable ${name}) has no interval. Leave --trust-fraction out, or ask for another quantity.`,
  );
}
