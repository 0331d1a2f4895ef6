/**
 * The anomaly of the total field: the sources' field along the direction of the Earth's, Re(β i e^(−iI′) F).
 * Right while the anomaly is small against the Earth's field.
 * Source: Blakely, Potential Theory in Gravity and Magnetic Applications (1995), §8.1 and §9.3 (from memory).
 */
import type {EffectiveDirection} from "./effective-direction.ts";
import type {Response} from "./kernel.ts";
import type {Observable} from "./observable.ts";
import {MAGNETIC_LAYER} from "./source-law.ts";

function alongTheEarthsField(direction: EffectiveDirection | undefined): Response {
  if (direction === undefined) throw new Error("a total-field anomaly needs the direction of the field");
  const angle = (direction.inclination * Math.PI) / 180;
  // i e^(−iI′) = sin I′ + i cos I′
  return {re: direction.beta * Math.sin(angle), im: direction.beta * Math.cos(angle), order: 0};
}

export const totalFieldAnomaly = {
  name: "total-field-anomaly",
  dimension: "field",
  source: MAGNETIC_LAYER,
  summary: "total field less that of the Earth; needs the direction of the Earth's field",
  anomalyLimit: {value: 5e-6, missing: "the removal of the reference field and of the daily variation"},
  needsDirection: true,
  response: alongTheEarthsField,
} as const satisfies Observable;
