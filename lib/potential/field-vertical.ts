/** The downward component of the anomalous magnetic field: Re F, positive down. */
import type {Observable} from "./observable.ts";
import {MAGNETIC_LAYER} from "./source-law.ts";

export const fieldVertical = {
  name: "field-vertical",
  dimension: "field",
  source: MAGNETIC_LAYER,
  summary: "downward component of the anomalous magnetic field, positive down",
  anomalyLimit: {value: 5e-6, missing: "the removal of the reference field and of the daily variation"},
  needsDirection: false,
  response: () => ({re: 1, im: 0, order: 0}),
} as const satisfies Observable;
