/**
 * The rate of change of another observable downward, Re(−i α F′): lower sensor less upper over their distance, small
 * against their height (common practice, no source).
 */
import type {Observable} from "./observable.ts";

export const downwardGradient = (of: Observable): Observable => ({
  name: `${of.name}-gradient`,
  dimension: "field-gradient",
  source: of.source,
  summary: `rate of change of ${of.name} downward: lower sensor less upper over their distance`,
  anomalyLimit: {value: 1e-6, missing: "the division by the distance of the sensors, or their calibration"},
  needsDirection: of.needsDirection,
  response(direction) {
    const {re, im} = of.response(direction);
    return {re: im, im: -re, order: 1};
  },
});
