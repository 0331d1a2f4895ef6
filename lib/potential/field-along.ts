/** The component of the anomalous magnetic field along the line: Re(i F), positive along increasing chainage. */
import type {Observable} from "./observable.ts";
import {MAGNETIC_LAYER} from "./source-law.ts";

export const fieldAlong = {
  name: "field-along",
  dimension: "field",
  source: MAGNETIC_LAYER,
  summary: "component of the anomalous magnetic field along increasing chainage",
  anomalyLimit: {value: 5e-6, missing: "the removal of the reference field and of the daily variation"},
  needsDirection: false,
  response: () => ({re: 0, im: 1, order: 0}),
} as const satisfies Observable;
