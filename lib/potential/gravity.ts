/** The downward attraction of the sources: Re F, positive down. */
import type {Observable} from "./observable.ts";
import {GRAVITY_LAYER} from "./source-law.ts";

export const gravity = {
  name: "gravity",
  dimension: "gravity",
  source: GRAVITY_LAYER,
  summary: "downward component of the anomalous attraction, positive down",
  anomalyLimit: {value: 1e-2, missing: "the normal gravity of the ellipsoid and the free-air or Bouguer reduction"},
  needsDirection: false,
  response: () => ({re: 1, im: 0, order: 0}),
} as const satisfies Observable;
