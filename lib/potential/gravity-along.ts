/** The attraction along the line: Re(i F), positive along increasing chainage. */
import type {Observable} from "./observable.ts";
import {GRAVITY_LAYER} from "./source-law.ts";

export const gravityAlong = {
  name: "gravity-along",
  dimension: "gravity",
  source: GRAVITY_LAYER,
  summary: "component of the anomalous attraction along increasing chainage",
  anomalyLimit: {value: 1e-2, missing: "the normal gravity of the ellipsoid and the free-air or Bouguer reduction"},
  needsDirection: false,
  response: () => ({re: 0, im: 1, order: 0}),
} as const satisfies Observable;
