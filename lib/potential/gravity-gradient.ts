/** How fast the downward attraction grows downward: Re(−i F′); lower sensor less upper over their distance (common practice, no source). */
import type {Observable} from "./observable.ts";
import {GRAVITY_LAYER} from "./source-law.ts";

export const gravityGradient = {
  name: "gravity-gradient",
  dimension: "gravity-gradient",
  source: GRAVITY_LAYER,
  summary: "rate of change of the downward attraction, downward",
  anomalyLimit: {value: 3e-6, missing: "the normal gradient of the Earth, 3,086 E"},
  needsDirection: false,
  response: () => ({re: 0, im: -1, order: 1}),
} as const satisfies Observable;
